import { capital, countWord, plural, showDayShort } from "@/lib/base/show";
import { civilDayIn } from "@/lib/base/civil";
import type { Ctx } from "@/lib/ctx";
import { defaultSite } from "@/lib/ledger/queries";
import { desk, type DeskFilter, type DeskRow } from "./queries";
import type { DeskGroupView, DeskRowView, DeskView, WaitingOn } from "./schema";
import { agoWords, clockView } from "./show";

const ORDER: WaitingOn[] = ["us", "customer", "carrier", "dock", "bench", "supplier"];

function glyphOf(r: DeskRow, today: string): DeskRowView["cover"] {
  if (!r.serial || r.proposed) return { state: "none", words: r.serial ? "unit proposed" : "no unit yet" };
  if (r.outcome === "needs_person") return { state: "person", words: "needs a person" };
  if (r.outcome === "covered_doa") return { state: "doa", words: "DOA window" };
  if (r.outcome === "covered") return { state: "covered", words: "covered" };
  if (r.outcome === "not_covered") return { state: "ended", words: "not covered" };
  if (!r.windowLastOn) return { state: "person", words: "needs a person" };
  return r.windowLastOn < today ? { state: "ended", words: "ended" } : { state: "covered", words: "covered" };
}

/** The desk as its screen and API show it: groups by whom we wait on, clocks in words. */
export async function deskView(ctx: Ctx, filter: DeskFilter): Promise<DeskView> {
  const { rows, more } = await desk(ctx, filter);
  const site = await defaultSite(ctx);
  const today = civilDayIn(ctx.now, site.zone);
  const view = (r: DeskRow): DeskRowView => ({
    id: r.id,
    number: r.number,
    serial: r.serial,
    isPart: r.isPart,
    proposed: r.proposed,
    fault: r.faultWords,
    customer: r.customer,
    clock: clockView(r, ctx.now, site),
    waitingFor: r.waitingFor,
    cover: glyphOf(r, today),
    rmaNumber: r.rmaNumber,
    evidenceWanted: r.evidenceWanted,
    evidenceCame: r.evidenceCame,
    lastLine: r.lastEntryLine,
    lastAgo: agoWords(r.lastEntryAt, ctx.now, site.zone),
    window:
      r.firstOn && r.windowLastOn
        ? {
            firstOn: r.firstOn,
            lastOn: r.windowLastOn,
            clause: r.clauseNumber ?? "",
            words: `last covered day ${showDayShort(r.windowLastOn)}`,
          }
        : null,
  });
  const groups: DeskGroupView[] = ORDER.flatMap((on) => {
    const own = rows.filter((r) => r.waitingOn === on).map(view);
    if (own.length === 0) return [];
    const over = own.filter((r) => r.clock.state === "over").length;
    const late = own.filter((r) => r.clock.state === "rest" && r.clock.late).length;
    const note = over > 0 ? `${countWord(over)} past due` : late > 0 ? `${countWord(late)} to chase` : "";
    return [{ on, rows: own, note }];
  });
  const onUs = groups.find((g) => g.on === "us")?.rows.length ?? 0;
  const over = groups.reduce((n, g) => n + g.rows.filter((r) => r.clock.state === "over").length, 0);
  const total = rows.length;
  const sentence =
    total === 0
      ? filter.q
        ? "Nothing open matches."
        : "No ticket is open."
      : `${more ? "More than " : ""}${capital(countWord(total))} ${plural(total, "ticket")} ${total === 1 ? "is" : "are"} open; ${onUs === 0 ? "none waits on us" : `${countWord(onUs)} ${onUs === 1 ? "waits" : "wait"} on us`}.`;
  return {
    sentence,
    second:
      over === 0 ? "None is past due." : `${capital(countWord(over))} ${over === 1 ? "is" : "are"} past due.`,
    groups,
    more,
    today,
    asOf: ctx.now.toISOString(),
    zone: site.zone,
  };
}
