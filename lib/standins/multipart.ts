const LINE_END = Buffer.from("\r\n");
const HEAD_END = Buffer.from("\r\n\r\n");
const MAX_HEAD = 16_384;

/**
 * The bytes of a multipart body's one part, as they come. A body that breaks off yields what
 * surely belongs to the file and then throws: the rest can be asked for again.
 */
export async function* onePart(body: AsyncIterable<Buffer>): AsyncGenerator<Buffer> {
  let held: Buffer = Buffer.alloc(0);
  let delimiter: Buffer | undefined;
  for await (const chunk of body) {
    held = held.length === 0 ? chunk : Buffer.concat([held, chunk]);
    if (!delimiter) {
      const end = held.indexOf(HEAD_END);
      if (end < 0) {
        if (held.length > MAX_HEAD) throw new Error("the part has no head");
        continue;
      }
      delimiter = Buffer.concat([LINE_END, held.subarray(0, held.indexOf(LINE_END))]);
      held = held.subarray(end + HEAD_END.length);
    }
    const end = held.indexOf(delimiter);
    if (end >= 0) {
      if (end > 0) yield held.subarray(0, end);
      for await (const _rest of body) void _rest;
      return;
    }
    // The delimiter may begin in the last bytes: keep them until more is known.
    const sure = held.length - delimiter.length + 1;
    if (sure > 0) {
      yield held.subarray(0, sure);
      held = held.subarray(sure);
    }
  }
  throw new Error("the body broke off");
}
