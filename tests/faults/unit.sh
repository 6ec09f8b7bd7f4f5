#!/usr/bin/env bash
# The shipped unit before systemd's own judges: no complaint, and an exposure of at most 1.6
# (promise 14). Skips itself (77) where systemd-analyze is missing.
#   unit.sh ANTHERD
set -euo pipefail
unit="$(dirname "${BASH_SOURCE[0]}")/../../systemd/antherd.service"
if ! command -v systemd-analyze >/dev/null; then
  echo "skipped: no systemd-analyze here, the unit was not judged"
  exit 77
fi
stage="$(mktemp -d)"
trap 'rm -rf "$stage"' EXIT
install -D -m 755 "$1" "$stage/usr/bin/antherd"
install -D -m 755 "$1" "$stage/usr/bin/kill"  # any program will do
install -D -m 644 "$unit" "$stage/etc/systemd/system/antherd.service"
# A misspelt key is a line on standard error, no status.
said="$(systemd-analyze verify --root="$stage" --recursive-errors=no antherd.service 2>&1)"
[ -z "$said" ] || { echo "verify: $said" >&2; exit 1; }
echo "  verified without a word"
judged="$(systemd-analyze security --offline=true --threshold=16 "$unit")" ||
  { tail -n 3 <<<"$judged" >&2; exit 1; }
sed -n 's/^.*Overall exposure level for antherd.service: \([0-9.]*\).*/  exposure \1, bound 1.6/p' \
  <<<"$judged"
grep -q '^WatchdogSec=' "$unit" || { echo "no watchdog in the unit" >&2; exit 1; }
echo "  a watchdog is set"
