import { parseMail } from "./parse.io";

/** The process that reads mails, one at a time. Started by parser.io.ts; ends with its parent. */
process.on("message", (asked: { id: number; raw: Uint8Array }) => {
  parseMail(Buffer.from(asked.raw.buffer, asked.raw.byteOffset, asked.raw.byteLength)).then(
    (mail) => process.send?.({ id: asked.id, mail }),
    (thrown: unknown) =>
      process.send?.({ id: asked.id, failed: thrown instanceof Error ? thrown.message : String(thrown) }),
  );
});
process.on("disconnect", () => process.exit(0));
