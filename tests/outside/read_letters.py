# Reads letters with the email parser of Python's standard library in strict mode and holds what it
# finds against what was meant.
#   read_letters.py FOLDER REPORT
# FOLDER holds NAME.eml and NAME.meant (write_letters.cpp); one line goes to the file REPORT.
import email
import email.policy
import pathlib
import platform
import sys

folder, report = pathlib.Path(sys.argv[1]), pathlib.Path(sys.argv[2])


def complaints(raw, meant):
    """What is wrong with the bytes of one letter; an empty list when nothing is."""
    subject, recipient, identity, seconds, body = meant.split("\n", 4)
    wrong = []

    def hold(what, got, expected):
        if got != expected:
            wrong.append(f"{what}: {str(got)[:200]!r} in place of {str(expected)[:200]!r}")

    lines = raw.split(b"\r\n")
    hold("ends with CR LF", lines[-1], b"")
    if any(b"\r" in line or b"\n" in line for line in lines):
        wrong.append("a bare CR or LF")
    # A Message-ID cannot be folded inside: it may go on to the 998 of RFC 5322.
    long = [line for line in lines if len(line) > (998 if line.startswith(b"Message-ID: ") else 78)]
    hold("lines beyond 78 columns", long, [])
    hold("bytes beyond ASCII", [line for line in lines if not line.isascii()], [])
    try:
        message = email.message_from_bytes(raw, policy=email.policy.strict)
        hold("defects", list(message.defects), [])
        for name in message.keys():
            hold(f"defects of {name}", list(message[name].defects), [])
            hold(f"how often {name}", len(message.get_all(name)), 1)
        hold("Subject", message["subject"], subject)
        hold("To", [a.addr_spec for a in message["to"].addresses], [recipient])
        hold("From", [a.addr_spec for a in message["from"].addresses], ["alerts@larkspur.example"])
        hold("Message-ID", message["message-id"].split("@")[0], "<" + identity)
        hold("Date", int(message["date"].datetime.timestamp()), int(seconds))
        hold("Auto-Submitted", message["auto-submitted"], "auto-generated")
        text = message.get_body(("plain",))
        hold("charset", text.get_content_charset(), "utf-8")
        hold("body", text.get_content().replace("\r\n", "\n"), body)
        for part in message.walk():
            hold("defects of a part", list(part.defects), [])
            if part.get_content_maintype() == "image":
                hold("first bytes of an image", part.get_content()[:8], b"\x89PNG\r\n\x1a\n")
    except Exception as trouble:  # strict mode raises what it would note elsewhere
        wrong.append(f"{type(trouble).__name__}: {trouble}")
    return wrong


def spoilt(raw):
    """The same letter with one fault each, of the kinds that have to be found."""
    head, body = raw.split(b"\r\n\r\n", 1)
    yield raw.replace(b"\r\n", b"\n")
    yield head.replace(b"Subject: ", b"Subject: 2") + b"\r\n\r\n" + body
    yield head + b"\r\n\r\n" + body[1:]
    yield head + b"\r\n\r\n" + body[:-2] + b"."
    yield head.replace(b"To: ", b"To: <x@y.example>, ") + b"\r\n\r\n" + body
    yield head.replace(b"utf-8", b"latin-1") + b"\r\n\r\n" + body
    yield head + b"\r\nSubject: twice\r\n\r\n" + body


read = found = 0
failures = []
for path in sorted(folder.glob("*.eml")):
    raw, meant = path.read_bytes(), path.with_suffix(".meant").read_bytes().decode()
    read += 1
    failures += [f"{path.name}: {wrong}" for wrong in complaints(raw, meant)]
    for fault in spoilt(raw) if read % 20 == 1 else ():
        if not complaints(fault, meant):
            failures.append(f"{path.name}: a planted fault was not found:\n{fault.decode()[:600]}")
        found += 1
for failure in failures[:8]:
    print(failure)
if read < 250:
    sys.exit(f"only {read} letters to read")
report.parent.mkdir(exist_ok=True)
report.write_text(
    "letters read back: headers; words; lines of 78"
    f" | Python {platform.python_version()} email in strict mode"
    f" | {read} letters, {len(failures)} complaints; {found} planted faults found\n"
)
print(report.read_text(), end="")
sys.exit(1 if failures else 0)
