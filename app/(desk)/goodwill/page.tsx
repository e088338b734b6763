import type { Metadata } from "next";
import Link from "next/link";
import { notFound } from "next/navigation";
import { requireStaff } from "@/app/_edge/ctx";
import { Empty } from "@/components/ui/empty";
import { may } from "@/lib/auth/rules";
import { civilDayIn } from "@/lib/base/civil";
import { goodwillSentence, type GoodwillFilter, type GoodwillReport } from "@/lib/coverage/goodwill";
import { GOODWILL_OPEN_LIMIT, goodwillReport } from "@/lib/coverage/goodwill.queries";
import { defaultSite } from "@/lib/ledger/queries";
import { Answers } from "./answers";
import { Filters } from "./filters";
import { OpenAsk } from "./open-ask";

export const metadata: Metadata = { title: "Goodwill" };

type Query = Record<string, string | string[] | undefined>;

export default async function Goodwill({ searchParams }: { searchParams: Promise<Query> }) {
  const ctx = await requireStaff("agent", "manager", "admin");
  const query = await searchParams;
  const found = await goodwillReport(ctx, query);
  if (!found.ok) notFound();
  const report = found.value;
  const { filter, figures, open, rows, mine } = report;
  const { zone } = await defaultSite(ctx);
  const thisYear = civilDayIn(ctx.now, zone).slice(0, 4);
  const ever = figures.asked > 0 || report.months.length > 0;
  return (
    <main className="desk goodwill" id="main">
      <div className="deskhead">
        <div>
          <h1>{goodwillSentence(figures, { month: filter.month, mine, thisYear })}</h1>
          <p>
            Goodwill is an exception outside the terms. One person asks with a reason, another grants or
            declines; nobody answers their own.
          </p>
        </div>
      </div>
      <Told query={query} report={report} />
      <section aria-labelledby="waiting">
        <div className="sec">
          <h2 id="waiting">{mine ? "Yours, not answered yet" : "Not answered yet"}</h2>
          {open.length > 1 ? <span className="q">the longest wait first</span> : null}
        </div>
        {open.length === 0 ? (
          <Empty title="Nothing waits for an answer.">
            Where a decision says no, an agent may ask on the ticket; the ask then stands here until a manager
            answers.
          </Empty>
        ) : (
          <ol>
            {open.map((g) => (
              <OpenAsk
                key={g.id}
                ask={g}
                zone={zone}
                answers={may(ctx, "goodwill.answer")}
                own={g.askedBy === ctx.actor.userId}
              />
            ))}
          </ol>
        )}
        {report.moreOpen ? <p className="q">The oldest {GOODWILL_OPEN_LIMIT} are shown.</p> : null}
      </section>
      <section aria-labelledby="list">
        <div className="sec">
          <h2 id="list">On record</h2>
          {rows.length > 0 ? (
            <a className="r" href={`/goodwill/export${search(filter, null)}`}>
              This list as CSV
            </a>
          ) : null}
        </div>
        {ever ? <Filters filter={filter} months={report.months} /> : null}
        {rows.length > 0 ? (
          <Answers rows={rows} zone={zone} />
        ) : (
          <p className="q">
            {figures.granted + figures.declined === 0 && filter.state !== "asked" && filter.month === null
              ? "The first answer stands here, with its remedy, its limit and who gave it."
              : filter.after
                ? "Nothing older is on record."
                : "Nothing on record is of this kind."}
          </p>
        )}
        <p className="gw-pages">
          {filter.after ? (
            <Link href={`/goodwill${search(filter, null)}#list`}>Back to the newest</Link>
          ) : null}
          {report.next ? <Link href={`/goodwill${search(filter, report.next)}#list`}>Older ones</Link> : null}
        </p>
      </section>
    </main>
  );
}

function search(filter: GoodwillFilter, after: string | null): string {
  const chosen = { state: filter.state, month: filter.month, after };
  const q = new URLSearchParams(Object.entries(chosen).flatMap(([k, v]) => (v ? [[k, v]] : [])));
  return q.size > 0 ? `?${q}` : "";
}

/** What became of the answer just sent. */
function Told({ query, report }: { query: Query; report: GoodwillReport }) {
  const [, number, ref] = /^(\d{1,9})-(C\d{1,4})$/.exec(String(query.done ?? "")) ?? [];
  if (number && ref)
    return (
      <p className="ok gw-told" role="status">
        Kept. It stands on{" "}
        <Link href={`/desk/${number}#${ref}`}>
          ticket {number} as {ref}
        </Link>
        .
      </p>
    );
  if (typeof query.first !== "string") return null;
  const row = report.rows.find((r) => r.id === query.first);
  return (
    <div className="esum notch gw-told" role="alert">
      <h2>Somebody was first, and your answer was not kept</h2>
      <p>
        {row ? (
          <>
            {row.answeredByName} {row.state} it for <span className="m">{row.serial}</span>:{" "}
            <Link href={`/desk/${row.ticketNumber}#${row.answerRef}`}>
              ticket {row.ticketNumber}, {row.answerRef}
            </Link>
            .
          </>
        ) : (
          "It has been answered; the list below says by whom."
        )}
      </p>
    </div>
  );
}
