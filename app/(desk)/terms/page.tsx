import type { Metadata } from "next";
import { requireStaff } from "@/app/_edge/ctx";
import { Empty } from "@/components/ui/empty";
import { Pin } from "@/components/ui/pin";
import { civilDayIn } from "@/lib/base/civil";
import { showDay } from "@/lib/base/show";
import { termsList } from "@/lib/coverage/queries";
import { env } from "@/lib/env";

export const metadata: Metadata = { title: "Terms" };

export default async function Terms() {
  const ctx = await requireStaff();
  const list = await termsList(ctx);
  const today = civilDayIn(ctx.now, env().MENDBAY_ZONE);
  const inForce = new Map<string, string>();
  for (const v of list)
    if (v.publishedAt && v.effectiveOn <= today && !inForce.has(v.code)) inForce.set(v.code, v.versionId);
  return (
    <main className="desk narrow" id="main">
      <div className="deskhead">
        <div>
          <h1>Terms by effective date</h1>
          <p>A published issue never changes; a sale keeps the issue it was made under.</p>
        </div>
      </div>
      {list.length === 0 ? (
        <Empty title="No terms are published.">
          Shipments can be imported once there are terms to sell them under.
        </Empty>
      ) : null}
      <ol className="termslist">
        {list.map((v) => (
          <li
            key={v.versionId}
            className={inForce.get(v.code) === v.versionId ? "on" : undefined}
            aria-current={inForce.get(v.code) === v.versionId ? "true" : undefined}
          >
            {inForce.get(v.code) === v.versionId ? <Pin size={11} /> : null}
            <a href={`/terms/${v.versionId}`}>
              {v.name}, issue {v.issue}
            </a>
            <span className="m s">{v.code}</span>
            <span>
              from {showDay(v.effectiveOn)}
              {inForce.get(v.code) === v.versionId ? ", in force" : v.effectiveOn > today ? ", to come" : ""}
            </span>
            <span className="q">
              {v.sold === 0
                ? "nothing sold under it"
                : `${v.sold.toLocaleString("en-US")} ${v.sold === 1 ? "sale" : "sales"} under it`}
            </span>
          </li>
        ))}
      </ol>
    </main>
  );
}
