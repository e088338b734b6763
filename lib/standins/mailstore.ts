import { mkdirSync, readdirSync, readFileSync } from "node:fs";
import { readFile, rename, writeFile } from "node:fs/promises";
import { join } from "node:path";
import { simpleParser } from "mailparser";

/** One kept mail: who sees it, and enough to list it. The bytes lie beside, as they came. */
export type Kept = {
  id: string;
  at: string;
  /** In the mailbox of whom: a mail for two people lies in two. */
  box: string;
  /** Sent by the person of this mailbox, through the page. */
  sent: boolean;
  from: string;
  to: string[];
  subject: string;
  size: number;
  files: number;
};

export type Opened = {
  kept: Kept;
  messageId: string;
  references: string[];
  replyTo: string;
  from: string;
  text: string;
  html: string;
  headers: { name: string; value: string }[];
  files: { n: number; name: string; type: string; size: number; bytes: Buffer }[];
};

const ID = /^[0-9]{13}-[0-9]{6}$/;

/** Mails on disk, an index of them in memory. */
export class MailStore {
  private readonly all = new Map<string, Kept>();
  private count = 0;

  constructor(private readonly dir: string) {
    mkdirSync(dir, { recursive: true, mode: 0o700 });
    for (const name of readdirSync(dir).filter((n) => n.endsWith(".json"))) {
      const kept = JSON.parse(readFileSync(join(dir, name), "utf8")) as Kept;
      this.all.set(kept.id, kept);
    }
  }

  /** Keeps a mail in each mailbox it is for. Returns when it lies on disk. */
  async keep(bytes: Buffer, envelope: { from: string; to: string[] }, sentBy?: string): Promise<Kept[]> {
    const mail = await simpleParser(bytes, { skipTextToHtml: true, skipImageLinks: true });
    const made: Kept[] = [];
    for (const box of sentBy ? [sentBy] : envelope.to) {
      const id = `${Date.now()}-${String(this.count++ % 1_000_000).padStart(6, "0")}`;
      const kept: Kept = {
        id,
        at: new Date().toISOString(),
        box: box.toLowerCase(),
        sent: sentBy !== undefined,
        from: mail.from?.text ?? envelope.from,
        to: envelope.to,
        subject: mail.subject ?? "",
        size: bytes.length,
        files: mail.attachments.length,
      };
      await this.put(`${id}.eml`, bytes);
      await this.put(`${id}.json`, Buffer.from(JSON.stringify(kept)));
      this.all.set(id, kept);
      made.push(kept);
    }
    return made;
  }

  private async put(name: string, bytes: Buffer): Promise<void> {
    const at = join(this.dir, name);
    await writeFile(`${at}.part`, bytes, { mode: 0o600 });
    await rename(`${at}.part`, at);
  }

  boxes(): { box: string; mails: number; newest: Kept }[] {
    const by = new Map<string, Kept[]>();
    for (const k of this.list()) by.set(k.box, [...(by.get(k.box) ?? []), k]);
    return [...by.entries()].map(([box, mails]) => ({ box, mails: mails.length, newest: mails[0]! }));
  }

  /** Newest first. */
  list(box?: string): Kept[] {
    const found = [...this.all.values()].filter((k) => box === undefined || k.box === box.toLowerCase());
    return found.sort((a, b) => (a.id < b.id ? 1 : -1));
  }

  async raw(id: string): Promise<Buffer | undefined> {
    return ID.test(id) && this.all.has(id) ? readFile(join(this.dir, `${id}.eml`)) : undefined;
  }

  async open(id: string): Promise<Opened | undefined> {
    const bytes = await this.raw(id);
    const kept = this.all.get(id);
    if (!bytes || !kept) return undefined;
    const mail = await simpleParser(bytes, { skipTextToHtml: true, skipImageLinks: true });
    const references = typeof mail.references === "string" ? [mail.references] : (mail.references ?? []);
    return {
      kept,
      messageId: mail.messageId ?? "",
      references,
      replyTo: mail.replyTo?.value[0]?.address ?? mail.from?.value[0]?.address ?? "",
      from: mail.from?.value[0]?.address ?? kept.from,
      text: mail.text ?? "",
      html: typeof mail.html === "string" ? mail.html : "",
      headers: mail.headerLines.map((h) => {
        const at = h.line.indexOf(":");
        return {
          name: h.line.slice(0, at),
          value: h.line
            .slice(at + 1)
            .replace(/\r?\n\s+/g, " ")
            .trim(),
        };
      }),
      files: mail.attachments.map((a, n) => ({
        n,
        name: a.filename ?? `file-${n + 1}`,
        type: a.contentType,
        size: a.content.length,
        bytes: a.content,
      })),
    };
  }
}
