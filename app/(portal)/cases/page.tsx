import type { Metadata } from "next";
import { requireCustomer } from "@/app/_edge/ctx";
import { ButtonLink } from "@/components/ui/button";
import { Empty } from "@/components/ui/empty";
import { Tag } from "@/components/ui/tag";
import { showInstant } from "@/lib/base/show";
import { env } from "@/lib/env";
import { cases } from "@/lib/tickets/queries";
import { moveWords } from "./words";

export const metadata: Metadata = { title: "Your cases" };

export default async function Cases({
  searchParams,
}: {
  searchParams: Promise<Record<string, string | string[] | undefined>>;
}) {
  const ctx = await requireCustomer();
  const before = Number((await searchParams).before) || null;
  const { rows, next } = await cases(ctx, { before, limit: 15 });
  return (
    <>
      <h1>Your cases</h1>
      {rows.length === 0 ? (
        <Empty title="No cases yet.">
          Report a fault from your equipment, or write to us: both end up here.
        </Empty>
      ) : null}
      <ul>
        {rows.map((c) => (
          <li className="unit" key={c.id}>
            <div>
              {c.serial ? <Tag serial={c.serial} /> : null}
              <p className="nm">
                Case <span className="m">{c.number}</span>
                {c.rmaNumber ? (
                  <>
                    , <span className="m">{c.rmaNumber}</span>
                  </>
                ) : null}
              </p>
            </div>
            <div>
              <p className="say">
                “{c.faultWords.length > 120 ? `${c.faultWords.slice(0, 118)}…` : c.faultWords}”
              </p>
              <p className="nm">
                {moveWords(c)} Last news {showInstant(c.lastEntryAt, env().MENDBAY_ZONE)}.
              </p>
              <div className="act">
                <a href={`/cases/${c.number}`}>
                  Read it<span className="vh">, case {c.number}</span>
                </a>
                {c.rmaNumber ? <a href={`/rma/${c.rmaNumber}`}>Follow {c.rmaNumber}</a> : null}
              </div>
            </div>
          </li>
        ))}
      </ul>
      {next ? (
        <p>
          <ButtonLink kind="line" href={`/cases?before=${next}`}>
            Older cases
          </ButtonLink>
        </p>
      ) : null}
    </>
  );
}
