import { randomBytes } from "node:crypto";

/** A raw mail, line by line, so that a test can make what no library would. */
export type MailParts = {
  from?: string;
  to?: string;
  subject?: string;
  messageId?: string;
  headers?: string[];
  text?: string;
  files?: { name: string; type: string; bytes: Buffer }[];
};

export const someId = () => `<${randomBytes(8).toString("hex")}@pinnock.example>`;

export function rawMailOf(m: MailParts): Buffer {
  const boundary = `b${randomBytes(6).toString("hex")}`;
  const head = [
    `From: ${m.from ?? "Ines Pinnock <ines@pinnock.example>"}`,
    `To: ${m.to ?? "desk@ostwick.example"}`,
    `Subject: ${m.subject ?? "Node down"}`,
    `Message-ID: ${m.messageId ?? someId()}`,
    "Date: Wed, 04 Mar 2026 10:12:00 +0000",
    "MIME-Version: 1.0",
    ...(m.headers ?? []),
  ];
  const text = m.text ?? "The node is down.";
  if (!m.files) return Buffer.from([...head, ...plain, "", text].join("\r\n"), "utf8");
  const parts = m.files.map((f) =>
    [
      `--${boundary}`,
      `Content-Type: ${f.type}; name="${f.name}"`,
      "Content-Transfer-Encoding: base64",
      `Content-Disposition: attachment; filename="${f.name}"`,
      "",
      f.bytes.toString("base64").replace(/.{76}/g, "$&\r\n"),
    ].join("\r\n"),
  );
  return Buffer.from(
    [
      ...head,
      `Content-Type: multipart/mixed; boundary="${boundary}"`,
      "",
      `--${boundary}`,
      ...plain,
      "",
      text,
      ...parts,
      `--${boundary}--`,
      "",
    ].join("\r\n"),
    "utf8",
  );
}

const plain = ["Content-Type: text/plain; charset=utf-8", "Content-Transfer-Encoding: 8bit"];

/** A delivery report in the form of RFC 3464 about a mail with `messageId` to `recipient`. */
export function bounceOf(messageId: string, recipient: string, action = "failed", status = "5.1.1"): Buffer {
  return Buffer.from(
    [
      "From: Mail system <mailer-daemon@mx.pinnock.example>",
      "To: desk@ostwick.example",
      "Subject: It could not be delivered",
      `Message-ID: ${someId()}`,
      "MIME-Version: 1.0",
      'Content-Type: multipart/report; report-type=delivery-status; boundary="rep"',
      "",
      "--rep",
      "Content-Type: text/plain",
      "",
      "Your mail did not arrive.",
      "--rep",
      "Content-Type: message/delivery-status",
      "",
      "Reporting-MTA: dns; mx.pinnock.example",
      "",
      `Final-Recipient: rfc822; ${recipient}`,
      `Action: ${action}`,
      `Status: ${status}`,
      "--rep",
      "Content-Type: text/rfc822-headers",
      "",
      "From: desk@ostwick.example",
      `Message-ID: ${messageId}`,
      "--rep--",
      "",
    ].join("\r\n"),
  );
}
