import { ok, refuse, type Result } from "../base/result";
import { cleanScan, differences, serialKey, type Difference } from "../base/serial";
import type { Disposition, PhotoSlot, TestOutcome } from "./schema";

export type ExpectedLine = { lineId: string; serial: string; state: string };

export type ScanVerdict =
  | { kind: "right"; lineId: string; serial: string }
  | { kind: "again"; lineId: string; serial: string }
  | { kind: "wrong"; expected: string; differences: Difference[]; headline: string };

/**
 * A serial scanned against the lines of an RMA. Right only when it is one of them, character by
 * character behind blanks and dashes; a look-alike is wrong, and said so.
 */
export function matchScan(scanned: string, lines: readonly ExpectedLine[]): ScanVerdict {
  const key = serialKey(scanned);
  const hit = lines.find((l) => serialKey(l.serial) === key);
  if (hit) return { kind: hit.state === "open" ? "right" : "again", lineId: hit.lineId, serial: hit.serial };
  const open = lines.filter((l) => l.state === "open");
  const nearest = [...(open.length > 0 ? open : lines)].sort(
    (a, b) => differences(scanned, a.serial).length - differences(scanned, b.serial).length,
  )[0];
  const expected = nearest?.serial ?? "";
  const diff = expected ? differences(scanned, expected) : [];
  const few = diff.length > 0 && diff.length <= 3;
  const counted =
    ["", "One character differs", "Two characters differ", "Three characters differ"][diff.length] ?? "";
  return {
    kind: "wrong",
    expected,
    differences: diff,
    headline: few
      ? `${counted}: ${diff.map((d) => d.words).join("; ")}.`
      : `${cleanScan(scanned)} is another serial altogether.`,
  };
}

/** Photos without which a part does not move from the dock. */
export function photosNeeded(family: string, condition: string): PhotoSlot[] {
  const needed: PhotoSlot[] = ["label", "arrived"];
  if (family === "board" || family === "processor" || family === "system") needed.push("socket");
  if (condition === "damaged") needed.push("damage");
  return needed;
}

/** What may become of a part after each outcome. */
export const DISPOSITIONS_FOR: Record<TestOutcome, readonly Disposition[]> = {
  fault_confirmed: ["repair", "return_to_supplier", "scrap"],
  no_fault_found: ["restock", "send_back"],
  damage_not_covered: ["send_back", "scrap"],
};

export type CloseFacts = {
  outcome: TestOutcome;
  disposition: Disposition;
  dataBearing: boolean;
  sanitized: boolean;
  photos: number;
  byName: string;
  secondPerson: string;
  earlierNoFaultFound: number;
  byManager: boolean;
  advance: boolean;
};

/** Whether a test may be closed so. Each refusal says what is missing. */
export function mayClose(f: CloseFacts): Result<undefined> {
  const no = (field: string, why: string) => refuse("rule", why, { fields: { [field]: [why] } });
  if (!DISPOSITIONS_FOR[f.outcome].includes(f.disposition)) {
    const may = DISPOSITIONS_FOR[f.outcome].map((d) => d.replace(/_/g, " ")).join(" or ");
    return no(
      "disposition",
      `After this outcome it can go to ${may}, not to ${f.disposition.replace(/_/g, " ")}.`,
    );
  }
  if (f.outcome === "damage_not_covered") {
    if (f.photos === 0) return no("finding", "Damage not covered needs a photo of it first.");
    if (f.secondPerson === "")
      return no("secondPerson", "Damage not covered needs a second pair of eyes: name who looked too.");
    if (f.secondPerson.toLowerCase() === f.byName.toLowerCase())
      return no("secondPerson", "The second pair of eyes must be somebody else's.");
  }
  if (f.disposition === "restock" && f.dataBearing && !f.sanitized)
    return no("sanitization", "It bears data: no restock without its sanitization record.");
  if (
    f.disposition === "restock" &&
    f.outcome === "no_fault_found" &&
    f.earlierNoFaultFound > 0 &&
    !f.byManager
  )
    return no(
      "disposition",
      "This is its second no fault found. A manager decides before it goes back to stock.",
    );
  if (f.advance && f.disposition === "send_back")
    return no("disposition", "Its replacement has been promised in advance, so this one stays with us.");
  return ok();
}

/** A place in the warehouse as it is printed on the bay. */
export const isPlace = (text: string): boolean => /^[A-Z]{1,2}-?\d{1,3}$/i.test(text.trim());

export type Follows = "replacement" | "back" | "money";
export type FollowFacts = { remedy: string; outcome: TestOutcome; disposition: Disposition };

/** What may follow a closed test: a replacement, the same unit back, or money. Each refusal says what does. */
export function mayFollow(how: Follows, f: FollowFacts): Result<undefined> {
  const money = f.remedy === "credit" || f.remedy === "refund";
  const repaired = f.remedy === "repair" && f.disposition === "repair";
  const back = f.disposition === "send_back" || repaired;
  if (how === "back") {
    return back ? ok() : refuse("rule", "Its disposition keeps it here. What was promised goes out instead.");
  }
  if (f.disposition === "send_back")
    return refuse("rule", "After this test the same unit goes back, and nothing else.");
  if (f.outcome === "damage_not_covered")
    return refuse("rule", "The damage is not covered, so nothing goes out for it.");
  if (how === "money") {
    return money && f.outcome === "fault_confirmed"
      ? ok()
      : refuse("rule", `The remedy is ${f.remedy.replace(/_/g, " ")}, not money for a fault found.`);
  }
  if (money) return refuse("rule", `The remedy is a ${f.remedy}: nothing goes out, the sale ends.`);
  return ok();
}
