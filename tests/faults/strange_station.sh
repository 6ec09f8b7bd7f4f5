#!/usr/bin/env bash
# A station whose certificate nobody vouches for: it is named, nothing is read from it, and the other
# station's watch goes on.
#   strange_station.sh ANTHERD
# Needs openssl; else exit 77.
set -euo pipefail
command -v openssl >/dev/null || { echo "skipped: no openssl here, a strange certificate was not tried"; exit 77; }
. "$(dirname "${BASH_SOURCE[0]}")/hot_farm.sh"

hot_farm_make "$1"
openssl req -x509 -newkey rsa:2048 -nodes -days 2 -subj /CN=localhost -keyout "$top/key.pem" \
  -out "$top/certificate.pem" -addext subjectAltName=DNS:localhost 2>/dev/null
mkfifo "$top/line"
openssl s_server -accept 127.0.0.1:0 -cert "$top/certificate.pem" -key "$top/key.pem" -HTTP \
  <"$top/line" >"$top/server" 2>&1 &
server=$!
exec 3>"$top/line"  # its input stays open until we end
trap 'exec 3>&-; kill "$server" 2>/dev/null; hot_farm_end' EXIT
port=
for _ in $(seq 100); do
  port="$(sed -n 's/^ACCEPT 127\.0\.0\.1:\([0-9]*\)$/\1/p' "$top/server")"
  [ -z "$port" ] || break
  sleep 0.1
done
[ -n "$port" ] || fail "openssl does not listen: $(tail -n 3 "$top/server")"
hot_farm_add_gate "https://localhost:$port/now.json"

hot_farm_start
wait_for 120 "the season was read" ready
wait_for 60 "the certificate is named" log_says "gate: .*localhost:$port.*no trusted TLS connection: .*self.signed"
wait_for 90 "the heat is told from the other station" told_of_heat
hot_farm_close
