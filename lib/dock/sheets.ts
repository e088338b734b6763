import type { StepVerdict } from "./schema";

/** One step of a checklist. A step with limits judges its own reading. */
export type SheetStep = {
  step: number;
  title: string;
  detail: string;
  /** What to write down, with its unit of measure; none for a plain yes or no. */
  measure: { name: string; unit: string; min?: number; max?: number } | null;
  /** The scanned serial must be the unit's own. */
  serial?: boolean;
  photo?: boolean;
};
export type Sheet = { code: string; issue: number; title: string; minutes: number; steps: SheetStep[] };

/**
 * Checklists by part family, versioned: a test keeps the issue it was made by.
 * Steps and limits are common practice, no source, and a site's own come before them.
 */
const first: SheetStep[] = [
  {
    step: 1,
    title: "Label photo agrees with the serial",
    detail: "Read the label itself, not the carton.",
    measure: { name: "serial read", unit: "" },
    serial: true,
  },
  {
    step: 2,
    title: "Look it over, photograph before you touch",
    detail: "Corrosion, burnt smell, bent or missing pieces.",
    measure: null,
    photo: true,
  },
];
const sheet = (
  code: string,
  issue: number,
  title: string,
  minutes: number,
  rest: Omit<SheetStep, "step">[],
): Sheet => ({
  code,
  issue,
  title,
  minutes,
  steps: [...first, ...rest.map((s, i) => ({ ...s, step: i + 3 }))],
});

export const SHEETS: Record<string, Sheet> = {
  drive: sheet("drive", 3, "drive", 45, [
    {
      title: "Log read on our host",
      detail: "A drive may say passed and still be bad: read the counts.",
      measure: { name: "reallocated", unit: "blocks", max: 50 },
    },
    {
      title: "Unreadable blocks",
      detail: "Pending and uncorrectable together.",
      measure: { name: "unreadable", unit: "blocks", max: 0 },
    },
    {
      title: "Long self-test",
      detail: "Let it run to its end.",
      measure: { name: "done", unit: "%", min: 100 },
    },
    {
      title: "Hours against the clause",
      detail: "Power-on hours from the log.",
      measure: { name: "hours", unit: "h" },
    },
  ]),
  memory: sheet("memory", 2, "memory module", 60, [
    {
      title: "Seen in a known-good slot",
      detail: "Full size, right speed.",
      measure: { name: "size seen", unit: "GB", min: 1 },
    },
    {
      title: "Memory test, four passes",
      detail: "Count errors, corrected ones too.",
      measure: { name: "errors", unit: "", max: 0 },
    },
    {
      title: "Warm test at the customer's fault",
      detail: "Same slot, same load, 40 °C intake.",
      measure: { name: "errors", unit: "", max: 0 },
    },
  ]),
  power_supply: sheet("power supply", 2, "power supply", 40, [
    {
      title: "Not burnt, not wet",
      detail: "A burnt or wet supply is not powered: stop here and choose fail.",
      measure: null,
    },
    {
      title: "Standby rail at the plug",
      detail: "On the load board, cover closed.",
      measure: { name: "rail", unit: "V", min: 11.4, max: 12.6 },
    },
    {
      title: "Half load, ten minutes",
      detail: "Watch for a trip.",
      measure: { name: "held", unit: "min", min: 10 },
    },
    {
      title: "Other feed, same load",
      detail: "A lost feed is not a failed supply.",
      measure: { name: "held", unit: "min", min: 10 },
    },
  ]),
  processor: sheet("processor", 2, "processor", 60, [
    {
      title: "Contacts and lands under the scope",
      detail: "Corner mark aligned, socket cover off only now.",
      measure: { name: "marks found", unit: "", max: 0 },
      photo: true,
    },
    {
      title: "Starts in a known-good board",
      detail: "Captive screws by hand driver, in the order on the heat sink.",
      measure: { name: "sockets seen", unit: "", min: 1 },
    },
    {
      title: "Load test, 30 minutes",
      detail: "Heat sink stays hot ten minutes after.",
      measure: { name: "errors", unit: "", max: 0 },
    },
  ]),
  board: sheet("board", 6, "four-socket board", 90, [
    {
      title: "Standby rail at the supply plug",
      detail: "Both supplies unplugged, then one.",
      measure: { name: "rail", unit: "V", min: 4.75, max: 5.25 },
    },
    {
      title: "Starts with the claimed socket empty",
      detail: "Count the sockets seen.",
      measure: { name: "sockets seen", unit: "", min: 1 },
    },
    {
      title: "Known-good processor in the claimed socket",
      detail: "Reseat once before you call it.",
      measure: null,
    },
    {
      title: "Socket under the scope, by row and column",
      detail: "Count every contact off its line. Photograph before you touch any.",
      measure: { name: "contacts bent", unit: "", max: 0 },
      photo: true,
    },
    { title: "Caps back on all sockets", detail: "Before it moves.", measure: null },
  ]),
  other: sheet("general", 4, "general", 30, [
    { title: "The customer's case, made to happen", detail: "Same slot, same load, twice.", measure: null },
    { title: "Known-good part in its place", detail: "Does the fault stay or go?", measure: null },
    { title: "Soak", detail: "Hours without the fault.", measure: { name: "soak", unit: "h", min: 1 } },
  ]),
};

export function sheetFor(family: string): Sheet {
  return SHEETS[family] ?? SHEETS.other!;
}

/** The verdict a reading gives by its limits; null where a person must say. */
export function verdictOf(step: SheetStep, value: string): StepVerdict | null {
  if (!step.measure || (step.measure.min === undefined && step.measure.max === undefined)) return null;
  // One number with its unit behind it. Words alone, two numbers, or a comma that may be a thousand's
  // or a decimal's are a person's to judge: read wrongly, they would pass a bad part.
  const read = /^\s*([+-]?\d+(?:[.,]\d+)?)[^\d]*$/.exec(value)?.[1];
  if (read === undefined || /,\d{3}$/.test(read)) return null;
  const n = Number(read.replace(",", "."));
  if (step.measure.min !== undefined && n < step.measure.min) return "fail";
  if (step.measure.max !== undefined && n > step.measure.max) return "fail";
  return "pass";
}

export function limitWords(step: SheetStep): string {
  const m = step.measure;
  if (!m) return "pass or fail";
  const unit = m.unit ? ` ${m.unit}` : "";
  if (m.min !== undefined && m.max !== undefined) return `${m.min} to ${m.max}${unit}`;
  if (m.min !== undefined) return `at least ${m.min}${unit}`;
  if (m.max !== undefined) return m.max === 0 ? "none allowed" : `at most ${m.max}${unit}`;
  return m.unit || m.name;
}
