/**
 * Expected failures are values with reasons. A throw is a bug.
 *
 * Codes are closed: the map to HTTP in app/_edge/route.ts is an exhaustive switch.
 */
export const REFUSAL_CODES = [
  "invalid", // the input does not parse; `fields` says where
  "unauthenticated",
  "forbidden",
  "not_found", // also: what this person may not see
  "conflict", // somebody was first, or it exists already
  "stale", // the version the person saw is not the newest
  "version_missing", // a change came without the version it was made against
  "rule", // the input parses, but a rule of the trade refuses it
  "too_large",
  "unsupported",
  "too_many",
  "unavailable",
] as const;
export type RefusalCode = (typeof REFUSAL_CODES)[number];

export type Refusal = {
  code: RefusalCode;
  /** One plain sentence that says what to do. Safe to show to the person who asked. */
  message: string;
  /** Field name to the sentences about it. */
  fields?: Record<string, string[]>;
  /** Facts for the screen, such as the id and number of the record that was first. */
  details?: Record<string, string | number | boolean | null>;
};

export type Ok<T> = { ok: true; value: T };
export type Refused = { ok: false; refusal: Refusal };
export type Result<T> = Ok<T> | Refused;

export function ok(): Ok<undefined>;
export function ok<T>(value: T): Ok<T>;
export function ok<T>(value?: T): Ok<T | undefined> {
  return { ok: true, value };
}

export function refuse(
  code: RefusalCode,
  message: string,
  more: Omit<Refusal, "code" | "message"> = {},
): Refused {
  return { ok: false, refusal: { code, message, ...more } };
}

/** For tests and the demo: the value, or a throw that carries the refusal's words. */
export function must<T>(result: Result<T>): T {
  if (result.ok) return result.value;
  throw new Error(
    `${result.refusal.code}: ${result.refusal.message} ${JSON.stringify(result.refusal.fields ?? {})}`,
  );
}
