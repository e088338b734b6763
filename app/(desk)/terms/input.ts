const text = (v: unknown): string | undefined => (typeof v === "string" ? v.trim() : undefined);
const list = (v: unknown): string[] =>
  (Array.isArray(v) ? v : [v]).filter((x): x is string => typeof x === "string" && x.trim() !== "");

/** A number as typed, thousands parted or not; what is none stays as it is, for the command to refuse. */
function whole(v: unknown): number | string | undefined {
  const typed = text(v);
  if (!typed) return undefined;
  const digits = typed.replace(/[\s\u00a0]|,(?=\d{3}(?:\D|$))/g, "");
  return /^\d{1,9}$/.test(digits) ? Number(digits) : typed;
}

/** An amount as typed, such as 250, 250.00 or 1,250.00, in cents. */
export function cents(v: unknown): number | string | undefined {
  const typed = text(v);
  if (!typed) return undefined;
  const plain = typed.replace(/[\s\u00a0]|EUR|,(?=\d{3}(?:\D|$))/g, "").replace(",", ".");
  return /^\d{1,9}(\.\d{1,2})?$/.test(plain) ? Math.round(Number(plain) * 100) : typed;
}

/** The form of a clause as the command takes it: nothing is judged here. */
export function clauseInput(input: Record<string, unknown>): Record<string, unknown> {
  return {
    versionId: input.versionId,
    version: input.version,
    clauseId: text(input.clauseId) || undefined,
    number: text(input.number) ?? "",
    kind: input.kind,
    title: text(input.title) ?? "",
    // Only with the choice made: a form whose ticks were all taken away must not come to mean every part.
    families: input.parts === "named" ? (input.families === undefined ? [""] : list(input.families)) : [],
    condition: text(input.condition),
    period: text(input.period),
    startBasis: text(input.startBasis),
    deliveryGraceDays: whole(input.deliveryGraceDays),
    dayRule: text(input.dayRule),
    rolls: input.rolls === "on",
    clockStops: input.clockStops === "on",
    replacedRule: text(input.replacedRule),
    transferRule: text(input.transferRule),
    remedies: list(input.remedies),
    dueBackDays: whole(input.dueBackDays),
    holdCents: cents(input.holdCents),
    freight: text(input.freight),
    responseHours: whole(input.responseHours),
    enduranceHours: whole(input.enduranceHours),
    enduranceTb: whole(input.enduranceTb),
    exclusion: text(input.exclusion),
    evidence: (text(input.evidence) ?? "")
      .split(/\r?\n/)
      .map((line) => line.trim())
      .filter(Boolean),
    feeKind: text(input.feeKind),
    feeCents: cents(input.feeCents),
    words: text(input.words),
  };
}
