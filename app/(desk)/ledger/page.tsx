import Link from "next/link";
import type { Metadata } from "next";
import { requireStaff } from "@/app/_edge/ctx";
import { CoverGlyph } from "@/components/coverage/glyph";
import { Button, ButtonLink } from "@/components/ui/button";
import { Empty } from "@/components/ui/empty";
import { Tag } from "@/components/ui/tag";
import { may } from "@/lib/auth/rules";
import { civilDayIn } from "@/lib/base/civil";
import { showDayShort } from "@/lib/base/show";
import { coverSummaries } from "@/lib/coverage/queries";
import { env } from "@/lib/env";
import { ledgerPage } from "@/lib/ledger/queries";
import { placeWords } from "./words";

export const metadata: Metadata = { title: "Ledger" };

export default async function Ledger({
  searchParams,
}: {
  searchParams: Promise<Record<string, string | string[] | undefined>>;
}) {
  const ctx = await requireStaff();
  const query = await searchParams;
  const q = typeof query.q === "string" ? query.q.slice(0, 80) : "";
  const after = typeof query.after === "string" ? query.after : null;
  const { rows, next } = await ledgerPage(ctx, { q, after, limit: 30 });
  const cover = await coverSummaries(
    ctx,
    rows.map((r) => r.unitId),
    civilDayIn(ctx.now, env().MENDBAY_ZONE),
  );
  return (
    <main className="desk" id="main">
      <div className="deskhead">
        <div>
          <h1>What was sold, and where it is</h1>
          <p>Every unit by its serial, under its newest sale.</p>
        </div>
        {may(ctx, "ledger.import") ? (
          <ButtonLink kind="line" href="/ledger/import">
            Import shipments
          </ButtonLink>
        ) : null}
      </div>
      <form className="deskfind" role="search" aria-label="The ledger" method="get">
        <label htmlFor="ledger-q">Serial, order or customer</label>
        <input id="ledger-q" name="q" className="in m" defaultValue={q} autoComplete="off" />
        <Button kind="line">Find</Button>
        {q ? <Link href="/ledger">show all</Link> : null}
        <Link href="/ledger/check">Check many serials at once</Link>
      </form>
      {rows.length === 0 ? (
        <Empty title={q ? `Nothing in the ledger answers to ${q}.` : "The ledger is empty."}>
          {q
            ? "A serial may be given by its beginning; an order number whole; a customer by a part of the name."
            : "Import the shipments first, as CSV."}
        </Empty>
      ) : (
        <div className="tablewrap" role="region" aria-label="Units" tabIndex={0}>
          <table className="tbl">
            <thead>
              <tr>
                <th scope="col">Unit</th>
                <th scope="col">Model</th>
                <th scope="col">Customer</th>
                <th scope="col">Order</th>
                <th scope="col">Cover</th>
                <th scope="col">Last covered day</th>
                <th scope="col">Where</th>
              </tr>
            </thead>
            <tbody>
              {rows.map((r) => {
                const c = cover.get(r.unitId);
                return (
                  <tr key={r.unitId}>
                    <td>
                      <Tag
                        serial={r.serial}
                        part={r.kind === "part"}
                        href={`/ledger/${encodeURIComponent(r.serial)}`}
                      />
                    </td>
                    <td>
                      {r.modelName}
                      {r.condition === "refurbished" ? ", refurbished" : ""}
                    </td>
                    <td>{r.accountName ?? "not sold"}</td>
                    <td className="m">{r.orderNumber ?? "–"}</td>
                    <td>
                      {c ? (
                        <CoverGlyph state={c.state} />
                      ) : (
                        <span className="q">{r.systemSerial ? `in ${r.systemSerial}` : "–"}</span>
                      )}
                    </td>
                    <td>{c?.lastOn ? showDayShort(c.lastOn) : "–"}</td>
                    <td>{placeWords(r)}</td>
                  </tr>
                );
              })}
            </tbody>
          </table>
        </div>
      )}
      {next ? (
        <p className="pact">
          <ButtonLink
            kind="line"
            href={`/ledger?${new URLSearchParams({ ...(q ? { q } : {}), after: next })}`}
          >
            Next thirty
          </ButtonLink>
        </p>
      ) : null}
    </main>
  );
}
