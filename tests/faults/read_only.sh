#!/usr/bin/env bash
# A disk that turns read-only while the service runs, as a worn card does (promise 5). The kernel
# refuses to remount a file system with open files, so a small library between the service and the
# system answers "read-only file system" to every change below the store's folder. The service must
# stay up, say so, lose nothing, and tell of the heat, once, when the disk takes writes again. Started
# on such a disk it must stay up too, write to people past the store, and begin when it can.
#   read_only.sh ANTHERD LIBRARY
set -euo pipefail
. "$(dirname "${BASH_SOURCE[0]}")/hot_farm.sh"

# A sanitizer's library must come before all others.
preload="$(ldd "$1" | sed -n 's/.*=> \([^ ]*lib[at]san[^ ]*\) .*/\1/p' | tr '\n' ' ')$2"

hot_farm_make "$1"
hot_farm_start LD_PRELOAD="$preload" READ_ONLY_FOLDER="$(readlink -f "$top/store")" READ_ONLY_WHILE="$top/worn"

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

# The next day the computer is started anew while its disk is read-only.
hot_farm_stop
touch "$top/worn"
start=$(date -u -d '2026-07-15 17:00' +%s)
hot_farm_start LD_PRELOAD="$preload" READ_ONLY_FOLDER="$(readlink -f "$top/store")" READ_ONLY_WHILE="$top/worn"
wait_for 60 "started on a read-only disk it stays up and says so" log_says 'nothing is watched: .*read-only'
nothing_watched() { [ -n "$(find "$top/outgoing" -name 'watch-stopped-*.eml')" ]; }
wait_for 60 "people are told by letter that nothing is watched" nothing_watched
rm "$top/worn"
wait_for 90 "with the disk mended the watch begins by itself" log_says 'the watch begins'
wait_for 90 "and every hour is caught up" known_up_to_date
[ "$(find "$top/outgoing" -name 'watch-stopped-*.eml' | wc -l)" -eq 1 ] || fail "it was told twice in a day"
passed "it was told once"
hot_farm_close
