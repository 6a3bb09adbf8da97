#!/usr/bin/env bash
# All tests: installs what is missing, builds, and runs
#   1. every test of the release build,
#   2. the tests of the step code and of whole runs under AddressSanitizer and UndefinedBehaviorSanitizer,
#   3. the tests that use threads under ThreadSanitizer.
# The last line says how many passed and failed.
set -uo pipefail
top=$(cd "$(dirname "$0")/.." && pwd)
cd "$top"
. tests/packages.sh
install_missing "${program_packages[@]}" "${test_packages[@]}" || exit 1

passed=0
failed=0
# run_tests FOLDER CTEST-OPTION...: counts what ctest says.
run_tests() {
  local folder=$1 out
  shift
  out=$(mktemp)
  ctest --test-dir "$folder" --output-on-failure --timeout 1200 --parallel 2 "$@" | tee "$out"
  local ok bad
  ok=$(grep -cE '^ *[0-9]+/[0-9]+ Test .*Passed' "$out")
  bad=$(grep -E '^ *[0-9]+/[0-9]+ Test ' "$out" | grep -cvE 'Passed')
  passed=$((passed + ok))
  failed=$((failed + bad))
  [ "$ok" -gt 0 ] || failed=$((failed + 1))
  rm -f "$out"
}

echo "== packages of the page's tests"
if ! (cd tests/page && npm ci --no-audit --no-fund --loglevel=error); then
  echo "npm could not install the page's test packages" >&2
  failed=$((failed + 1))
fi

echo "== release build, warnings are errors"
build_targets=(all)
if build_program build/test -DCMAKE_BUILD_TYPE=Release -DPHRASEWELD_WERROR=ON \
     -DPHRASEWELD_BENCHMARKS=ON -DPHRASEWELD_UNITY=ON; then
  run_tests build/test
else
  failed=$((failed + 1))
fi

echo "== address and undefined behaviour sanitizers"
build_targets=(base_test files_test read_test words_test score_test run_test agreement_test)
if build_program build/asan -DCMAKE_BUILD_TYPE=RelWithDebInfo -DCMAKE_CXX_FLAGS_RELWITHDEBINFO=-O1 \
     -DPHRASEWELD_SANITIZE=address,undefined -DPHRASEWELD_UNITY=ON; then
  # Sweeps over every string of a kind are for the fast build.
  GTEST_FILTER='-PathsAgree.OnEvery*' PHRASEWELD_AGREEMENT_ROUNDS=300 PHRASEWELD_AGREEMENT_SEED=5001 \
    run_tests build/asan -R '^(base|files|read|words|score|run|agreement)$'
else
  failed=$((failed + 1))
fi

echo "== thread sanitizer"
# Whole runs, on the standard library's threads in place of oneTBB's (tests/support/threads).
build_targets=(words_test agreement_test)
if build_program build/tsan -DCMAKE_BUILD_TYPE=RelWithDebInfo -DCMAKE_CXX_FLAGS_RELWITHDEBINFO=-O1 \
     -DPHRASEWELD_SANITIZE=thread -DPHRASEWELD_UNITY=ON; then
  GTEST_FILTER='*IdsDepend*:Vocabulary*:Agreement.*' PHRASEWELD_AGREEMENT_ROUNDS=150 \
    PHRASEWELD_AGREEMENT_SEED=5301 run_tests build/tsan -R '^(words|agreement)$'
else
  failed=$((failed + 1))
fi

echo "$passed passed, $failed failed"
[ "$failed" -eq 0 ]
