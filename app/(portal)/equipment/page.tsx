import Link from "next/link";
import type { Metadata } from "next";
import { requireCustomer } from "@/app/_edge/ctx";
import { PortalCoverBar } from "@/components/coverage/portal-bar";
import { Button, ButtonLink } from "@/components/ui/button";
import { Empty } from "@/components/ui/empty";
import { Tag } from "@/components/ui/tag";
import { civilDayIn } from "@/lib/base/civil";
import { capital, countWord, plural } from "@/lib/base/show";
import { coverSummaries } from "@/lib/coverage/queries";
import { env } from "@/lib/env";
import { equipment } from "@/lib/ledger/queries";
import { begin } from "../actions";
import { sentence } from "../words";

export const metadata: Metadata = { title: "Your equipment" };
const PAGE = 12;

export default async function Equipment({
  searchParams,
}: {
  searchParams: Promise<Record<string, string | string[] | undefined>>;
}) {
  const ctx = await requireCustomer();
  const query = await searchParams;
  const q = typeof query.q === "string" ? query.q.slice(0, 80) : "";
  const after = typeof query.after === "string" ? query.after : null;
  const today = civilDayIn(ctx.now, env().MENDBAY_ZONE);
  const { rows, next } = await equipment(ctx, { q, after, limit: PAGE });
  const cover = await coverSummaries(
    ctx,
    rows.map((r) => r.unitId),
    today,
  );
  return (
    <>
      <h1>Your equipment</h1>
      {rows.length > 0 ? (
        <p>
          {capital(countWord(rows.length))} {plural(rows.length, "unit")}
          {next || after ? " on this page" : ""}, newest first.
        </p>
      ) : null}
      <div className="prow">
        <form action={begin}>
          <Button type="submit">Report a fault</Button>
        </form>
        <span className="hint">Not sure which unit? Start here.</span>
      </div>
      <form className="psearch" role="search" method="get">
        <label htmlFor="q">Find by serial or order number</label>
        <div>
          <input id="q" name="q" className="in m" defaultValue={q} autoComplete="off" />
          <Button kind="line" type="submit">
            Find
          </Button>
        </div>
        <p className="hint">
          Have a list? <Link href="/equipment/check">Check many serials at once</Link>.
        </p>
      </form>
      {rows.length === 0 ? (
        <Empty title={q ? `Nothing of yours begins with ${q}.` : "No equipment yet."}>
          {q
            ? "Blanks, dashes and capitals do not matter. Look at the pull-out label, front left."
            : "Units appear here when they ship. Missing one? Photograph its label and mail it to us."}
        </Empty>
      ) : null}
      <ul>
        {rows.map((r) => {
          const c = cover.get(r.unitId);
          return (
            <li className="unit" key={r.saleLineId}>
              <div>
                <Tag serial={r.serial} href={`/equipment/${encodeURIComponent(r.serial)}`} />
                <p className="nm">
                  {r.modelName}
                  {r.condition === "refurbished" ? ", refurbished" : ""}
                  {r.siteNote ? `, ${r.siteNote}` : ""}
                </p>
              </div>
              <div>
                <p className="say">{sentence(c)}</p>
                {c?.state === "part" ? <p className="nm">Cover of some parts differs.</p> : null}
                {c?.state === "doa" ? <p className="nm">If it arrived faulty, we replace it whole.</p> : null}
                {c?.lastOn ? (
                  <PortalCoverBar
                    shippedOn={r.shippedOn}
                    endsOn={c.lastOn}
                    doaUntil={c.doaUntil ?? undefined}
                    todayOn={today}
                    state={c.state === "ended" ? "ended" : "covered"}
                  />
                ) : null}
                <div className="act">
                  <form action={begin}>
                    <input type="hidden" name="unitId" value={r.unitId} />
                    <button type="submit" className="linklike">
                      Report a fault<span className="vh"> of {r.serial}</span>
                    </button>
                  </form>
                  <a href={`/equipment/${encodeURIComponent(r.serial)}`}>
                    What is covered<span className="vh"> of {r.serial}</span>
                  </a>
                </div>
              </div>
            </li>
          );
        })}
      </ul>
      {next ? (
        <p>
          <ButtonLink
            kind="line"
            href={`/equipment?${new URLSearchParams({ ...(q ? { q } : {}), after: next })}`}
          >
            Older units
          </ButtonLink>
        </p>
      ) : null}
      <p className="hint">
        A unit is missing? Photograph its label and mail it to{" "}
        <a href={`mailto:${env().MENDBAY_MAIL_FROM}`}>{env().MENDBAY_MAIL_FROM}</a>.
      </p>
    </>
  );
}
