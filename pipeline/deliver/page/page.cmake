# Embeds the files of the report page and of the comparison's page in the `deliver` room.
set(page_folder ${CMAKE_CURRENT_LIST_DIR})

# embed_page(NAME PAGE OUTPUT STYLES ... SCRIPTS ...): styles and scripts in this order.
function(embed_page name page output)
  cmake_parse_arguments(embed "" "" "STYLES;SCRIPTS" ${ARGN})
  set(template ${PROJECT_BINARY_DIR}/generated/${output})
  list(TRANSFORM embed_STYLES PREPEND ${page_folder}/ OUTPUT_VARIABLE style_paths)
  list(TRANSFORM embed_SCRIPTS PREPEND ${page_folder}/ OUTPUT_VARIABLE script_paths)
  add_custom_command(
    OUTPUT ${template}
    COMMAND ${CMAKE_COMMAND} "-DFOLDER=${page_folder}" "-DPAGE=${page}"
            "-DSTYLES=${embed_STYLES}" "-DSCRIPTS=${embed_SCRIPTS}" "-DNAME=${name}"
            "-DOUTPUT=${template}" -P ${page_folder}/embed.cmake
    DEPENDS ${style_paths} ${script_paths} ${page_folder}/${page} ${page_folder}/embed.cmake
    VERBATIM)
  target_sources(phraseweld_deliver PRIVATE ${template})
endfunction()

embed_page(Page page.html page_template.cc
           STYLES page.css report.css
           SCRIPTS dom.js model.js rulings.js ruling_panel.js overview.js plot.js table.js detail.js
                   page.js)
embed_page(ComparePage compare.html compare_page_template.cc
           STYLES page.css compare.css
           SCRIPTS compare.js)
