import type { Metadata } from "next";
import { notFound } from "next/navigation";
import { requireStaff } from "@/app/_edge/ctx";
import { CoverLegend } from "@/components/coverage/glyph";
import { coverNodes, rulerRows } from "@/components/coverage/rows";
import { Ruler } from "@/components/coverage/ruler";
import { LawAside } from "@/components/coverage/law-notice";
import { CoverTree } from "@/components/coverage/tree";
import { DueClock } from "@/components/tickets/due";
import { Tag } from "@/components/ui/tag";
import { may } from "@/lib/auth/rules";
import { civilDayIn } from "@/lib/base/civil";
import { goodwillOfTicket, oursOfGoodwill } from "@/lib/coverage/goodwill.queries";
import { lawNotice } from "@/lib/coverage/law.queries";
import { coverFor, decisionInputs, decisionsOf, differencesOf } from "@/lib/coverage/queries";
import { evidenceOf } from "@/lib/evidence/queries";
import { defaultSite } from "@/lib/ledger/queries";
import { rmasOfTicket } from "@/lib/rma/queries";
import { ticketByNumber } from "@/lib/tickets/queries";
import { clockView } from "@/lib/tickets/show";
import { Acts } from "./acts";
import { Composer } from "./composer";
import { Record } from "./record";
import { UnitPlate } from "./unit-plate";

export async function generateMetadata({
  params,
}: {
  params: Promise<{ number: string }>;
}): Promise<Metadata> {
  return { title: `Ticket ${(await params).number}` };
}

export default async function Ticket({
  params,
  searchParams,
}: {
  params: Promise<{ number: string }>;
  searchParams: Promise<{ done?: string }>;
}) {
  const ctx = await requireStaff("agent", "manager", "admin", "warehouse");
  const t = await ticketByNumber(ctx, Number((await params).number));
  if (!t) notFound();
  const site = await defaultSite(ctx);
  const today = civilDayIn(ctx.now, site.zone);
  const tied = t.units.filter((u) => u.state === "tied");
  // A system whose part is tied needs no question of its own.
  const answered = new Set(tied.flatMap((u) => [u.unitId, u.systemUnitId]));
  const proposed = t.units.filter((u) => u.state === "proposed" && !answered.has(u.unitId));
  const main = tied[0] ?? proposed[0];
  const view = main ? await coverFor(ctx, main.unitId, today) : null;
  const [evidence, decisions, differences, rmas] = [
    await evidenceOf(ctx, t.id),
    await decisionsOf(ctx, t.id),
    await differencesOf(ctx, t.id),
    await rmasOfTicket(ctx, t.id),
  ];
  const goodwill = await goodwillOfTicket(ctx, t.id);
  const newest = decisions.at(-1);
  const known = newest ? await decisionInputs(ctx, newest.id) : null;
  const law = view
    ? await lawNotice(ctx, { country: view.country, buyerKind: view.buyerKind, onDay: t.claimOn })
    : null;
  const clock = clockView(t, ctx.now, site);
  const rma = rmas[0];
  const done = (await searchParams).done;
  const mayAct = may(ctx, "ticket.reply");
  return (
    <main id="main">
      <div className="thead">
        <div>
          <div className="id">
            {main ? (
              <Tag
                serial={main.serial}
                big
                string
                current={false}
                href={`/ledger/${encodeURIComponent(main.serial)}`}
              />
            ) : (
              <span className="tag notch big">no unit yet</span>
            )}
            <span>
              {main
                ? `${main.modelCode}, ${main.modelName}${view ? `, ${view.unit.condition}` : ""}`
                : t.subject}
              <br />
              {t.accountName ?? t.personEmail}
              {view ? (
                <>
                  , order <span className="m">{view.orderNumber}</span>
                </>
              ) : null}
            </span>
            <span className="tnum">
              Ticket <span className="m">{t.number}</span>
              <br />
              {rma ? <span className="m">{rma.number}</span> : "no RMA"}
            </span>
          </div>
          <h1>“{t.faultWords.length > 180 ? `${t.faultWords.slice(0, 178)}…` : t.faultWords}”</h1>
        </div>
        <div className="clock">
          {t.closedAt ? "Closed" : `Waiting on ${t.waitingOn}: ${t.waitingFor}`}
          <br />
          <span className="clockline">
            <DueClock state={clock.state} share={clock.share} words={clock.words} late={clock.late} />
          </span>
          {clock.by ? (
            <>
              <br />
              <span className="s">{clock.by}</span>
            </>
          ) : null}
        </div>
      </div>
      {view ? (
        <div className="rulerwrap">
          <Ruler rows={rulerRows(view)} shippedOn={view.shippedOn} claimOn={t.claimOn} todayOn={today} />
        </div>
      ) : null}
      <div className="tbody">
        <section className="record" aria-label="Record">
          <div className="sec">
            <h2>Record</h2>
            <span className="q">oldest first, nothing is ever removed</span>
            {done ? (
              <span className="r ok" role="status">
                Kept{/^[A-Z]\d+$/.test(done) ? ` as ${done}` : ""}.
              </span>
            ) : null}
          </div>
          {mayAct && proposed.length > 0 ? (
            <UnitPlate
              ticketId={t.id}
              number={t.number}
              units={proposed.map((u) => ({ unitId: u.unitId, serial: u.serial, modelName: u.modelName }))}
            />
          ) : null}
          <Record
            entries={t.entries}
            messages={t.messages}
            evidence={evidence}
            decisions={decisions}
            differences={differences}
            ours={await oursOfGoodwill(ctx, t.id)}
            rmas={rmas}
            zone={site.zone}
          />
          {mayAct ? (
            <>
              <Acts
                ticketId={t.id}
                number={t.number}
                closed={t.closedAt !== null}
                firstDay={t.claimOn}
                known={
                  known
                    ? {
                        ticketUnitId: newest!.ticketUnitId ?? "",
                        established: known.established,
                        ruledOut: known.ruledOut,
                        powerOnHours: known.readings.powerOnHours ?? null,
                        terabytes: known.readings.bytesWritten ? known.readings.bytesWritten / 1e12 : null,
                        logSerial: known.readings.serial ?? null,
                      }
                    : null
                }
                units={tied.map((u) => {
                  const d = decisions.filter((x) => x.ticketUnitId === u.id).at(-1);
                  return {
                    ticketUnitId: u.id,
                    serial: u.serial,
                    what: u.slot ? `${u.slot}, ${u.modelName}` : u.modelName,
                    faultClass: u.faultClass,
                    decision: d
                      ? {
                          outcome: d.answer.outcome,
                          remedies: d.answer.remedies,
                          fees: d.answer.fees.map((f) => `${f.words} ${(f.cents / 100).toFixed(2)} EUR`),
                          headline: d.answer.headline.staff,
                        }
                      : null,
                    goodwill: {
                      waits:
                        goodwill.find((g) => g.state === "asked" && g.ticketUnitId === u.id)?.askedByName ??
                        null,
                      grants: goodwill.filter(
                        (g) =>
                          g.state === "granted" &&
                          g.ticketUnitId === u.id &&
                          g.decisionId === d?.id &&
                          g.usedBy === null,
                      ),
                    },
                    rmaNumber:
                      rmas.find((r) =>
                        r.lines.some(
                          (l) => l.ticketUnitId === u.id && ["open", "received", "tested"].includes(l.state),
                        ),
                      )?.number ?? null,
                  };
                })}
              />
              <Composer
                ticketId={t.id}
                number={t.number}
                personName={t.personName}
                nextMail={t.entries.filter((e) => e.letter === "M").length + 1}
                faultClass={main?.faultClass ?? null}
                refs={t.entries.map((e) => e.ref)}
              />
            </>
          ) : null}
        </section>
        <aside className="built" aria-label="As built, and since">
          <div className="sec">
            <h2>As built, and since</h2>
          </div>
          {view ? (
            <>
              <CoverTree
                nodes={coverNodes(view, (serial) => `/ledger/${encodeURIComponent(serial)}`)}
                todayOn={today}
              />
              <CoverLegend states={["covered", "doa", "ended", "person"]} />
              {law ? <LawAside notice={law} staff /> : null}
            </>
          ) : (
            <p className="q">Tie a unit, and its tree stands here.</p>
          )}
        </aside>
      </div>
    </main>
  );
}
