#!/bin/sh
# Fetches the texts and the lists, then compares. usage: run.sh PHRASEWELD FOLDER PYTHON
set -eu
here=$(CDPATH='' cd -- "$(dirname -- "$0")" && pwd)
"$here/../../configs/fetch-real-text.sh" "$2" dictionaries git lists
exec "$3" -B "$here/outside_check.py" "$1" "$2"
