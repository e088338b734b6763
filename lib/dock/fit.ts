export type Facts = Record<string, string | number>;
export type PartLike = { modelCode: string; family: string; facts: Facts };
export type Fit = { fits: boolean; same: boolean; reasons: string[]; warnings: string[] };

/** Facts that must be equal, per family, in words. */
const EQUAL: Record<string, [fact: string, words: string][]> = {
  processor: [
    ["socket", "socket"],
    ["generation", "generation"],
  ],
  memory: [
    ["type", "memory type"],
    ["form", "form factor"],
    ["registered", "buffering"],
  ],
  drive: [
    ["interface", "interface"],
    ["form", "form factor"],
    ["media", "media"],
  ],
  power_supply: [
    ["form", "form factor"],
    ["connector", "connector"],
  ],
  board: [
    ["socket", "socket"],
    ["chassis", "chassis"],
  ],
  system: [["chassis", "chassis"]],
  fan: [["form", "form factor"]],
  network: [["interface", "interface"]],
  controller: [["interface", "interface"]],
};
/** Facts that must be the same or more. */
const AT_LEAST: Record<string, [fact: string, words: string, unit: string][]> = {
  processor: [
    ["cores", "cores", ""],
    ["clock", "clock", "GHz"],
  ],
  memory: [
    ["gb", "capacity", "GB"],
    ["speed", "speed", "MT/s"],
  ],
  drive: [["gb", "capacity", "GB"]],
  power_supply: [["watts", "power", "W"]],
  network: [["gbps", "speed", "Gb/s"]],
};

/**
 * Whether a part may go out for another: the same or better by the facts of its model.
 * Says why one does not fit, and what to think of where it is better.
 */
export function fit(wanted: PartLike, offered: PartLike): Fit {
  const reasons: string[] = [];
  const warnings: string[] = [];
  if (wanted.modelCode === offered.modelCode) return { fits: true, same: true, reasons, warnings };
  if (wanted.family !== offered.family) {
    return {
      fits: false,
      same: false,
      reasons: [
        `It is a ${offered.family.replace("_", " ")}, and a ${wanted.family.replace("_", " ")} is wanted.`,
      ],
      warnings,
    };
  }
  for (const [fact, words] of EQUAL[wanted.family] ?? []) {
    const [w, o] = [wanted.facts[fact], offered.facts[fact]];
    if (w === undefined && o === undefined) continue;
    if (w !== o) reasons.push(`The ${words} differs: ${o ?? "not known"} instead of ${w ?? "not known"}.`);
  }
  for (const [fact, words, unit] of AT_LEAST[wanted.family] ?? []) {
    const [w, o] = [wanted.facts[fact], offered.facts[fact]];
    if (w === undefined) continue;
    if (typeof o !== "number" || typeof w !== "number" || o < w)
      reasons.push(`Less ${words}: ${o ?? "not known"} instead of ${w}${unit ? ` ${unit}` : ""}.`);
  }
  const known = (EQUAL[wanted.family]?.length ?? 0) + (AT_LEAST[wanted.family]?.length ?? 0);
  if (known === 0) reasons.push("Only the same model can replace it: nothing says that another one fits.");
  const more = (f: string) => Number(offered.facts[f] ?? 0) > Number(wanted.facts[f] ?? 0);
  if (wanted.family === "processor" && more("cores"))
    warnings.push(
      `It has ${offered.facts.cores} cores instead of ${wanted.facts.cores}: licenses counted per core may cost the customer more. Ask first.`,
    );
  if (wanted.family === "processor" && more("watts"))
    warnings.push(
      `It draws ${offered.facts.watts} W instead of ${wanted.facts.watts} W: check the heat sink.`,
    );
  if (offered.facts.firmware !== undefined && offered.facts.firmware !== wanted.facts.firmware)
    warnings.push(`It needs firmware ${offered.facts.firmware}.`);
  return { fits: reasons.length === 0, same: false, reasons, warnings };
}
