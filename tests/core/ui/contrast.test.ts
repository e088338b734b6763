import { readFileSync } from "node:fs";
import { describe, expect, it } from "vitest";

// Source: WCAG 2.2, definitions of relative luminance and contrast ratio; success criteria 1.4.3
// (text 4.5) and 1.4.11 (marks and edges 3). The colors are read from the stylesheet itself.

const css = readFileSync("app/_look/tokens.css", "utf8");
const pair = /--([a-z0-9-]+):\s*light-dark\((#[0-9a-f]{6}),\s*(#[0-9a-f]{6})\)/g;
const tokens = new Map(
  [...css.matchAll(pair)].map((m) => [m[1] ?? "", { light: m[2] ?? "", dark: m[3] ?? "" }]),
);
const board = /--gold-board:\s*(#[0-9a-f]{6})/.exec(css)?.[1] ?? "";
tokens.set("gold-board", { light: board, dark: board });

function luminance(hex: string): number {
  const [r = 0, g = 0, b = 0] = [1, 3, 5]
    .map((i) => parseInt(hex.slice(i, i + 2), 16) / 255)
    .map((c) => (c <= 0.04045 ? c / 12.92 : ((c + 0.055) / 1.055) ** 2.4));
  return 0.2126 * r + 0.7152 * g + 0.0722 * b;
}

function ratio(a: string, b: string): number {
  const [hi = 0, lo = 0] = [luminance(a), luminance(b)].sort((x, y) => y - x);
  return (hi + 0.05) / (lo + 0.05);
}

const TEXT = [
  "ink paper",
  "ink sheet",
  "ink bed",
  "ink-2 paper",
  "ink-2 bed",
  "ink-3 paper",
  "ink-3 sheet",
  "ink-3 bed",
  "mask paper",
  "mask mask-tint",
  "ink mask-tint",
  "ink-2 mask-tint",
  "on-mask mask",
  "on-mask mask-2",
  "silk board",
  "silk-dim board",
  "gold-ink paper",
  "gold-ink sheet",
  "gold-ink gold-tint",
  "amber-ink paper",
  "amber-ink amber-tint",
  "oxide paper",
  "oxide sheet",
  "oxide bed",
  "oxide oxide-tint",
  "on-oxide oxide",
  "ink oxide-tint",
  "anod paper",
  "anod sheet",
  "anod bed",
  "paper ink",
];
const MARKS = [
  "gold paper",
  "gold bed",
  "gold sheet",
  "gold-board board",
  "amber paper",
  "cov paper",
  "cov sheet",
  "rule-2 paper",
  "rule-2 sheet",
  "anod paper",
];

describe.each(["light", "dark"] as const)("contrast, %s", (theme) => {
  const color = (name: string) => {
    const found = tokens.get(name);
    if (!found) throw new Error(`no token ${name}`);
    return found[theme];
  };
  it.each(TEXT)("text: %s", (words) => {
    const [on = "", under = ""] = words.split(" ");
    expect(ratio(color(on), color(under))).toBeGreaterThanOrEqual(4.5);
  });
  it.each(MARKS)("mark: %s", (words) => {
    const [on = "", under = ""] = words.split(" ");
    expect(ratio(color(on), color(under))).toBeGreaterThanOrEqual(3);
  });
});

it("computes what the standard says of black on white", () => {
  expect(ratio("#000000", "#ffffff")).toBe(21);
});
