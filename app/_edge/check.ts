import "server-only";
import { headers } from "next/headers";
import { redirect } from "next/navigation";
import type { CheckPage } from "@/components/coverage/check-form";
import { checkPage } from "@/components/coverage/check-page";
import type { CheckShown } from "@/components/coverage/check-panel";
import { refuse, type Result } from "@/lib/base/result";
import {
  CHECK_FILTERS,
  checkSheet,
  fits,
  MAX_BYTES,
  MAX_CHOSEN,
  readLines,
  type CheckAnswer,
  type CheckFilter,
  type ReadLines,
} from "@/lib/coverage/check";
import { checkDay, checkSerials } from "@/lib/coverage/check.queries";
import type { Ctx } from "@/lib/ctx";
import { startFromCheck } from "@/lib/tickets/check.commands";
import { currentCtx } from "./ctx";

const text = (form: FormData, name: string): string => {
  const value = form.get(name);
  return typeof value === "string" ? value : "";
};

type Asked = { day: string; read: ReadLines; answers: CheckAnswer[] };

async function ask(ctx: Ctx, form: FormData): Promise<Result<Asked>> {
  const file = form.get("file");
  const given = file instanceof File && file.size > 0 ? file : null;
  if (given && given.size > MAX_BYTES) {
    const why = "This file is over 1 MiB. Leave the serials only, or split it and check each part.";
    return refuse("too_large", why, { fields: { file: [why] } });
  }
  const day = checkDay(ctx, text(form, "day").trim());
  if (!day.ok) return day;
  const read = readLines(given ? new Uint8Array(await given.arrayBuffer()) : text(form, "text"));
  if (!read.ok)
    return refuse(read.refusal.code, read.refusal.message, {
      fields: { [given ? "file" : "text"]: [read.refusal.message] },
    });
  const answers = await checkSerials(ctx, read.value.lines, day.value);
  if (!answers.ok) return answers;
  return { ok: true, value: { day: day.value, read: read.value, answers: answers.value } };
}

const crossSite = async () => (await headers()).get("sec-fetch-site") === "cross-site";

/**
 * Many serials checked, shown and reported by one form, for staff and customers alike: who asks is in
 * the context, and beneath it in the database's role. A report started leads to its case or ticket.
 */
export async function answerCheck(
  form: FormData,
  who: { staff: boolean; reports: boolean },
): Promise<CheckShown> {
  const ctx = await currentCtx();
  const typed = { text: text(form, "text"), day: text(form, "day") };
  const no = (message: string, fields: Record<string, string[]> = {}): CheckShown => ({
    page: null,
    message,
    fields,
    typed,
  });
  if (await crossSite()) return no("This form was sent from another site.");
  const asked = await ask(ctx, form);
  if (!asked.ok) return no(asked.refusal.message, asked.refusal.fields);
  const { day, read, answers } = asked.value;
  const startable = answers.filter((a) => a.startable);
  const wanted = text(form, "show") || text(form, "shown");
  const show: CheckFilter =
    CHECK_FILTERS.find((f) => f === wanted && answers.some((a) => fits(a, f))) ?? "all";
  const may = new Set(startable.map((a) => a.unit!.unitId));
  const choose = text(form, "choose");
  const chosen =
    choose === "all"
      ? [...may].slice(0, MAX_CHOSEN)
      : choose === "none"
        ? []
        : form
            .getAll("units[]")
            .filter((u): u is string => typeof u === "string")
            .filter((u) => may.has(u));
  let problem: CheckPage["problem"] = null;
  if (who.reports && text(form, "intent") === "start") {
    const started = await startFromCheck(ctx, {
      formId: text(form, "formId"),
      unitIds: chosen,
      faultClass: text(form, "faultClass") as never,
      words: text(form, "words"),
      battery: text(form, "battery") as never,
      data: (text(form, "data") || undefined) as never,
      personEmail: text(form, "personEmail"),
      personName: text(form, "personName"),
    });
    if (started.ok) redirect(who.staff ? `/desk/${started.value.number}` : `/cases/${started.value.number}`);
    problem = { message: started.refusal.message, fields: started.refusal.fields ?? {} };
  }
  const page = checkPage({
    day,
    read,
    answers,
    show,
    chosen,
    staff: who.staff,
    formId: text(form, "formId"),
    problem,
    typed: Object.fromEntries(
      ["faultClass", "words", "battery", "data", "personEmail", "personName"].map((n) => [n, text(form, n)]),
    ),
  });
  return { page, message: null, fields: {}, typed };
}

const plain = (status: number, words: string) =>
  new Response(words, {
    status,
    headers: { "content-type": "text/plain; charset=utf-8", "cache-control": "no-store" },
  });

/** The same form, answered as a file. */
export async function checkCsv(request: Request): Promise<Response> {
  const ctx = await currentCtx();
  if (ctx.actor.kind === "anonymous") return plain(404, "Not found.");
  if (await crossSite()) return plain(403, "This form was sent from another site.");
  if (Number(request.headers.get("content-length") ?? 0) > 4 * MAX_BYTES)
    return plain(413, "This is over 1 MiB. Leave the serials only, or split it and check each part.");
  const form = await request.formData().catch(() => null);
  if (!form) return plain(400, "Send the form again.");
  const asked = await ask(ctx, form);
  if (!asked.ok)
    return plain(
      asked.refusal.code === "forbidden" ? 404 : 400,
      `${asked.refusal.message} Go back and send it again.`,
    );
  return new Response(checkSheet(asked.value.answers), {
    headers: {
      "content-type": "text/csv; charset=utf-8",
      "content-disposition": `attachment; filename="cover-${asked.value.day}.csv"`,
      "cache-control": "private, no-store",
      "x-content-type-options": "nosniff",
    },
  });
}
