import { createHash } from "node:crypto";
import { createReadStream, mkdirSync, readdirSync, statSync, unlinkSync, type ReadStream } from "node:fs";
import { open, readFile, rename, stat, unlink, writeFile } from "node:fs/promises";
import { join } from "node:path";

/** Why a request is not done; the status goes over the wire. */
export class Refused extends Error {
  constructor(
    readonly status: number,
    message: string,
  ) {
    super(message);
  }
}

/** What the application said an upload is for, before it came. */
export type Meta = { callbackUrl: string; callbackSlug: string; metadata: unknown; awaitServerData: boolean };
/** What is known of a file that is here. */
export type Side = {
  name: string;
  size: number;
  type: string;
  acl: string;
  customId: string | null;
  md5: string;
};

const KEY = /^[A-Za-z0-9]{20,80}$/;
const STALE_MS = 24 * 3600_000;
type Kind = "part" | "bin" | "json" | "meta.json";

/** Files on disk by key: growing (`part`), whole (`bin` and what is known of it), promised (`meta.json`). */
export class UploadStore {
  constructor(
    private readonly dir: string,
    now: number,
  ) {
    mkdirSync(dir, { recursive: true, mode: 0o700 });
    for (const name of readdirSync(dir)) {
      const at = join(dir, name);
      if (/\.(part|meta\.json)$/.test(name) && statSync(at).mtimeMs < now - STALE_MS) unlinkSync(at);
    }
  }

  /** Never a path of somebody's choosing: a key has letters and digits alone. */
  private at(key: string, kind: Kind): string {
    if (!KEY.test(key)) throw new Refused(400, "no such key");
    return join(this.dir, `${key}.${kind}`);
  }

  async isWhole(key: string): Promise<boolean> {
    return (await sizeOf(this.at(key, "bin"))) !== undefined;
  }

  /** Bytes that are here, of a growing or a whole file. */
  async held(key: string): Promise<number> {
    return (await sizeOf(this.at(key, "part"))) ?? (await sizeOf(this.at(key, "bin"))) ?? 0;
  }

  /** Writes bytes from an offset on; what arrived stays when they break off. Returns the size then. */
  async grow(key: string, from: number, limit: number, bytes: AsyncIterable<Buffer>): Promise<number> {
    const part = this.at(key, "part");
    if (from > ((await sizeOf(part)) ?? 0))
      throw new Refused(416, "more is asked to be skipped than is here");
    const file = await open(part, from > 0 ? "r+" : "w", 0o600);
    let at = from;
    try {
      await file.truncate(from);
      for await (const chunk of bytes) {
        if (at + chunk.length > limit) throw new Refused(400, "more bytes than were announced");
        await file.write(chunk, 0, chunk.length, at);
        at += chunk.length;
      }
      await file.sync();
    } finally {
      await file.close();
    }
    return at;
  }

  /** The growing file is whole: it takes its place with what is known of it. */
  async finish(key: string, known: Omit<Side, "md5">): Promise<Side> {
    const hash = createHash("md5");
    for await (const chunk of createReadStream(this.at(key, "part"))) hash.update(chunk as Buffer);
    const side: Side = { ...known, md5: hash.digest("hex") };
    await this.describe(key, side);
    await rename(this.at(key, "part"), this.at(key, "bin"));
    return side;
  }

  async describe(key: string, side: Side): Promise<void> {
    await writeFile(this.at(key, "json"), JSON.stringify(side), { mode: 0o600 });
  }

  async side(key: string): Promise<Side | undefined> {
    const text = await readFile(this.at(key, "json"), "utf8").catch(() => undefined);
    return text ? (JSON.parse(text) as Side) : undefined;
  }

  read(key: string): ReadStream {
    return createReadStream(this.at(key, "bin"));
  }

  /** Kept on disk, so that an upload survives a restart between promise and bytes. */
  async promise(key: string, meta: Meta): Promise<void> {
    await writeFile(this.at(key, "meta.json"), JSON.stringify(meta), { mode: 0o600 });
  }

  async promised(key: string): Promise<Meta | undefined> {
    const text = await readFile(this.at(key, "meta.json"), "utf8").catch(() => undefined);
    return text ? (JSON.parse(text) as Meta) : undefined;
  }

  async fulfil(key: string): Promise<void> {
    await unlink(this.at(key, "meta.json")).catch(() => undefined);
  }

  /** Removes everything of a key. True when a whole file was there. */
  async forget(key: string): Promise<boolean> {
    const there = await this.isWhole(key);
    for (const kind of ["bin", "json", "part", "meta.json"] as const)
      await unlink(this.at(key, kind)).catch(() => undefined);
    return there;
  }
}

async function sizeOf(path: string): Promise<number | undefined> {
  return stat(path).then(
    (found) => found.size,
    () => undefined,
  );
}
