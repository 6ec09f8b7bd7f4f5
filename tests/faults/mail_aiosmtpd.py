# A mail server in Python for the script beside it: STARTTLS, a login, a mailbox that is busy and
# one that is none. Prints its port, then the letters it took; ends when its input does.
#   mail_aiosmtpd.py CERTIFICATE KEY USER PASSWORD-FILE
import asyncio
import ssl
import sys

from aiosmtpd.smtp import SMTP, AuthResult, LoginPassword

certificate, key, user, password_file = sys.argv[1:5]
with open(password_file, "rb") as file:
    password = file.read().strip()


def authenticate(server, talk, envelope, mechanism, data):
    known = (user.encode(), password)
    good = isinstance(data, LoginPassword) and (data.login, data.password) == known
    # Not handled: the server itself then answers 535. Otherwise the client would wait for ever.
    return AuthResult(success=good, handled=False)


class Handler:
    async def handle_RCPT(self, server, talk, envelope, address, options):
        if address.startswith("temp@"):
            return "450 4.2.0 mailbox busy, try later"
        if address.startswith("perm@"):
            return "550 5.1.1 no such mailbox"
        envelope.rcpt_tos.append(address)
        return "250 2.1.5 ok"

    async def handle_DATA(self, server, talk, envelope):
        for line in envelope.content.decode("utf-8").splitlines():
            print("letter: " + line, flush=True)
        return "250 2.0.0 taken"


async def main():
    context = ssl.SSLContext(ssl.PROTOCOL_TLS_SERVER)
    context.load_cert_chain(certificate, key)

    def conversation():
        return SMTP(Handler(), hostname="localhost", tls_context=context, require_starttls=True,
                    auth_required=True, authenticator=authenticate)

    loop = asyncio.get_running_loop()
    server = await loop.create_server(conversation, "127.0.0.1", 0)
    print("port: %d" % server.sockets[0].getsockname()[1], flush=True)
    await loop.run_in_executor(None, sys.stdin.read)
    server.close()


asyncio.run(main())
