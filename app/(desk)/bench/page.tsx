import type { Metadata } from "next";
import Link from "next/link";
import { requireStaff } from "@/app/_edge/ctx";
import { DueClock } from "@/components/tickets/due";
import { Empty } from "@/components/ui/empty";
import { Tag } from "@/components/ui/tag";
import { capital, countWord, plural } from "@/lib/base/show";
import { benchQueue, type BenchRow } from "@/lib/dock/queries";
import { TEST_OUTCOME_WORDS } from "@/lib/dock/schema";
import { defaultSite } from "@/lib/ledger/queries";
import { clockView } from "@/lib/tickets/show";

export const metadata: Metadata = { title: "Bench" };

export default async function Bench() {
  const ctx = await requireStaff("warehouse", "agent", "manager");
  const rows = await benchQueue(ctx);
  const site = await defaultSite(ctx);
  const waiting = rows.filter((r) => r.lineState === "received");
  const tested = rows.filter((r) => r.lineState === "tested");
  const clock = (r: BenchRow) =>
    clockView(
      { dueAt: r.dueAt, clockStartedAt: r.clockStartedAt, chaseOn: null, waitingOn: "bench" },
      ctx.now,
      site,
    );
  return (
    <main className="desk" id="main">
      <div className="deskhead">
        <div>
          <h1>
            {waiting.length === 0
              ? "Nothing waits at the bench"
              : `${capital(countWord(waiting.length))} ${plural(waiting.length, "unit")} ${waiting.length === 1 ? "waits" : "wait"} for a test`}
            ;{" "}
            {tested.length === 0
              ? "nothing is to go out"
              : `${countWord(tested.length)} ${tested.length === 1 ? "is" : "are"} tested and to be settled`}
            .
          </h1>
          <p>Soonest due first.</p>
        </div>
      </div>
      {rows.length === 0 ? (
        <Empty title="The bench is clear.">The next test starts when the dock takes a unit in.</Empty>
      ) : null}
      {[
        { name: "To send ahead", list: rows.filter((r) => r.lineState === "open") },
        { name: "To test", list: waiting },
        { name: "To go out", list: tested },
      ].map((g) =>
        g.list.length === 0 ? null : (
          <section className="benchgroup" key={g.name} aria-label={g.name}>
            <h2>{g.name}</h2>
            <ol>
              {g.list.map((r) => {
                const c = clock(r);
                return (
                  <li key={r.lineId}>
                    <Link href={`/bench/${r.lineId}`} className="benchrow">
                      <DueClock state={c.state} share={c.share} words={c.words} late={c.late} />
                      <span>
                        <Tag serial={r.serial} />
                      </span>
                      <span className="fault">{r.faultWords}</span>
                      <span className="cust">
                        {r.modelName}, {r.accountName}
                      </span>
                      <span className="m s">{r.rmaNumber}</span>
                      <span className="m s">{r.place ?? "no bay"}</span>
                      <span className="last">
                        {r.lineState === "open"
                          ? "replacement to be sent"
                          : r.outcome
                            ? TEST_OUTCOME_WORDS[r.outcome]
                            : r.testId
                              ? "test running"
                              : "not begun"}
                      </span>
                    </Link>
                  </li>
                );
              })}
            </ol>
          </section>
        ),
      )}
    </main>
  );
}
