import { z } from "zod";
import { parsePeriod } from "../base/period";
import {
  DAY_RULES,
  EXCLUSIONS,
  FAULT_CLASSES,
  START_BASES,
  type ClauseFact,
  type DecideInput,
} from "./schema";
import { clauseFor } from "./windows";

const empty = (v: unknown) => (v === "" ? undefined : v);
const day = z.preprocess(empty, z.iso.date("Give a day of the calendar, such as 2026-03-04.").optional());
const number = (what: string) =>
  z.preprocess(
    empty,
    z.coerce
      .number({ error: `Give ${what} as a number.` })
      .min(0, `${what.charAt(0).toUpperCase()}${what.slice(1)} cannot be negative.`)
      .max(10_000_000, "That is more than any drive lives.")
      .optional(),
  );
const one = <T extends readonly [string, ...string[]]>(of: T) => z.preprocess(empty, z.enum(of).optional());

/** Facts that a person may put otherwise to see the decision move. What is left out stays as it is. */
export const WhatIf = z
  .object({
    claimOn: day,
    faultClass: one(FAULT_CLASSES),
    shippedOn: day,
    deliveredOn: day,
    invoicedOn: day,
    installedOn: day,
    noticedOn: day,
    swappedOn: day,
    pauseFrom: day,
    pauseTo: day,
    hours: number("the hours"),
    terabytes: number("the terabytes"),
    log: one(["this", "other", "none"]),
    shown: one(EXCLUSIONS),
    ruledOut: one(EXCLUSIONS),
    photos: number("the photos"),
    period: z.preprocess(
      empty,
      z
        .string()
        .superRefine((text, at) => {
          const read = parsePeriod(text);
          if (!read.ok) at.addIssue({ code: "custom", message: read.refusal.message });
        })
        .optional(),
    ),
    startBasis: one(START_BASES),
    dayRule: one(DAY_RULES),
  })
  .superRefine((v, at) => {
    if (v.pauseFrom && v.pauseTo && v.pauseTo < v.pauseFrom)
      at.addIssue({
        code: "custom",
        path: ["pauseTo"],
        message: "The last day cannot come before the first.",
      });
    if (!v.pauseFrom !== !v.pauseTo)
      at.addIssue({
        code: "custom",
        path: [v.pauseFrom ? "pauseTo" : "pauseFrom"],
        message: "A pause needs its first and its last day.",
      });
  });
export type WhatIf = z.output<typeof WhatIf>;

/** The clause that gives this unit its cover: the one whose period a person may try. */
export const coverClauseOf = (input: DecideInput): ClauseFact | null =>
  clauseFor(input.clauses, "cover", input.part, input.sale.condition);

/** The input with those facts put otherwise. Nothing is stored, here or by whoever shows it. */
export function withWhatIf(input: DecideInput, ask: WhatIf): DecideInput {
  const { sale, part, readings } = input;
  const clause = coverClauseOf(input);
  const tried: Partial<ClauseFact> = {
    ...(ask.period ? { period: ask.period } : {}),
    ...(ask.startBasis ? { startBasis: ask.startBasis } : {}),
    ...(ask.dayRule ? { dayRule: ask.dayRule } : {}),
  };
  const days = {
    ...(ask.shippedOn ? { shippedOn: ask.shippedOn } : {}),
    ...(ask.deliveredOn ? { deliveredOn: ask.deliveredOn } : {}),
    ...(ask.invoicedOn ? { invoicedOn: ask.invoicedOn } : {}),
    ...(ask.installedOn ? { installedOn: ask.installedOn } : {}),
  };
  const last = sale.transfers.length - 1;
  const without = (list: string[], name: string | undefined) => list.filter((x) => x !== name);
  const plus = (list: string[], name: string | undefined) =>
    name === undefined || list.includes(name) ? list : [...list, name];
  return {
    ...input,
    claimOn: ask.claimOn ?? input.claimOn,
    faultClass: ask.faultClass ?? input.faultClass,
    clauses: input.clauses.map((c) => (c.id === clause?.id ? { ...c, ...tried } : c)),
    sale: {
      ...sale,
      ...days,
      pauses:
        ask.pauseFrom && ask.pauseTo
          ? [...sale.pauses, { from: ask.pauseFrom, to: ask.pauseTo }]
          : sale.pauses,
      transfers: ask.noticedOn
        ? sale.transfers.map((t, i) => (i === last ? { ...t, noticedOn: ask.noticedOn! } : t))
        : sale.transfers,
    },
    part: ask.swappedOn ? { ...part, swaps: [...part.swaps, ask.swappedOn].sort() } : part,
    established: plus(without(input.established, ask.ruledOut), ask.shown),
    ruledOut: plus(without(input.ruledOut, ask.shown), ask.shown === ask.ruledOut ? undefined : ask.ruledOut),
    evidence: ask.photos === undefined ? input.evidence : { ...input.evidence, photos: ask.photos },
    readings: {
      ...readings,
      ...(ask.hours === undefined ? {} : { powerOnHours: ask.hours }),
      ...(ask.terabytes === undefined ? {} : { bytesWritten: ask.terabytes * 1e12 }),
      ...(ask.log === undefined
        ? {}
        : { serialMatches: ask.log === "none" ? undefined : ask.log === "this" }),
    },
  };
}
