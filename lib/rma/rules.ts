import { addDays, rollToWorkday, type Workweek } from "../base/civil";
import { mod37_36 } from "../base/checkchar";
import { ok, refuse, type Result } from "../base/result";
import { RMA_STATE_WORDS, type RmaState } from "./schema";

/** What can be done to an RMA. */
export const RMA_ACTS = [
  "authorize",
  "decline",
  "mark_sent",
  "receive",
  "start_bench",
  "settle",
  "withdraw",
  "expire",
] as const;
export type RmaAct = (typeof RMA_ACTS)[number];

/** The state table: from a state, the acts that are permitted and where each leads. */
export const RMA_STEPS: Record<RmaState, Partial<Record<RmaAct, RmaState>>> = {
  requested: { authorize: "authorized", decline: "declined", withdraw: "withdrawn" },
  authorized: { mark_sent: "in_transit", receive: "received", withdraw: "withdrawn", expire: "expired" },
  in_transit: { receive: "received" },
  // More lines may still come after the first.
  received: { receive: "received", start_bench: "at_bench" },
  at_bench: { receive: "at_bench", start_bench: "at_bench", settle: "settled" },
  settled: {},
  declined: {},
  expired: {},
  withdrawn: {},
};

const ACT_WORDS: Record<RmaAct, string> = {
  authorize: "be authorized",
  decline: "be declined",
  mark_sent: "be marked as sent",
  receive: "be received",
  start_bench: "go to the bench",
  settle: "be settled",
  withdraw: "be withdrawn",
  expire: "expire",
};

export const nextSteps = (state: RmaState): RmaAct[] =>
  RMA_ACTS.filter((a) => RMA_STEPS[state][a] !== undefined);

/** The state after an act, or the reason why it cannot be. */
export function canStep(state: RmaState, act: RmaAct): Result<RmaState> {
  const to = RMA_STEPS[state][act];
  if (to !== undefined) return ok(to);
  const next = nextSteps(state);
  const may =
    next.length === 0
      ? "Nothing more happens to it."
      : `It can ${next.map((a) => ACT_WORDS[a]).join(" or ")}.`;
  return refuse("rule", `An RMA that is ${RMA_STATE_WORDS[state]} cannot ${ACT_WORDS[act]}. ${may}`);
}

/** Check characters that look like another one: such a number is never given out. */
const ALIKE = "IOQUZSB";

/**
 * RMA-1207-K: a count and its check character by ISO/IEC 7064 MOD 37,36 over "RMA1207".
 * Null where the check would look like another character; the next count is taken then.
 */
export function rmaNumber(count: number): string | null {
  const check = mod37_36(`RMA${count}`);
  return ALIKE.includes(check) ? null : `RMA-${count}-${check}`;
}

/** Reads a number as people and scanners give it. */
export function parseRmaNumber(text: string): Result<string> {
  const m = /^\s*RMA[\s-]*(\d{3,9})[\s-]*([0-9A-Z])\s*$/i.exec(text);
  if (!m) return refuse("invalid", "An RMA number looks like RMA-1207-K.");
  const check = m[2]!.toUpperCase();
  if (mod37_36(`RMA${m[1]}`) !== check)
    return refuse(
      "invalid",
      `${text.trim()} is misread: its last character does not fit its digits. Scan it again, or read it out digit by digit.`,
    );
  return ok(`RMA-${m[1]}-${check}`);
}

/** Days to send it in: a limit to act, so it rolls to a working day of the receiving site. Common practice, no source. */
export const SEND_WITHIN_DAYS = 14;
export function sendBy(authorizedOn: string, week: Workweek): string {
  return rollToWorkday(addDays(authorizedOn, SEND_WITHIN_DAYS), week);
}

export type PackStep = {
  title: string;
  text: string;
  drawing: "cap" | "bag" | "foam" | "data" | "paper" | "truck" | "clamshell" | "lift";
};

/** Packing steps for exactly these parts. Common practice, no source: the carrier's and local rules come first. */
export function packingSteps(
  lines: readonly { family: string; dataBearing: boolean }[],
  sendByWords: string,
): PackStep[] {
  const has = (...f: string[]) => lines.some((l) => f.includes(l.family));
  const steps: PackStep[] = [];
  if (has("system", "board"))
    steps.push({
      drawing: "cap",
      title: "Cap the sockets",
      text: "Put the socket cover on, corner mark to corner mark. Never ship bare contacts.",
    });
  else if (has("processor"))
    steps.push({
      drawing: "clamshell",
      title: "Into the clamshell",
      text: "Hold it by the edges, corner mark to corner mark, and close the shell.",
    });
  else
    steps.push({
      drawing: "cap",
      title: "Take only this part",
      text: "Leave rails, caddies, bezels and cables with you, unless the list above names them.",
    });
  steps.push({
    drawing: "bag",
    title: "Bag it",
    text: "Static-shielding bag, closed with a label. Pink film is no shielding.",
  });
  steps.push({
    drawing: "foam",
    title: has("system") ? "7 cm all round" : "5 cm all round",
    text: "Foam on all six sides, in a box of its own. Nothing may rattle.",
  });
  if (lines.some((l) => l.dataBearing))
    steps.push({
      drawing: "data",
      title: "Data",
      text: "Clear the drives first, or tick the box and we sanitize them. You get a record.",
    });
  steps.push({
    drawing: "paper",
    title: "This half inside",
    text: "Cut at the dashes: tag on the unit, this half on top. RMA number on the outside.",
  });
  steps.push({
    drawing: "truck",
    title: `Send by ${sendByWords}`,
    text: "Hand it over the counter and keep the receipt.",
  });
  return steps;
}

export type Caution = {
  drawing: "mains" | "esd" | "heat" | "battery" | "lift" | "data" | "sharp" | "socket";
  title: string;
  detail: string;
};

/** Team lift from this weight (NIOSH lifting equation constant: 23 kg). */
export const TEAM_LIFT_KG = 23;

/** Cautions that stand on the papers and at the dock for these parts. */
export function cautionsFor(
  lines: readonly { family: string; weightKg: number | null; dataBearing: boolean; battery: string }[],
): Caution[] {
  const out: Caution[] = [];
  if (lines.some((l) => l.battery !== "none"))
    out.push({
      drawing: "battery",
      title: "Lithium battery inside",
      detail: "Swollen, hot, leaking or dented: do not ship. Isolate it and call us. Never by air.",
    });
  const weight = Math.max(0, ...lines.map((l) => l.weightKg ?? 0));
  if (weight >= TEAM_LIFT_KG)
    out.push({
      drawing: "lift",
      title: `Two-person lift, ${weight} kg`,
      detail: weight >= 45 ? "Use a lifting aid." : "Use a table lift if alone.",
    });
  else if (weight >= 15)
    out.push({ drawing: "lift", title: `Heavy, ${weight} kg`, detail: "Lift with a straight back." });
  if (lines.some((l) => l.dataBearing))
    out.push({
      drawing: "data",
      title: "Data-bearing",
      detail: "Remove or sanitize first, or accept our sanitization.",
    });
  if (lines.some((l) => l.family === "power_supply"))
    out.push({
      drawing: "mains",
      title: "Never open a power supply",
      detail: "Unplug every feed and wait before you pull it.",
    });
  if (lines.some((l) => ["system", "board", "processor"].includes(l.family)))
    out.push({ drawing: "socket", title: "Socket cover on", detail: "Bare contacts bend at a touch." });
  out.push({
    drawing: "esd",
    title: "Shielding bag, wrist strap",
    detail: "Static destroys parts without a trace.",
  });
  return out;
}
