#!/bin/sh
# 24 MB of made text, run in memory and on disk: every planted phrase counted exactly.
# usage: planted.sh CORPUS_MAKER PHRASEWELD PYTHON
set -eu
here=$(CDPATH='' cd -- "$(dirname -- "$0")" && pwd)
work=$(mktemp -d)
trap 'rm -rf "$work"' EXIT
"$1" --bytes=24MiB --text="$work/corpus.txt" --planted="$work/planted.jsonl"
cat >"$work/job.yaml" <<EOF
job: planted
corpus: {files: ["$work/corpus.txt"], layout: lines}
words: {function_words: english}
passes:
  - {name: pairs, accept: {occurrences: 8, documents: 3, pmi: 5.0}}
  - {name: longer, repeat: 4, accept: {occurrences: 5, documents: 3, pmi: 4.0}}
deliver: {report: false}
EOF
for memory in "2 GiB" "160 MiB"; do
  "$2" run "$work/job.yaml" --quiet --fresh --set run_folder="$work/run" --set limits.memory="$memory" >/dev/null
  "$3" -B "$here/check_planted.py" "$work/run" "$work/planted.jsonl"
done
