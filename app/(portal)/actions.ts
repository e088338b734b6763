"use server";
import { redirect } from "next/navigation";
import { action } from "@/app/_edge/action";
import { currentCtx } from "@/app/_edge/ctx";
import { ok, refuse } from "@/lib/base/result";
import { FAULT_CLASSES } from "@/lib/coverage/schema";
import { keepAnswers, startReport } from "@/lib/evidence/commands";
import { unitBySerial, unitsByIds } from "@/lib/ledger/queries";
import { authorizeRma, markSent, withdrawRma } from "@/lib/rma/commands";
import { reply } from "@/lib/tickets/commands";
import { sendReport } from "@/lib/tickets/report.commands";

/** Starts a report; with a unit known it begins at the second question. */
export async function begin(form: FormData): Promise<void> {
  const ctx = await currentCtx();
  const unitId = form.get("unitId");
  const known = (await unitsByIds(ctx, [idOf(unitId)])).length > 0;
  const started = await startReport(ctx, known ? { unitId: String(unitId) } : {});
  if (!started.ok) redirect("/sign-in");
  redirect(`/report/${started.value.reportId}/${known ? 2 : 1}`);
}

const text = (v: unknown): string => (typeof v === "string" ? v : "");
const NONE = "00000000-0000-0000-0000-000000000000";
/** An id as a form sends it; what is none finds nothing. */
const idOf = (v: unknown): string =>
  /^[0-9a-f]{8}(-[0-9a-f]{4}){3}-[0-9a-f]{12}$/.test(text(v)) ? text(v) : NONE;

/** Keeps one page's answer and goes on; `back=check` returns to the check page. */
export const answer = action(
  async (ctx, input) => {
    const reportId = idOf(input.reportId);
    const page = Number(input.page);
    const no = (field: string, why: string) =>
      refuse("invalid", "One answer needs another look.", { fields: { [field]: [why] } });
    const answers: Record<string, string> = {};
    if (page === 1) {
      const typed = text(input.serial);
      const unit = typed ? await unitBySerial(ctx, typed) : (await unitsByIds(ctx, [idOf(input.unitId)]))[0];
      if (!unit)
        return no(
          typed ? "serial" : "unitId",
          typed
            ? `We do not find ${typed} among your equipment. Blanks, dashes and capitals do not matter; zero and O do.`
            : "Choose a unit, or type its serial.",
        );
      answers.unitId = unit.systemUnitId ?? unit.unitId;
      if (unit.systemUnitId) answers.partId = unit.unitId;
    } else if (page === 2) {
      if (!text(input.partId)) return no("partId", "Choose the part, or the whole unit.");
      answers.partId = text(input.partId);
    } else if (page === 3) {
      if (!(FAULT_CLASSES as readonly string[]).includes(text(input.faultClass)))
        return no("faultClass", "Choose what comes closest.");
      answers.faultClass = text(input.faultClass);
    } else if (page === 4) {
      if (text(input.words).trim().length < 3) return no("words", "Tell us in a few words what you see.");
      if (text(input.words).length > 4000)
        return no("words", "Keep it under 4 000 characters; files can say the rest.");
      answers.words = text(input.words).trim();
      answers.since = text(input.since).slice(0, 120);
    } else if (page === 6) {
      if (!["none", "inside", "damaged"].includes(text(input.battery)))
        return no("battery", "Say whether a battery is damaged.");
      answers.battery = text(input.battery);
      answers.data = text(input.data) === "sanitize" ? "sanitize" : "cleared";
    }
    const kept = await keepAnswers(ctx, reportId, answers);
    if (!kept.ok) return kept;
    return ok({
      reportId,
      to: text(input.back) === "check" ? 7 : page === 1 && answers.partId ? 3 : page + 1,
    });
  },
  ({ reportId, to }) => `/report/${reportId}/${to}`,
);

export const send = action(
  (ctx, input) => sendReport(ctx, idOf(input.reportId)),
  ({ number }) => `/cases/${number}/decision`,
);

export const answerCase = action(
  async (ctx, input) => {
    const done = await reply(ctx, { ticketId: text(input.ticketId), text: text(input.text) });
    return done.ok ? ok({ number: text(input.number) }) : done;
  },
  ({ number }) => `/cases/${number}?sent=1#newest`,
);

export const chooseRemedy = action(
  async (ctx, input) => {
    const battery = text(input.battery);
    if (!["none", "inside", "damaged"].includes(battery))
      return refuse("invalid", "Say first whether a battery is damaged.");
    return authorizeRma(ctx, {
      ticketId: text(input.ticketId),
      lines: (Array.isArray(input.units) ? input.units : []).map((u) => ({ ticketUnitId: text(u) })),
      remedy: text(input.remedy) as never,
      battery: { present: battery !== "none", damaged: battery === "damaged" },
      shipTo: text(input.shipTo)
        .split("\n")
        .map((l) => l.trim())
        .filter(Boolean)
        .slice(0, 6),
    });
  },
  ({ number }) => `/rma/${number}`,
);

export const sent = action(
  async (ctx, input) => {
    const done = await markSent(ctx, {
      rmaId: text(input.rmaId),
      carrier: text(input.carrier),
      tracking: text(input.tracking),
    });
    return done.ok ? ok({ number: text(input.number) }) : done;
  },
  ({ number }) => `/rma/${number}`,
);

export const withdraw = action(
  async (ctx, input) => {
    const done = await withdrawRma(ctx, { rmaId: text(input.rmaId) });
    return done.ok ? ok({ number: text(input.number) }) : done;
  },
  ({ number }) => `/rma/${number}`,
);
