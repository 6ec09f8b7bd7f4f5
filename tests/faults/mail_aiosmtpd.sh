#!/usr/bin/env bash
# Letters through a mail server written by others, quick and without root: aiosmtpd on loopback with
# STARTTLS and a login.
#   mail_aiosmtpd.sh PROGRAM     PROGRAM is mail_send_once from the build
# Status: 0 all as it should be, 1 not, 77 skipped (no Python with aiosmtpd, or no openssl here).
set -euo pipefail

program=${1:?"usage: mail_aiosmtpd.sh PATH-OF-mail_send_once"}
here=$(cd "$(dirname "${BASH_SOURCE[0]}")" && pwd)
skip() { echo "skipped: $*"; exit 77; }
command -v openssl >/dev/null || skip "openssl is not installed"
python=
for candidate in /usr/bin/python3 python3; do  # the system's own first: the package is Debian's
  "$candidate" -c 'import aiosmtpd.smtp' 2>/dev/null && python=$candidate && break
done
[ -n "$python" ] || skip "python3-aiosmtpd is not installed"
[ -x "$program" ] || { echo "no program at $program"; exit 1; }

room=$(mktemp -d)
server=
finish() {
  exec 3>&- || true
  [ -z "$server" ] || { kill "$server" 2>/dev/null; wait "$server" 2>/dev/null; } || true
  rm -rf "$room"
}
trap finish EXIT

openssl req -x509 -newkey rsa:2048 -nodes -days 2 -subj /CN=localhost -keyout "$room/key.pem" \
  -out "$room/certificate.pem" -addext subjectAltName=DNS:localhost 2>/dev/null
secret="larkspur-$(openssl rand -hex 8)"
(umask 077 && printf '%s\n' "$secret" >"$room/password" && printf 'wrong\n' >"$room/wrong")
mkfifo "$room/input"
"$python" "$here/mail_aiosmtpd.py" "$room/certificate.pem" "$room/key.pem" farm "$room/password" \
  <"$room/input" >"$room/server" 2>"$room/errors" &
server=$!
exec 3>"$room/input"  # its input stays open until we end
for _ in $(seq 200); do
  grep -q '^port: ' "$room/server" && break
  kill -0 "$server" 2>/dev/null || { cat "$room/errors"; exit 1; }
  sleep 0.05
done
port=$(sed -n 's/^port: //p' "$room/server")
[ -n "$port" ] || { echo "the server did not begin"; cat "$room/errors"; exit 1; }

passed=0 failed=0
check() {  # WHAT COMMAND…
  local what=$1
  shift
  if "$@" >/dev/null; then
    passed=$((passed + 1))
  else
    failed=$((failed + 1))
    printf 'NOT SO: %s\n' "$what"
    sed 's/^/    /' "$room/said"
  fi
}
absent() { ! grep -qF -- "$@"; }
say() {  # NAME [VARIABLE=VALUE…]: one letter; what was said is in $room/said
  local name=$1
  shift
  env MAIL_URL="smtp://localhost:$port" MAIL_USER=farm MAIL_PASSWORD_FILE="$room/password" \
    MAIL_CA_FILE="$room/certificate.pem" MAIL_TO=owner@larkspur.example "$@" \
    "$program" >"$room/said" 2>&1 || true
  printf '%s\n    %s\n' "$name" "$(grep -m1 '^sentence: ' "$room/said")"
  check "$name: no password is told" absent "$secret" "$room/said"
}
state_is() { grep -qx "state: $1" "$room/said"; }
sentence_has() { grep -q "^sentence: .*$1" "$room/said"; }
took() { grep -qx "letter: $1" "$room/server"; }

say "a letter by STARTTLS and login" MAIL_ID=heat-1
check "it is sent" state_is sent
check "it arrived under its own name" grep -q '^letter: Message-ID: <heat-1@' "$room/server"
check "the dot is one dot" took '.a line that begins with a dot'
say "a wrong password" MAIL_PASSWORD_FILE="$room/wrong"
check "it is kept" state_is waiting
check "it says so" sentence_has 'refuses the login of farm (535'
say "no login" MAIL_USER=
check "it is kept" state_is waiting
say "a certificate of another name" MAIL_URL="smtp://127.0.0.1:$port"
check "it says so" sentence_has 'belongs to another name'
say "an authority the system does not know" MAIL_CA_FILE=
check "it says so" sentence_has 'unknown authority'
say "a mailbox that is busy" MAIL_TO=temp@larkspur.example
check "it waits" state_is waiting
say "a mailbox that is none" MAIL_TO=perm@larkspur.example
check "it is put aside" state_is parked
check "one letter was taken in all" test "$(grep -c '^letter: Message-ID' "$room/server")" = 1

printf '%d checks passed, %d failed\n' "$passed" "$failed"
[ "$failed" = 0 ]
