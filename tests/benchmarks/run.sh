#!/bin/sh
# Measures the program on this machine and prints a table of ratios; nothing passes or fails by it.
#
#   tests/benchmarks/run.sh [SECTION...]      sections: whole threads sizes memory languages foresight
#
# It builds a release, fetches real text that Debian packages carry, makes the rest, and writes
# every single time to tests/benchmarks/results/. With nothing else running on the machine it takes
# some 15 minutes on two cores and 5 GB of disk. Settings, as environment variables:
#
#   BENCH_WORK           where builds, corpora and runs go     (tests/benchmarks/work)
#   BENCH_REPEATS        alternating runs of each command      (5)
#   BENCH_BASE_SIZE      bytes of the smallest of four sizes, 1x 4x 16x 64x  (16777216)
#   BENCH_MEMORY_SIZE    bytes of the text for limits of memory  (268435456; 10 GiB is 10737418240)
#   BENCH_MEMORY_REPEATS alternating runs for limits of memory   (as BENCH_REPEATS)
set -eu

here=$(CDPATH='' cd -- "$(dirname -- "$0")" && pwd)
source=$(CDPATH='' cd -- "$here/../.." && pwd)
work=${BENCH_WORK:-$here/work}
repeats=${BENCH_REPEATS:-5}
mkdir -p "$work"
work=$(CDPATH='' cd -- "$work" && pwd)

cmake -S "$source" -B "$work/build" -G Ninja -DCMAKE_BUILD_TYPE=Release -DPHRASEWELD_TESTS=OFF \
  -DPHRASEWELD_BENCHMARKS=ON >"$work/cmake.log" || { cat "$work/cmake.log" >&2; exit 1; }
ninja -C "$work/build" phraseweld corpus_maker >"$work/ninja.log" ||
  { cat "$work/ninja.log" >&2; exit 1; }

"$source/configs/fetch-real-text.sh" "$work/text" kernel dictionaries git languages manuals

duckdb=
if command -v npm >/dev/null; then
  mkdir -p "$work/duckdb"
  if [ ! -d "$work/duckdb/node_modules/@duckdb/node-api" ]; then
    (cd "$work/duckdb" && npm init -y >/dev/null &&
      npm install --no-audit --no-fund --silent @duckdb/node-api) || true
  fi
  [ -d "$work/duckdb/node_modules/@duckdb/node-api" ] && duckdb=$work/duckdb
fi
[ -n "$duckdb" ] || echo "run.sh: DuckDB could not be installed with npm; going on without it" >&2

exec python3 -B "$here/measure.py" --program "$work/build/phraseweld" \
  --maker "$work/build/tests/benchmarks/corpus_maker" --text "$work/text" --work "$work" \
  --duckdb "$duckdb" --results "$here/results" --repeats "$repeats" \
  --memory-repeats "${BENCH_MEMORY_REPEATS:-$repeats}" \
  --base-size "${BENCH_BASE_SIZE:-16777216}" --memory-size "${BENCH_MEMORY_SIZE:-268435456}" "$@"
