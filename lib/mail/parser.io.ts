import { fork, type ChildProcess } from "node:child_process";
import { createRequire } from "node:module";
import { fileURLToPath, pathToFileURL } from "node:url";
import { headerEnd, type ParsedMail, type ReadMail } from "./parsed";

/**
 * Reads mails in a process of its own, with a limit of time and of memory: what a hostile mail
 * can do, it does there. One at a time; the next waits.
 */
type Reply = { ok: true; mail: ParsedMail } | { ok: false; why: string };

const CAP_MS = 30_000;
const CAP_MB = 400;

type Answer = { id: number; mail?: ParsedMail; failed?: string };

let child: ChildProcess | undefined;
let queue: Promise<unknown> = Promise.resolve();
let asked = 0;

function reader(): ChildProcess {
  if (child && child.connected && child.exitCode === null && child.signalCode === null) return child;
  const loader = pathToFileURL(createRequire(import.meta.url).resolve("tsx")).href;
  const made = fork(fileURLToPath(new URL("./parsechild.io.ts", import.meta.url)), {
    execArgv: [`--max-old-space-size=${CAP_MB}`, "--import", loader],
    serialization: "advanced",
    stdio: ["ignore", "ignore", "ignore", "ipc"],
    // Nothing secret goes to a process that opens strangers' mails.
    env: {
      NODE_ENV: process.env.NODE_ENV,
      PATH: process.env.PATH,
      TSX_TSCONFIG_PATH: process.env.TSX_TSCONFIG_PATH,
    },
  });
  child = made;
  return made;
}

/** An idle reader does not keep its parent alive. */
function rest(at: ChildProcess): void {
  at.unref();
  at.channel?.unref();
}

function ask(raw: Buffer, capMs: number): Promise<Reply> {
  const at = reader();
  const id = ++asked;
  at.ref();
  at.channel?.ref();
  return new Promise<Reply>((done) => {
    const end = (result: Reply) => {
      clearTimeout(timer);
      at.off("message", heard).off("exit", died).off("error", died);
      rest(at);
      done(result);
    };
    const heard = (answer: Answer) => {
      if (answer.id !== id) return;
      end(
        answer.mail
          ? { ok: true, mail: answer.mail }
          : { ok: false, why: answer.failed ?? "it does not parse" },
      );
    };
    const died = () => end({ ok: false, why: "it took more memory than a mail may take" });
    const timer = setTimeout(() => {
      at.kill("SIGKILL");
      end({ ok: false, why: `it was not read within ${capMs / 1000} s` });
    }, capMs);
    at.on("message", heard).once("exit", died).once("error", died);
    at.send({ id, raw: new Uint8Array(raw) }, (failed) => failed && died());
  });
}

const HEAD_BYTES = 64_000;

async function askTwice(raw: Buffer, capMs: number): Promise<ReadMail> {
  const whole = await ask(raw, capMs);
  if (whole.ok) return whole;
  // The whole is too much; who wrote and about what may still be read.
  const head = raw.subarray(0, Math.min(headerEnd(raw), HEAD_BYTES));
  const first = await ask(Buffer.concat([head, Buffer.from("\r\n\r\n")]), capMs);
  return { ...whole, head: first.ok ? first.mail : null };
}

export function readMail(raw: Buffer, capMs = CAP_MS): Promise<ReadMail> {
  const mine = queue.then(() => askTwice(raw, capMs));
  queue = mine.catch(() => undefined);
  return mine;
}

/** Ends the reading process, when its parent stops in order. */
export function stopReader(): void {
  child?.kill();
  child = undefined;
}
