#!/bin/sh
# Fetches real text that Debian packages carry and lays it out as corpora and lists of known
# phrases. Nothing is installed; packages are downloaded, unpacked and thrown away.
#
#   configs/fetch-real-text.sh [FOLDER [PART...]]
#
# FOLDER is runs/real-text unless named. A part that is there already is left as it is. The parts:
#
#   kernel        kernel/*.txt                   the kernel's documentation, a file a folder (25 MB)
#   dictionaries  dictionaries/{gcide,foldoc}.jsonl   two dictionaries, an entry a line (54 MB)
#                 dictionaries/{gcide,foldoc}-headwords.txt
#   git           git/text/*.txt                 git's manuals (3 MB)
#                 git/glossary.txt               the terms of its glossary
#   lists         lists/wordnet-nouns.txt        WordNet's nouns of two words or more
#                 lists/web2a.txt                the compounds of Webster's Second International
#   languages     languages/{en,de,fr,vi,zh}.txt an office program's help in five languages (25 MB)
#   manuals       manuals/*.txt                  more English, for benchmarks (36 MB; not fetched
#                                                unless named)
set -eu

here=$(CDPATH='' cd -- "$(dirname -- "$0")" && pwd)
folder=${1:-runs/real-text}
[ $# -gt 0 ] && shift
[ $# -gt 0 ] || set -- kernel dictionaries git lists languages

packages_of() {
  case $1 in
    kernel) echo linux-doc-6.1 ;;
    dictionaries) echo dict-gcide dict-foldoc ;;
    git) echo git-doc ;;
    lists) echo wordnet-base miscfiles ;;
    languages)
      echo libreoffice-help-en-us libreoffice-help-de libreoffice-help-fr libreoffice-help-vi \
        libreoffice-help-zh-cn ;;
    manuals)
      echo python3.11-doc postgresql-doc-15 perl-doc wordnet-base ;;
    *)
      echo "fetch-real-text.sh: there is no part \"$1\"; the parts are kernel, dictionaries, git," \
        "lists, languages and manuals" >&2
      return 2 ;;
  esac
}

for part in "$@"; do packages_of "$part" >/dev/null; done
for program in apt-get dpkg-deb python3; do
  if ! command -v "$program" >/dev/null; then
    echo "fetch-real-text.sh: this needs $program; on Debian: apt-get install apt dpkg python3" >&2
    exit 1
  fi
done

mkdir -p "$folder"
folder=$(CDPATH='' cd -- "$folder" && pwd)
scratch=$(mktemp -d)
trap 'rm -rf "$scratch"' EXIT
trap 'exit 130' INT TERM
# apt's own user may be unable to write to the scratch folder; root may download as itself.
chmod 755 "$scratch"

for part in "$@"; do
  if [ -d "$folder/$part" ]; then
    echo "$part: already in $folder/$part"
    continue
  fi
  packages=$(packages_of "$part")
  echo "$part: downloading $packages"
  # shellcheck disable=SC2086  # one word a package
  if [ "$(id -u)" = 0 ] && ! apt-cache show $packages >/dev/null 2>&1; then
    apt-get update -qq
  fi
  mkdir -p "$scratch/$part/packages" "$scratch/$part/tree"
  # shellcheck disable=SC2086
  if ! (cd "$scratch/$part/packages" && apt-get -qq -o APT::Sandbox::User=root download $packages)
  then
    echo "fetch-real-text.sh: apt-get could not download $packages;" \
      "run \"apt-get update\" as root and try again" >&2
    exit 1
  fi
  for package in "$scratch/$part/packages"/*.deb; do
    dpkg-deb -x "$package" "$scratch/$part/tree"
  done
  # The part appears under its name only when it is whole.
  rm -rf "$folder/$part.partial"
  python3 -B "$here/lay_out_real_text.py" "$part" "$scratch/$part/tree" "$folder/$part.partial"
  mv "$folder/$part.partial" "$folder/$part"
  rm -rf "${scratch:?}/$part"
  du -sh "$folder/$part" | while read -r size _; do echo "$part: $size in $folder/$part"; done
done
