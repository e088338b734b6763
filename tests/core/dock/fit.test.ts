import { describe, expect, it } from "vitest";
import { fit, type Facts } from "@/lib/dock/fit";

const p = (family: string, modelCode: string, facts: Facts) => ({ family, modelCode, facts });
const cpu = (code: string, more: Facts = {}) =>
  p("processor", code, { socket: "CS4", generation: 2, cores: 16, clock: 2.4, watts: 150, ...more });
const mem = (code: string, more: Facts = {}) =>
  p("memory", code, { type: "gen 4", form: "full height", registered: "yes", gb: 32, speed: 2933, ...more });
const drive = (code: string, more: Facts = {}) =>
  p("drive", code, { interface: "two-lane", form: "2.5 inch", media: "flash", gb: 1920, ...more });
const psu = (code: string, more: Facts = {}) =>
  p("power_supply", code, { form: "slim", connector: "blade 12", watts: 800, ...more });

/** What may go out for what. Same or better by the model's facts: common practice, no source. */
const TABLE: [
  what: string,
  wanted: ReturnType<typeof p>,
  offered: ReturnType<typeof p>,
  fits: boolean,
  says: RegExp,
][] = [
  ["the same model, whatever its facts say", cpu("A"), p("processor", "A", {}), true, /^$/],
  ["another family", cpu("A"), drive("B"), false, /a drive, and a processor is wanted/],
  ["another socket", cpu("A"), cpu("B", { socket: "CS1" }), false, /socket differs: CS1 instead of CS4/],
  ["another generation", cpu("A"), cpu("B", { generation: 3 }), false, /generation differs/],
  ["fewer cores", cpu("A"), cpu("B", { cores: 8 }), false, /Less cores: 8 instead of 16/],
  ["a slower clock", cpu("A"), cpu("B", { clock: 2.1 }), false, /Less clock: 2.1 instead of 2.4 GHz/],
  ["more cores", cpu("A"), cpu("B", { cores: 24 }), true, /licenses counted per core/],
  ["more heat", cpu("A"), cpu("B", { watts: 185 }), true, /check the heat sink/],
  ["new firmware", cpu("A"), cpu("B", { firmware: "2.0" }), true, /needs firmware 2\.0/],
  ["another memory type", mem("A"), mem("B", { type: "gen 5" }), false, /memory type differs/],
  ["unbuffered for buffered", mem("A"), mem("B", { registered: "no" }), false, /buffering differs/],
  ["more memory, faster", mem("A"), mem("B", { gb: 64, speed: 3200 }), true, /^$/],
  ["slower memory", mem("A"), mem("B", { speed: 2666 }), false, /Less speed/],
  ["a spinning drive for flash", drive("A"), drive("B", { media: "disk" }), false, /media differs/],
  ["a larger drive", drive("A"), drive("B", { gb: 3840 }), true, /^$/],
  ["a smaller drive", drive("A"), drive("B", { gb: 960 }), false, /Less capacity: 960 instead of 1920 GB/],
  ["another plug", psu("A"), psu("B", { connector: "blade 16" }), false, /connector differs/],
  ["more power", psu("A"), psu("B", { watts: 1600 }), true, /^$/],
  ["facts that nobody wrote down", drive("A"), p("drive", "B", {}), false, /not known instead of two-lane/],
  ["capacity as a word", drive("A"), drive("B", { gb: "lots" }), false, /Less capacity: lots/],
  ["a family nothing is known of", p("cable", "A", {}), p("cable", "B", {}), false, /Only the same model/],
];

describe("fit", () => {
  it.each(TABLE)("%s", (_what, wanted, offered, fits, says) => {
    const found = fit(wanted, offered);
    expect(found.fits).toBe(fits);
    expect([...found.reasons, ...found.warnings].join(" ")).toMatch(says);
    expect(found.reasons.length === 0).toBe(fits);
  });
});
