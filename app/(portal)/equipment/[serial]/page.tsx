import { serialInPath } from "@/lib/base/serial";
import type { Metadata } from "next";
import { notFound } from "next/navigation";
import { requireCustomer } from "@/app/_edge/ctx";
import { LawAside } from "@/components/coverage/law-notice";
import { PortalCoverBar } from "@/components/coverage/portal-bar";
import { Button } from "@/components/ui/button";
import { Tag } from "@/components/ui/tag";
import { civilDayIn } from "@/lib/base/civil";
import { showDay } from "@/lib/base/show";
import { lawNotice } from "@/lib/coverage/law.queries";
import { coverFor } from "@/lib/coverage/queries";
import { env } from "@/lib/env";
import { unitBySerial } from "@/lib/ledger/queries";
import { FAMILY_WORDS, type Family } from "@/lib/ledger/schema";
import { cases } from "@/lib/tickets/queries";
import { begin } from "../../actions";
import { besides } from "../../words";

export const metadata: Metadata = { title: "What is covered" };

export default async function Unit({ params }: { params: Promise<{ serial: string }> }) {
  const ctx = await requireCustomer();
  const hit = await unitBySerial(ctx, serialInPath((await params).serial));
  if (!hit) notFound();
  const today = civilDayIn(ctx.now, env().MENDBAY_ZONE);
  const view = await coverFor(ctx, hit.unitId, today);
  if (!view) notFound();
  const law = await lawNotice(ctx, { country: view.country, buyerKind: view.buyerKind, onDay: today });
  const own = view.rows.find((r) => r.unitId === hit.unitId && r.kind === "cover");
  const doa = view.rows.find((r) => r.unitId === hit.unitId && r.kind === "doa");
  const { rows: open } = await cases(ctx, { before: null, limit: 10, unitId: hit.unitId });
  return (
    <>
      <p className="prow">
        <Tag serial={hit.serial} big />
      </p>
      <h1>
        {own
          ? own.state === "ended"
            ? `Cover ended on ${showDay(own.lastOn)}.`
            : `Covered until ${showDay(own.lastOn)}.`
          : "A person is checking your cover."}
      </h1>
      <p>
        {hit.modelName}, {view.unit.condition}, order <span className="m">{view.orderNumber}</span>
        {view.siteNote ? `, ${view.siteNote}` : ""}. Sold under {view.termsName}, issue {view.termsIssue}.
      </p>
      {besides(view).map((line) => (
        <p key={line}>{line}</p>
      ))}
      {own ? (
        <PortalCoverBar
          shippedOn={view.shippedOn}
          endsOn={own.lastOn}
          doaUntil={doa?.lastOn}
          todayOn={today}
          state={own.state === "ended" ? "ended" : "covered"}
        />
      ) : null}
      <form action={begin} className="prow">
        <input type="hidden" name="unitId" value={view.unit.id} />
        <Button type="submit">Report a fault of this unit</Button>
      </form>
      {open.length > 0 ? (
        <>
          <h2>Your cases about it</h2>
          <ul className="plist">
            {open.map((c) => (
              <li key={c.id}>
                <a href={`/cases/${c.number}`}>Case {c.number}</a>, {c.faultWords}
                {c.closedAt ? ", closed" : ""}
              </li>
            ))}
          </ul>
        </>
      ) : null}
      <h2>Part by part</h2>
      <div className="ptable" role="region" aria-label="Parts and their cover" tabIndex={0}>
        <table className="tbl">
          <thead>
            <tr>
              <th scope="col">Place</th>
              <th scope="col">Serial</th>
              <th scope="col">Last covered day</th>
            </tr>
          </thead>
          <tbody>
            {view.tree.map((p) => {
              const row = view.rows.find((r) => r.unitId === p.unitId && r.kind === "cover");
              return (
                <tr key={p.installationId}>
                  <td>
                    {p.slot}
                    <span className="nm"> {FAMILY_WORDS[p.family as Family].toLowerCase()}</span>
                  </td>
                  <td className="m">{p.serial}</td>
                  <td>
                    {row
                      ? row.state === "ended"
                        ? `ended ${showDay(row.lastOn)}`
                        : showDay(row.lastOn)
                      : "a person checks"}
                    {p.was.map((w) => (
                      <span className="nm" key={w.serial}>
                        {" "}
                        was <s className="m">{w.serial}</s> to {showDay(w.toOn)}
                      </span>
                    ))}
                  </td>
                </tr>
              );
            })}
          </tbody>
        </table>
      </div>
      <LawAside notice={law} />
    </>
  );
}
