import { describe, expect, it } from "vitest";
import {
  canStep,
  nextSteps,
  packingSteps,
  cautionsFor,
  parseRmaNumber,
  RMA_ACTS,
  rmaNumber,
  sendBy,
  type RmaAct,
} from "@/lib/rma/rules";
import { RMA_STATES, type RmaState } from "@/lib/rma/schema";

/** Every state and every act, where it leads; "-" where it is refused. Our own rule. */
const MATRIX: Record<RmaState, Record<RmaAct, RmaState | "-">> = {
  requested: row("authorized", "declined", "-", "-", "-", "-", "withdrawn", "-"),
  authorized: row("-", "-", "in_transit", "received", "-", "-", "withdrawn", "expired"),
  in_transit: row("-", "-", "-", "received", "-", "-", "-", "-"),
  received: row("-", "-", "-", "received", "at_bench", "-", "-", "-"),
  at_bench: row("-", "-", "-", "at_bench", "at_bench", "settled", "-", "-"),
  settled: row("-", "-", "-", "-", "-", "-", "-", "-"),
  declined: row("-", "-", "-", "-", "-", "-", "-", "-"),
  expired: row("-", "-", "-", "-", "-", "-", "-", "-"),
  withdrawn: row("-", "-", "-", "-", "-", "-", "-", "-"),
};
function row(...to: (RmaState | "-")[]): Record<RmaAct, RmaState | "-"> {
  return Object.fromEntries(RMA_ACTS.map((a, i) => [a, to[i]!])) as Record<RmaAct, RmaState | "-">;
}

describe("states of an RMA", () => {
  it.each(RMA_STATES.flatMap((s) => RMA_ACTS.map((a) => [s, a, MATRIX[s][a]] as const)))(
    "%s, %s: %s",
    (state, act, to) => {
      const step = canStep(state, act);
      if (to === "-") {
        expect(step).toMatchObject({ ok: false, refusal: { code: "rule" } });
        if (!step.ok)
          expect(step.refusal.message).toMatch(/^An RMA that is .+ cannot .+\. (It can|Nothing more)/);
      } else expect(step).toEqual({ ok: true, value: to });
    },
  );

  it("offers exactly the acts it permits", () => {
    for (const s of RMA_STATES) expect(nextSteps(s)).toEqual(RMA_ACTS.filter((a) => MATRIX[s][a] !== "-"));
  });

  it("leads from every state that is not an end to an end", () => {
    const ends = new Set<RmaState>(["settled", "declined", "expired", "withdrawn"]);
    for (const from of RMA_STATES) {
      const seen = new Set<RmaState>([from]);
      for (const s of seen)
        for (const a of RMA_ACTS) if (MATRIX[s][a] !== "-") seen.add(MATRIX[s][a] as RmaState);
      expect([...seen].some((s) => ends.has(s))).toBe(true);
    }
  });
});

/** ISO/IEC 7064 hybrid system MOD 37,36, written here from the standard's recursion, apart from ours. */
function check37(text: string): string {
  const set = "0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZ";
  let p = 36;
  for (const c of text) {
    const sum = (p + set.indexOf(c)) % 36 || 36;
    p = (sum * 2) % 37;
  }
  return set[(37 - p) % 36]!;
}

describe("RMA numbers", () => {
  it("carry the check character of ISO/IEC 7064 MOD 37,36, never one that looks like another", () => {
    let skipped = 0;
    for (let n = 100; n < 4000; n++) {
      const number = rmaNumber(n);
      const check = check37(`RMA${n}`);
      if (number === null) {
        skipped++;
        expect("IOQUZSB").toContain(check);
      } else {
        expect(number).toBe(`RMA-${n}-${check}`);
        expect(number.at(-1)).toMatch(/[^IOQUZSB]/);
        expect(parseRmaNumber(number)).toEqual({ ok: true, value: number });
      }
    }
    expect(skipped).toBeGreaterThan(0);
  });

  it("are read as people and scanners give them", () => {
    const number = rmaNumber(1207)!;
    const bare = number.replace(/-/g, "");
    for (const said of [number, number.toLowerCase(), bare, ` ${bare}\r\n`, number.replace(/-/g, " ")])
      expect(parseRmaNumber(said)).toEqual({ ok: true, value: number });
  });

  it("refuse every single wrong digit and every swap of two that differ", () => {
    const number = rmaNumber(4711) ?? rmaNumber(4712)!;
    const digits = number.slice(4, 8);
    for (let i = 0; i < 4; i++) {
      for (const d of "0123456789") {
        const wrong = `RMA-${digits.slice(0, i)}${d}${digits.slice(i + 1)}-${number.at(-1)!}`;
        expect(parseRmaNumber(wrong).ok).toBe(wrong === number);
      }
      if (i < 3 && digits[i] !== digits[i + 1]) {
        const swapped = `RMA-${digits.slice(0, i)}${digits[i + 1]!}${digits[i]!}${digits.slice(i + 2)}-${number.at(-1)!}`;
        expect(parseRmaNumber(swapped).ok).toBe(false);
      }
    }
  });

  it.each(["", "RMA", "RMA-12-K", "RMA-1234567890-K", "1207-K", "RMX-1207-K", "RMA-12O7-K"])(
    "are not found in %j",
    (text) => {
      expect(parseRmaNumber(text)).toMatchObject({ ok: false, refusal: { code: "invalid" } });
    },
  );
});

describe("papers", () => {
  it("roll the day to send by to a working day of the site", () => {
    const week = { workdays: [1, 2, 3, 4, 5], holidays: ["2026-12-25"] };
    expect(sendBy("2026-06-03", week)).toBe("2026-06-17");
    // 14 days after Saturday 6 June is a Saturday; 14 after 11 December is Christmas, a Friday.
    expect(sendBy("2026-06-06", week)).toBe("2026-06-22");
    expect(sendBy("2026-12-11", week)).toBe("2026-12-28");
  });

  it("warn of weight, batteries, static and mains where they are", () => {
    const of = (family: string, weightKg: number | null, battery = "none") =>
      cautionsFor([{ family, weightKg, dataBearing: family === "drive", battery }]).map((c) => c.drawing);
    expect(of("system", 38, "coin")).toEqual(["battery", "lift", "socket", "esd"]);
    expect(of("power_supply", 1)).toEqual(["mains", "esd"]);
    expect(of("drive", null)).toEqual(["data", "esd"]);
    // Team lift from 23 kg: the load constant of the revised NIOSH lifting equation (1994).
    const title = (kg: number) =>
      cautionsFor([{ family: "chassis", weightKg: kg, dataBearing: false, battery: "none" }])[0]!.title;
    expect(title(22)).toBe("Heavy, 22 kg");
    expect(title(23)).toBe("Two-person lift, 23 kg");
  });

  it("tell how to pack exactly these parts", () => {
    const titles = (family: string, dataBearing = false) =>
      packingSteps([{ family, dataBearing }], "17 June").map((p) => p.title);
    expect(titles("board")[0]).toBe("Cap the sockets");
    expect(titles("processor")[0]).toBe("Into the clamshell");
    expect(titles("memory")[0]).toBe("Take only this part");
    expect(titles("drive", true)).toContain("Data");
    expect(titles("fan")).not.toContain("Data");
  });
});
