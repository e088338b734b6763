"use server";
import { action } from "@/app/_edge/action";
import { ok, refuse } from "@/lib/base/result";
import { keepHolidays } from "@/lib/ledger/calendar.commands";

const MOST = 1_000_000;

/** A pasted list, or a file in its place. */
export const keep = action(
  async (ctx, input) => {
    const file = input.file instanceof File ? input.file : null;
    if (file && file.size > MOST)
      return refuse("too_large", "The file is over 1 MB. Cut it down to the holidays.", {
        fields: { holidays: ["The file is over 1 MB. Cut it down to the holidays."] },
      });
    const text = file ? await file.text() : typeof input.holidays === "string" ? input.holidays : "";
    const kept = await keepHolidays(ctx, { holidays: text });
    return kept.ok ? ok({ years: kept.value.years.join("-") }) : kept;
  },
  ({ years }) => `/terms/calendar?kept=${years}`,
);
