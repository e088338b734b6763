/** A failure with a cause that the person can mend: told in one line, without a stack. */
export class Plain extends Error {}

/** The one line for what stops a start, or undefined when it is a bug of ours. */
export function plainWords(thrown: unknown): string | undefined {
  if (thrown instanceof Plain) return thrown.message;
  const code = (thrown as { code?: string } | null)?.code;
  const message = thrown instanceof Error ? thrown.message : String(thrown);
  if (code === "ENOSPC" || /No space left on device/i.test(message))
    return "The disk is full. Free some space, then start again.";
  if (code === "EROFS")
    return "The folder is on a read-only file system: Mendbay needs to write beside itself.";
  if (code === "EACCES" || code === "EPERM") return `Not allowed: ${message}`;
  return undefined;
}
