#!/usr/bin/env bash
# Installs what is missing, builds, runs every test and says how many passed.
#   tests/run                   everything, as one works on it (preset dev)
#   tests/run --quick           without the tests labelled slow
#   tests/run --asan            with the address and undefined-behaviour sanitizers
#   tests/run --only REGEX      the test programs whose name fits, e.g. core/weather
# Ends with "N passed, N failed": test cases, not programs. Exit status 0 only if none failed.
set -euo pipefail
cd "$(dirname "${BASH_SOURCE[0]}")/.."
. tests/packages.sh

preset=dev
choice=()
while [ "$#" -gt 0 ]; do
  case "$1" in
    --quick) choice+=(--label-exclude slow) ;;
    --asan) preset=asan ;;
    --only)
      [ "$#" -gt 1 ] || { echo "tests/run: --only needs a name" >&2; exit 2; }
      choice+=(--tests-regex "$2")
      shift
      ;;
    --help | -h) sed -n '2,7s/^# \{0,1\}//p' "${BASH_SOURCE[0]}"; exit 0 ;;
    *) echo "tests/run: no option '$1'; try --help" >&2; exit 2 ;;
  esac
  shift
done

started=$SECONDS
purposes=(build)
[ "${CI:-}" != true ] || purposes+=(mail)
packages_install "${purposes[@]}"
build_preset "$preset"
echo "built in $((SECONDS - started)) s"

status=0
ctest --test-dir ".build/$preset" --output-on-failure --no-tests=error --timeout 1200 \
  --parallel "$(build_jobs)" "${choice[@]}" </dev/null || status=$?

# Every program says how many test cases it ran. One that ended without saying so counts as one:
# failed if ctest saw it fail, else passed.
read -r passed failed < <(awk '
  function close_program() { if (open && !told) { if (fine) passed++; else failed++ } }
  / Testing: / && /^[0-9]+\/[0-9]+ / { close_program(); open = 1; told = fine = absent = 0 }
  /^All tests passed \(/ { passed += $(NF - 2); told = 1 }
  /^test cases: / {
    told = 1
    for (i = 1; i < NF; ++i) {
      if ($(i + 1) == "passed") passed += $i
      if ($(i + 1) == "failed") failed += $i
    }
  }
  /^Command: ""$/ { absent = 1 }
  /^Test Passed\.$/ { fine = !absent }
  END { close_program(); printf "%d %d\n", passed, failed }
' ".build/$preset/Testing/Temporary/LastTest.log")
if [ "$status" -ne 0 ] && [ "$failed" -eq 0 ]; then failed=1; fi
echo "$passed passed, $failed failed"
[ "$status" -eq 0 ] && [ "$failed" -eq 0 ]
