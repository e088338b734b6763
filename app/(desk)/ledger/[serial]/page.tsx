import { serialInPath } from "@/lib/base/serial";
import type { Metadata } from "next";
import { notFound } from "next/navigation";
import { requireStaff } from "@/app/_edge/ctx";
import { CoverLegend } from "@/components/coverage/glyph";
import { coverNodes, rulerRows } from "@/components/coverage/rows";
import { LawAside } from "@/components/coverage/law-notice";
import { Ruler } from "@/components/coverage/ruler";
import { CoverTree } from "@/components/coverage/tree";
import { Tag } from "@/components/ui/tag";
import { may } from "@/lib/auth/rules";
import { civilDayIn } from "@/lib/base/civil";
import { showDay } from "@/lib/base/show";
import { lawNotice } from "@/lib/coverage/law.queries";
import { coverFor } from "@/lib/coverage/queries";
import { env } from "@/lib/env";
import { salesOf, unitBySerial } from "@/lib/ledger/queries";
import { find } from "@/lib/tickets/queries";
import { placeWords } from "../words";
import { Holding } from "./holding";

export async function generateMetadata({
  params,
}: {
  params: Promise<{ serial: string }>;
}): Promise<Metadata> {
  return { title: serialInPath((await params).serial) };
}

export default async function UnitPage({
  params,
  searchParams,
}: {
  params: Promise<{ serial: string }>;
  searchParams: Promise<{ noted?: string }>;
}) {
  const ctx = await requireStaff();
  const mayNote = may(ctx, "ledger.give_on");
  const unit = await unitBySerial(ctx, serialInPath((await params).serial));
  if (!unit) notFound();
  const today = civilDayIn(ctx.now, env().MENDBAY_ZONE);
  const view = await coverFor(ctx, unit.unitId, today);
  const law = view
    ? await lawNotice(ctx, { country: view.country, buyerKind: view.buyerKind, onDay: today })
    : null;
  const sales = await salesOf(ctx, unit.unitId);
  const tickets = (await find(ctx, unit.serial)).hits.filter((h) => h.kind === "ticket");
  return (
    <main id="main">
      <div className="thead">
        <div>
          <div className="id">
            <Tag serial={unit.serial} big string />
            <span>
              {unit.modelName}, {unit.condition}
              <br />
              {unit.accountName ?? "not sold"}
              {unit.orderNumber ? (
                <>
                  , order <span className="m">{unit.orderNumber}</span>
                </>
              ) : null}
            </span>
            {unit.systemSerial ? (
              <span>
                {unit.slot} of
                <br />
                <Tag
                  serial={unit.systemSerial}
                  part
                  href={`/ledger/${encodeURIComponent(unit.systemSerial)}`}
                />
              </span>
            ) : null}
          </div>
          <h1>{placeWords(unit).charAt(0).toUpperCase() + placeWords(unit).slice(1)}.</h1>
        </div>
      </div>
      {view ? (
        <div className="rulerwrap">
          <Ruler rows={rulerRows(view)} shippedOn={view.shippedOn} todayOn={today} />
        </div>
      ) : null}
      <div className="tbody">
        <section className="record" aria-label="Its life">
          <div className="sec">
            <h2>Sales</h2>
            <span className="q">newest first; the newest decides</span>
          </div>
          {sales.length === 0 ? (
            <p className="q">
              It was never sold by itself{unit.systemSerial ? "; it went out in its system" : ""}.
            </p>
          ) : null}
          {sales.length > 0 ? (
            <ul className="plist">
              {sales.map((s) => (
                <li key={s.saleLineId}>
                  <span className="m">{s.orderNumber}</span>, {s.accountName}, {s.condition}, shipped{" "}
                  {showDay(s.shippedOn)}
                  {s.deliveredOn ? `, delivered ${showDay(s.deliveredOn)}` : ", no proof of delivery"}
                  {s.endedOn ? `; ended ${showDay(s.endedOn)}: ${s.endedReason ?? ""}` : ""}
                </li>
              ))}
            </ul>
          ) : null}
          <div className="sec">
            <h2>Tickets</h2>
          </div>
          {tickets.length === 0 ? <p className="q">No claim was ever made about it.</p> : null}
          {tickets.length > 0 ? (
            <ul className="plist">
              {tickets.map((t) => (
                <li key={t.href}>
                  <a href={t.href}>{t.label}</a>, {t.detail}
                </li>
              ))}
            </ul>
          ) : null}
          {view ? (
            <p className="q mt-4">
              Sold under{" "}
              <a href={`/terms/${view.termsVersionId}`}>
                {view.termsName}, issue {view.termsIssue}
              </a>
              .
            </p>
          ) : null}
          {law ? <LawAside notice={law} staff /> : null}
          {view && view.pauses.length + view.transfers.length > 0 ? (
            <ul className="plist">
              {view.transfers.map((t) => (
                <li key={t.on}>
                  Given on on {showDay(t.on)}
                  {t.noticedOn
                    ? `, with written notice of ${showDay(t.noticedOn)}`
                    : ", no written notice yet"}
                </li>
              ))}
              {view.pauses.map((p) => (
                <li key={p.from}>
                  Cover rested from {showDay(p.from)} to {showDay(p.to)}
                </li>
              ))}
            </ul>
          ) : null}
          {mayNote && (unit.accountId || unit.systemSerial) ? (
            <>
              <div className="sec">
                <h2>What has become of it</h2>
                {(await searchParams).noted ? (
                  <span className="r ok" role="status">
                    Noted; its cover follows.
                  </span>
                ) : null}
              </div>
              <Holding
                unit={{ unitId: unit.unitId, serial: unit.serial }}
                sold={sales.some((s) => s.endedOn === null)}
                part={unit.systemSerial !== null}
                waits={view?.transfers.some((t) => t.noticedOn === null) ?? false}
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
            </>
          ) : (
            <p className="q">A unit in stock has no cover and no tree yet.</p>
          )}
        </aside>
      </div>
    </main>
  );
}
