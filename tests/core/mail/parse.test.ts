import { afterAll, describe, expect, test } from "vitest";
import { addressKey, cleanHtml, parseMail } from "@/lib/mail/parse.io";
import { attachmentName } from "@/lib/mail/parsed";
import { readMail, stopReader } from "@/lib/mail/parser.io";

afterAll(stopReader);
const mail = (head: string, body: string | Buffer) =>
  Buffer.concat([
    Buffer.from(`From: ines@pinnock.example\r\n${head}\r\n\r\n`, "latin1"),
    Buffer.from(body as string, "latin1"),
  ]);

describe("charsets", () => {
  test("raw Latin-1 in subject and body, nothing declared: read as windows-1252, and the guess is told", async () => {
    const read = await parseMail(mail("Subject: Gr\xf6\xdfe", "Gr\xf6\xdfe \x80 5"));
    expect(read.subject).toBe("Größe");
    expect(read.text).toBe("Größe € 5");
    expect(read.notes.join(" ")).toContain("windows-1252");
  });
  test("a declared charset is the one that counts", async () => {
    const read = await parseMail(
      mail(
        "Subject: Gr\xf6\xdfe\r\nContent-Type: text/plain; charset=iso-8859-1\r\nContent-Transfer-Encoding: 8bit",
        "Gr\xf6\xdfe",
      ),
    );
    expect([read.subject, read.text]).toEqual(["Größe", "Größe"]);
  });
  test("UTF-8 stays what it is", async () => {
    const read = await parseMail(mail("Subject: x", Buffer.from("Größe", "utf8").toString("latin1")));
    expect(read.text).toBe("Größe");
  });
  // ISO-2022-JP (RFC 1468) and an encoded file name in pieces (RFC 2231 s. 3 and 4.1).
  test("Japanese, and a long file name in pieces", async () => {
    const read = await parseMail(
      mail(
        'Subject: =?ISO-2022-JP?B?GyRCOE5DQxsoQg==?=\r\nContent-Type: multipart/mixed; boundary="b"',
        `--b\r\nContent-Type: text/plain; charset=ISO-2022-JP\r\n\r\n\x1b$B8NC4\x1b(B\r\n--b\r\nContent-Type: text/plain\r\nContent-Disposition: attachment; filename*0*=utf-8''log%20der; filename*1*=%20Maschine;\r\n filename*2=.txt\r\n\r\nx\r\n--b--`,
      ),
    );
    expect(read.subject).not.toContain("\ufffd");
    expect(read.attachments[0]!.name).toBe("log der Maschine.txt");
  });
});

describe("headers", () => {
  test("an encoded line end stays in no subject (RFC 2047)", async () => {
    const read = await parseMail(mail("Subject: =?utf-8?Q?a=0D=0ABcc:_x@y.example?=", "x"));
    expect(read.subject).toBe("a Bcc: x@y.example");
  });
  test.each([
    ["Ines@Pinnock.Example", "ines@pinnock.example"],
    ["jörg@bücher.example", "jörg@xn--bcher-kva.example"],
    ["jo\u0308rg@xn--bcher-kva.example", "jörg@xn--bcher-kva.example"],
  ])("%s and its other spellings are one address", (given, key) => expect(addressKey(given)).toBe(key));
});

// RFC 2183 s. 2.3: a file name is a hint, never a path.
describe("file names", () => {
  test.each([
    ["../../etc/x.pdf", "x.pdf"],
    ["C:\\temp\\x.log", "x.log"],
    ["serial\u202efdp.exe", "serialfdp.exe"],
    ["a\u0000b\u200b.txt", "ab.txt"],
    ["CON.txt", "_CON.txt"],
    ["trailing. ", "trailing"],
    ["...", "attachment-1"],
    ["", "attachment-1"],
    [`${"x".repeat(300)}.pdf`, `${"x".repeat(116)}.pdf`],
  ])("%j", (given, safe) => expect(attachmentName(given, "application/pdf", 1)).toBe(safe));
});

describe("markup", () => {
  test.each([
    '<script>alert(1)</script><p onclick="x()">hi</p>',
    '<style>p{background:url(http://t.example/x)}</style><p style="position:fixed">hi</p>',
    '<img src="http://t.example/pixel.gif"><p>hi</p>',
    '<svg><a href="javascript:alert(1)">hi</a></svg>',
    '<a href="java\nscript:alert(1)">hi</a>',
    '<form action="http://t.example"><input>hi</form><iframe src="//t.example"></iframe>',
    '<base href="http://t.example/"><meta http-equiv="refresh" content="0;url=http://t.example">hi',
  ])("%s is made harmless", (html) => {
    const clean = cleanHtml(html);
    expect(clean).toContain("hi");
    expect(clean).not.toMatch(/script|style|onclick|<img|<form|<iframe|<svg|t\.example|<meta|<base/i);
  });
  test("a mail of markup alone has its words as text", async () => {
    const read = await parseMail(mail("Subject: x\r\nContent-Type: text/html", "<p>Fan 2<br>stopped</p>"));
    expect(read.text).toContain("Fan 2");
    expect(read.text).toContain("stopped");
  });
});

describe("hostile mails end nothing but their own reading", () => {
  const head = `Subject: Bomb\r\nContent-Type: multipart/mixed; boundary=b`;
  test("too many parts: refused, and its first headers are still told", async () => {
    const read = await readMail(mail(head, `${"--b\r\n\r\nx\r\n".repeat(1200)}--b--`));
    expect(read.ok).toBe(false);
    expect(!read.ok && read.head?.subject).toBe("Bomb");
  });
  test("one that takes too long is given up, and the next is read", async () => {
    const slow = mail("Subject: Slow\r\nContent-Type: text/html", "<div>".repeat(400_000));
    const read = await readMail(slow, 60);
    const next = await readMail(mail("Subject: Next", "fine"));
    expect(read.ok ? "read in time" : read.why).toMatch(/read in time|not read within/);
    expect(next.ok && next.mail.subject).toBe("Next");
  });
  test("an encrypted one says so", async () => {
    const read = await parseMail(
      mail(
        'Subject: x\r\nContent-Type: multipart/encrypted; protocol="application/pgp-encrypted"; boundary="b"',
        "--b\r\nContent-Type: application/pgp-encrypted\r\n\r\nVersion: 1\r\n--b\r\nContent-Type: application/octet-stream\r\n\r\nxx\r\n--b--",
      ),
    );
    expect(read.encrypted).toBe(true);
    expect(read.attachments).toEqual([]);
    expect(read.text).toContain("encrypted");
  });
});
