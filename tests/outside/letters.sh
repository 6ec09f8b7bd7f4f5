#!/usr/bin/env bash
# Has every kind of letter read back by the email parser of Python's standard library.
#   letters.sh WRITE_LETTERS BUILD_FOLDER
# Skips itself (77) with a sentence where there is no Python 3.
set -euo pipefail
[ -x /usr/bin/python3 ] || { echo 'skipped: there is no /usr/bin/python3 here'; exit 77; }
folder="$(mktemp -d)"
trap 'rm -rf "$folder"' EXIT
"$1" "$folder"
/usr/bin/python3 "$(dirname "${BASH_SOURCE[0]}")/read_letters.py" "$folder" "$2/outside/letters.txt"
