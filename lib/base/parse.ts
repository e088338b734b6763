import type { z } from "zod";
import { ok, refuse, type Result } from "./result";

/** Parses `raw` by a zod schema; a refusal carries every field's messages. */
export function parse<S extends z.ZodType>(schema: S, raw: unknown): Result<z.output<S>> {
  const parsed = schema.safeParse(raw);
  if (parsed.success) return ok(parsed.data);
  const fields: Record<string, string[]> = {};
  for (const issue of parsed.error.issues) {
    const at = issue.path.map(String).join(".") || "form";
    (fields[at] ??= []).push(issue.message);
  }
  const count = Object.keys(fields).length;
  return refuse(
    "invalid",
    count === 1 ? "One field needs another look." : `${count} fields need another look.`,
    {
      fields,
    },
  );
}
