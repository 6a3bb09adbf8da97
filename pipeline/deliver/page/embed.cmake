# cmake -DFOLDER=... -DPAGE=page.html -DSTYLES=a.css;b.css -DSCRIPTS=a.js;b.js -DNAME=Page
#       -DOUTPUT=page_template.cc -P embed.cmake
# Puts style and script into PAGE, allows exactly these two by their SHA-256 in the page's
# content security policy (W3C Content Security Policy Level 3, section 2.3.1), and writes the text
# before and behind the data as C++ constants.

# The digest as the policy wants it: base64 (RFC 4648) of its 32 bytes.
function(policy_hash text result)
  set(alphabet "ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/")
  string(SHA256 digest "${text}")
  set(encoded "")
  # Three hexadecimal digits are two characters of base64; 64 digits leave one, which is padded.
  foreach(start RANGE 0 63 3)
    string(SUBSTRING "${digest}00" ${start} 3 digits)
    math(EXPR high "0x${digits} >> 6")
    math(EXPR low "0x${digits} & 63")
    string(SUBSTRING "${alphabet}" ${high} 1 high)
    string(SUBSTRING "${alphabet}" ${low} 1 low)
    string(APPEND encoded "${high}${low}")
  endforeach()
  string(SUBSTRING "${encoded}" 0 43 encoded)
  set(${result} "'sha256-${encoded}='" PARENT_SCOPE)
endfunction()

file(READ ${FOLDER}/${PAGE} page)
set(style "")
foreach(name IN LISTS STYLES)
  file(READ ${FOLDER}/${name} part)
  string(APPEND style "${part}")
endforeach()
set(script "\"use strict\";\n")
foreach(name IN LISTS SCRIPTS)
  file(READ ${FOLDER}/${name} part)
  string(APPEND script "${part}")
endforeach()
foreach(text IN ITEMS "${style}" "${script}")
  if(text MATCHES "</(style|script)" OR text MATCHES "<!--")
    message(FATAL_ERROR "a style or a script of the page holds ${CMAKE_MATCH_0}, "
                        "which would end or change its element; write it in another way")
  endif()
endforeach()

policy_hash("${style}" style_hash)
policy_hash("${script}" script_hash)
string(CONCAT policy "default-src 'none'; style-src ${style_hash}; script-src ${script_hash}; "
       "base-uri 'none'; form-action 'none'")
string(REPLACE "@POLICY@" "${policy}" page "${page}")
string(REPLACE "@STYLE@" "${style}" page "${page}")
string(REPLACE "@SCRIPT@" "${script}" page "${page}")

string(FIND "${page}" "@DATA@" cut)
string(FIND "${page}" ")page\"" delimiter)
if(cut EQUAL -1 OR NOT delimiter EQUAL -1)
  message(FATAL_ERROR "${PAGE} must hold @DATA@, and no file of the page may hold )page\"")
endif()
string(SUBSTRING "${page}" 0 ${cut} head)
math(EXPR cut "${cut} + 6")
string(SUBSTRING "${page}" ${cut} -1 tail)
file(WRITE ${OUTPUT} "#include \"deliver/page_template.h\"

namespace phraseweld {

const std::string_view k${NAME}Head = R\"page(${head})page\";
const std::string_view k${NAME}Tail = R\"page(${tail})page\";

}  // namespace phraseweld
")
