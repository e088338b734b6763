import { readFileSync } from "node:fs";
import { expect } from "vitest";

export type Case = {
  id: string;
  title: string;
  // eslint-disable-next-line @typescript-eslint/no-explicit-any -- each method's case has its own shape
  input: any;
  // eslint-disable-next-line @typescript-eslint/no-explicit-any
  expected: any;
  tolerance: { rel: number; abs: number };
  source: string;
};

const file = JSON.parse(readFileSync(new URL("./reference/reliability.json", import.meta.url), "utf8")) as {
  cases: Case[];
};

/** A published or independently computed case, by its id. Each carries its source. */
export function reference(id: string): Case {
  const found = file.cases.find((c) => c.id === id);
  if (!found) throw new Error(`no reference case ${id}`);
  return found;
}

/** The file's own rule: |got - want| <= abs + rel * |want|; null is equal to null alone. */
export function near(got: number | null | undefined, want: number | null, of: Case, what: string): void {
  if (want === null) {
    expect(got, `${of.id} ${what}`).toBeNull();
    return;
  }
  expect(got, `${of.id} ${what}`).toBeTypeOf("number");
  const room = of.tolerance.abs + of.tolerance.rel * Math.abs(want);
  expect(Math.abs(got! - want), `${of.id} ${what}: ${got} against ${want}`).toBeLessThanOrEqual(room);
}
