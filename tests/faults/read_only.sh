#!/usr/bin/env bash
# A disk that turns read-only while the service runs, as a worn card does (promise 5). The kernel
# refuses to remount a file system with open files, so a small library between the service and the
# system answers "read-only file system" to every change below the store's folder. The service must
# stay up, say so, lose nothing, and tell of the heat, once, when the disk takes writes again.
#   read_only.sh ANTHERD LIBRARY
set -euo pipefail
. "$(dirname "${BASH_SOURCE[0]}")/hot_farm.sh"

hot_farm_make "$1"
hot_farm_start LD_PRELOAD="$2" READ_ONLY_FOLDER="$(readlink -f "$top/store")" READ_ONLY_WHILE="$top/worn"

said_read_only() { feed; log_says 'could not keep .*read-only file system'; }

wait_for 120 "the season was read" ready
touch "$top/worn"
wait_for 90 "the log says that nothing can be written" said_read_only
before="$(hours_known)"
for _ in 1 2 3 4 5 6 7 8; do feed; sleep 1; done
kill -0 "$service" || fail "the service ended"
passed "it stays up"
[ "$(hours_known)" -eq "$before" ] || fail "something was stored on a read-only disk"
passed "nothing reached the store meanwhile ($before hours)"

rm "$top/worn"
wait_for 90 "with the disk mended every hour is caught up" known_up_to_date
wait_for 90 "the heat is told" told_of_heat
hot_farm_close
