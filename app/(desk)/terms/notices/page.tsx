import type { Metadata } from "next";
import Link from "next/link";
import { requireStaff } from "@/app/_edge/ctx";
import { Pin } from "@/components/ui/pin";
import { may } from "@/lib/auth/rules";
import { civilDayIn } from "@/lib/base/civil";
import { capital, showDay } from "@/lib/base/show";
import { LAW_CAUTION, REGION_WORDS } from "@/lib/coverage/law";
import { noticeGroups, type NoticeRow } from "@/lib/coverage/law.queries";
import { LAW_REGIONS } from "@/lib/coverage/schema";
import { env } from "@/lib/env";
import { NoticeForm } from "./form";

export const metadata: Metadata = { title: "Rights by law" };

function when(n: NoticeRow): string {
  const from =
    n.by || n.state === "to come" || n.effectiveOn > "2000-01-01" ? `from ${showDay(n.effectiveOn)}` : "";
  const state = n.state === "shown" ? "shown now" : n.state === "to come" ? "to come" : "no longer shown";
  const by = n.by ? `kept by ${n.by.name}` : "built in";
  return [state, from, by].filter(Boolean).join(", ");
}

export default async function Notices({ searchParams }: { searchParams: Promise<{ kept?: string }> }) {
  const ctx = await requireStaff();
  const kept = (await searchParams).kept;
  const groups = await noticeGroups(ctx, civilDayIn(ctx.now, env().MENDBAY_ZONE));
  return (
    <main id="main" className="desk narrow">
      <div className="deskhead">
        <div>
          <h1>Rights by law, beside the terms</h1>
          <p>
            Shown with decisions, remedies, returns and refusals, by the buyer and the country of the sale.{" "}
            {LAW_CAUTION} A buyer we do not know is told what a consumer is told.
          </p>
        </div>
        {kept && (LAW_REGIONS as readonly string[]).includes(kept) ? (
          <p className="ok r" role="status">
            Kept for {REGION_WORDS[kept as keyof typeof REGION_WORDS]}.
          </p>
        ) : null}
      </div>
      {groups.map((g) => (
        <section
          className="lawgroup"
          key={`${g.region}${g.forConsumers}`}
          aria-labelledby={`law-${g.region}-${g.forConsumers}`}
        >
          <h2 id={`law-${g.region}-${g.forConsumers}`}>
            {capital(REGION_WORDS[g.region])}
            <span className="s">{g.forConsumers ? "consumers, and buyers unknown" : "businesses"}</span>
          </h2>
          <ol className="lawlist">
            {g.rows.map((n) => (
              <li
                key={`${n.effectiveOn}${n.by ? "" : " built in"}`}
                className={n.state === "shown" && g.rows.length > 1 ? "on" : undefined}
                aria-current={n.state === "shown" ? "true" : undefined}
              >
                {n.state === "shown" && g.rows.length > 1 ? <Pin size={11} /> : null}
                <h3>{n.title}</h3>
                <p className="q s">{capital(when(n))}</p>
                {n.state === "past" ? (
                  <details className="more">
                    <summary>What it said</summary>
                    <p>{n.words}</p>
                    <p className="q s">Source: {n.source}</p>
                  </details>
                ) : (
                  <>
                    <p>{n.words}</p>
                    <p className="q s">Source: {n.source}</p>
                  </>
                )}
              </li>
            ))}
          </ol>
        </section>
      ))}
      {may(ctx, "law.write") ? (
        <section aria-labelledby="law-new">
          <div className="sec">
            <h2 id="law-new">A notice of your own</h2>
            <span className="q">what was shown before stays on record as it was</span>
          </div>
          <NoticeForm />
        </section>
      ) : null}
      <p>
        <Link href="/terms">All terms</Link>
      </p>
    </main>
  );
}
