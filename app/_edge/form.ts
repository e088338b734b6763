import type { Refusal, Result } from "@/lib/base/result";

/** What a form shows after it was sent: with `values`, so that nothing typed is lost. */
export type FormState<T = unknown> = {
  ok: boolean;
  message?: string;
  fields?: Record<string, string[]>;
  values?: Record<string, string | string[]>;
  details?: Refusal["details"];
  value?: T;
};

/** The state before anything was sent: the first argument of useActionState. */
export const UNSENT: FormState<never> = { ok: false };

/**
 * The fields of a form as a plain object for a command's schema: a name that comes twice, or ends
 * with `[]`, is a list; a dot goes one level down; a field left empty is left out, files stay files.
 */
export function formInput(form: FormData): Record<string, unknown> {
  const input: Record<string, unknown> = Object.create(null);
  for (const name of new Set(form.keys())) {
    if (name.startsWith("$")) continue; // the framework's own
    const all = form.getAll(name).filter((v) => (typeof v === "string" ? v !== "" : v.size > 0));
    if (all.length === 0) continue;
    const listed = name.endsWith("[]") || all.length > 1;
    const path = name.replace(/\[\]$/, "").split(".");
    if (path.some((step) => step === "" || step === "__proto__")) continue;
    let at = input;
    for (const step of path.slice(0, -1)) {
      const below = at[step];
      at = (typeof below === "object" && below !== null ? below : (at[step] = Object.create(null))) as Record<
        string,
        unknown
      >;
    }
    at[path.at(-1)!] = listed ? all : all[0];
  }
  return input;
}

/** What was typed, to be shown again. Files cannot be. */
export function formValues(form: FormData): Record<string, string | string[]> {
  const values: Record<string, string | string[]> = {};
  for (const name of new Set(form.keys())) {
    if (name.startsWith("$")) continue;
    const texts = form.getAll(name).filter((v): v is string => typeof v === "string");
    if (texts.length > 1 || name.endsWith("[]")) values[name] = texts;
    else if (texts[0] !== undefined) values[name] = texts[0];
  }
  return values;
}

export function stateOf<T>(result: Result<T>, form: FormData): FormState<T> {
  if (result.ok) return { ok: true, value: result.value };
  const { message, fields, details } = result.refusal;
  return { ok: false, message, fields, details, values: formValues(form) };
}
