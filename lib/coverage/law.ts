import { z } from "zod";
import { LAW_REGIONS, type LawRegion } from "./schema";

/**
 * Notices of rights by law that stand beside the terms of a contract. They warn; they decide nothing,
 * and no rule of the engine reads them. The words are ours; what they say of a statute is named in
 * `source`. Where a fact was not read in the statute itself but is from memory, the source says so.
 */
export type LawNotice = {
  region: LawRegion;
  forConsumers: boolean;
  /** Shown from this day on, until a later one of the same region and buyer. */
  effectiveOn: string;
  title: string;
  words: string;
  source: string;
};

export const REGION_WORDS: Record<LawRegion, string> = {
  EU: "European Union",
  UK: "United Kingdom",
  US: "United States",
  AU: "Australia",
  other: "everywhere else",
};

/** Goes with every notice, always. */
export const LAW_CAUTION =
  "Local law comes first. We tell you of it and do not decide it; where it matters, ask licensed advice.";

/** Members of the Union, and the three of the European Economic Area that apply its consumer law (from memory). */
const EU = new Set(
  "AT BE BG CY CZ DE DK EE EL ES FI FR GR HR HU IE IT LT LU LV MT NL PL PT RO SE SI SK IS LI NO".split(" "),
);

/** The body of law for a country of delivery, by its ISO 3166 code. */
export function regionOf(country: string): LawRegion {
  const code = country.trim().toUpperCase();
  if (EU.has(code)) return "EU";
  if (code === "GB" || code === "UK") return "UK";
  if (code === "US") return "US";
  return code === "AU" ? "AU" : "other";
}

/** A buyer we do not know is told what a consumer is told. */
export const toldAsConsumer = (buyerKind: string): boolean => buyerKind !== "business";

const ALWAYS = "2000-01-01";
/** What is shown until an admin keeps a notice of their own. One of each region and buyer from ever on. */
export const BUILT_IN: readonly LawNotice[] = [
  {
    region: "EU",
    forConsumers: true,
    effectiveOn: ALWAYS,
    title: "Your rights as a consumer in the European Union",
    words:
      "Beside our warranty the seller answers by law for goods that are not as agreed when a fault shows within two years of delivery. In the first year it counts as there from the start, unless shown otherwise. Repair or replacement then cost you nothing, and neither does sending it back. Your country may give you more; for used goods it may set a shorter time.",
    source:
      "Directive (EU) 2019/771 Art. 10(1), 11(1); free repair and used goods: Art. 10(6), 14, from memory",
  },
  {
    region: "EU",
    forConsumers: true,
    effectiveOn: "2026-07-31",
    title: "Your rights as a consumer in the European Union",
    words:
      "Beside our warranty the seller answers by law for goods that are not as agreed when a fault shows within two years of delivery. In the first year it counts as there from the start, unless shown otherwise. Repair or replacement then cost you nothing, and neither does sending it back; where you choose repair, the time is longer by twelve months. Your country may give you more; for used goods it may set a shorter time.",
    source:
      "Directive (EU) 2019/771 Art. 10(1), 11(1); Directive (EU) 2024/1799, applied from 31 July 2026; free repair and used goods from memory",
  },
  {
    region: "EU",
    forConsumers: false,
    effectiveOn: ALWAYS,
    title: "Business purchases in the European Union",
    words:
      "Between businesses the contract and the law of the country it names apply beside our warranty. Some laws ask a business buyer to inspect on arrival and to complain at once. Tell us of a fault as soon as you see it.",
    source: "German Commercial Code s. 377 as an example, from memory",
  },
  {
    region: "UK",
    forConsumers: true,
    effectiveOn: ALWAYS,
    title: "Your rights as a consumer in the United Kingdom",
    words:
      "Beside our warranty you may by law reject faulty goods within 30 days of having them. After that you may ask for repair or replacement, at our cost, and if that fails for a lower price or a final rejection. A fault that shows within six months counts as there on delivery, unless shown otherwise. Claims from a contract may be brought for years after.",
    source: "Consumer Rights Act 2015 s. 19(14)-(15), 20(8), 22(3), 23, 24; Limitation Act 1980 s. 5",
  },
  {
    region: "UK",
    forConsumers: false,
    effectiveOn: ALWAYS,
    title: "Business purchases in the United Kingdom",
    words:
      "Between businesses the contract and the law it names apply beside our warranty. Claims from a contract may be brought for six years, in Scotland for five. Tell us of a fault as soon as you see it.",
    source: "Limitation Act 1980 s. 5; Scotland from memory",
  },
  {
    region: "US",
    forConsumers: true,
    effectiveOn: ALWAYS,
    title: "Your rights in the United States",
    words:
      "Our warranty gives you specific legal rights, and you may have others, which vary from state to state. What the law implies about goods that are sold stands beside our warranty. Our warranty does not depend on your using a part or a service of a named maker, unless we give it free.",
    source: "16 CFR 700.10 for the last sentence; the first from memory of 16 CFR 701.3",
  },
  {
    region: "US",
    forConsumers: false,
    effectiveOn: ALWAYS,
    title: "Business purchases in the United States",
    words:
      "Between businesses the contract and the law of the state it names apply beside our warranty. Tell us of a fault as soon as you see it, so that the notice is in time.",
    source: "Common practice, no source",
  },
  {
    region: "AU",
    forConsumers: true,
    effectiveOn: ALWAYS,
    title: "Your guarantees in Australia",
    words:
      "Guarantees of the Australian Consumer Law stand beside our warranty and may last longer. Where a failure is major you choose between a replacement and a refund; where it is minor we may choose how to make it good, without charge and within a reasonable time.",
    source:
      "Australian Consumer Law, from memory; check the wording prescribed for written warranties before printing one",
  },
  {
    region: "AU",
    forConsumers: false,
    effectiveOn: ALWAYS,
    title: "Business purchases in Australia",
    words:
      "Guarantees of the Australian Consumer Law may cover a business purchase too, up to a price or where goods are of a kind used in a household, unless bought to sell on. They stand beside our warranty and may last longer.",
    source: "Australian Consumer Law, thresholds from memory",
  },
  {
    region: "other",
    forConsumers: true,
    effectiveOn: ALWAYS,
    title: "Your rights by law",
    words:
      "The law of your country may give you rights beside our warranty, and more than it gives. Nothing in our terms takes them away.",
    source: "Common practice, no source",
  },
  {
    region: "other",
    forConsumers: false,
    effectiveOn: ALWAYS,
    title: "Business purchases",
    words:
      "Between businesses the contract and the law it names apply beside our warranty. Across borders a fault has to be told within a reasonable time; tell us as soon as you see it.",
    source: "CISG Art. 38, 39, from memory",
  },
];

/**
 * The notice for a buyer in a country on a day. The newest that has begun; of one day, one that was
 * kept before one that is built in. There always is one.
 */
export function noticeFor(
  kept: readonly LawNotice[],
  at: { country: string; buyerKind: string; onDay: string },
): LawNotice {
  const region = regionOf(at.country);
  const forConsumers = toldAsConsumer(at.buyerKind);
  const begun = [...kept, ...BUILT_IN].filter(
    (n) => n.region === region && n.forConsumers === forConsumers && n.effectiveOn <= at.onDay,
  );
  return begun.reduce((best, n) => (n.effectiveOn > best.effectiveOn ? n : best));
}

/** Wording that takes away what the law gives, or decides it. No notice and no letter may have it. */
export const FORBIDDEN: readonly RegExp[] = [
  /\bno (?:other |further |legal )?rights?\b/i,
  /\b(?:have|has|had) no (?:claim|warranty)\b/i,
  /\bwarranty (?:is )?void\b|\bvoids? (?:the|your|our) warranty\b/i,
  /\byou (?:are|will be) not entitled\b/i,
  /\ball (?:other )?(?:implied )?warranties are (?:excluded|disclaimed)\b/i,
  /\binstead of (?:your |any )?rights by law\b/i,
];
export const forbiddenIn = (text: string): string | null =>
  FORBIDDEN.map((r) => r.exec(text)?.[0] ?? null).find((found) => found !== null) ?? null;

const fair = (text: string, at: z.core.$RefinementCtx<string>) => {
  const found = forbiddenIn(text);
  if (found)
    at.addIssue({
      code: "custom",
      message: `“${found}” takes away what the law may give. Write “under our warranty” and leave the law beside it.`,
    });
};
export const KeepLawNotice = z.object({
  region: z.enum(LAW_REGIONS, { error: "Choose where it is for." }),
  forConsumers: z.boolean(),
  effectiveOn: z.iso.date("Give the day it is shown from, such as 2026-07-31."),
  title: z
    .string()
    .trim()
    .min(5, "Give it a title that the customer reads first.")
    .max(120, "Keep the title under 120 characters.")
    .superRefine(fair),
  words: z
    .string()
    .trim()
    .min(30, "Say it in a sentence or more.")
    .max(1200, "Keep it under 1200 characters: who reads a letter reads two or three sentences.")
    .superRefine(fair),
  source: z.string().trim().min(3, "Name the statute, or write that it is common practice.").max(300),
});
