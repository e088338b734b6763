import Link from "next/link";
import type { Metadata } from "next";
import { requireStaff } from "@/app/_edge/ctx";
import { Button, ButtonLink } from "@/components/ui/button";
import { Empty } from "@/components/ui/empty";
import { Pin } from "@/components/ui/pin";
import { may } from "@/lib/auth/rules";
import { civilDayIn } from "@/lib/base/civil";
import { capital, countWord, plural, showDay } from "@/lib/base/show";
import { termsBoard, type BoardIssue } from "@/lib/coverage/terms.queries";
import { env } from "@/lib/env";
import { next } from "./actions";

export const metadata: Metadata = { title: "Terms" };

const sold = (n: number) =>
  n === 0 ? "nothing sold under it" : `${n.toLocaleString("en-US")} ${plural(n, "sale")} under it`;

export default async function Terms() {
  const ctx = await requireStaff();
  const board = await termsBoard(ctx);
  const today = civilDayIn(ctx.now, env().MENDBAY_ZONE);
  const writes = may(ctx, "terms.write");
  const groups = [...new Set(board.map((v) => v.termsId))].map((id) => {
    const of = board.filter((v) => v.termsId === id);
    const issues = of.filter((v) => v.publishedAt !== null);
    return {
      id,
      code: of[0]!.code,
      name: of[0]!.name,
      draft: of.find((v) => v.publishedAt === null) ?? null,
      issues,
      // The newest whose day has come: the list runs from the newest on.
      inForce: issues.find((v) => v.effectiveOn <= today)?.versionId,
    };
  });
  const drafts = groups.filter((g) => g.draft !== null).length;
  // What is being worked on stands on top.
  groups.sort((a, b) => Number(b.draft !== null) - Number(a.draft !== null));
  return (
    <main className="desk narrow" id="main">
      <div className="deskhead">
        <div>
          <h1>Terms by effective date</h1>
          <p>
            A published issue never changes; a sale keeps the issue it was made under.
            {drafts > 0
              ? ` ${capital(countWord(drafts))} ${plural(drafts, "draft is", "drafts are")} open.`
              : ""}
          </p>
        </div>
        {writes ? (
          <ButtonLink kind="line" href="/terms/new">
            Draft new terms
          </ButtonLink>
        ) : null}
      </div>
      {groups.length === 0 ? (
        <Empty title="No terms are published.">
          Shipments can be imported once there are terms to sell them under.
        </Empty>
      ) : null}
      {groups.map((g) => (
        <section key={g.id} className="termsgroup" aria-labelledby={`t-${g.code}`}>
          <div className="termsname">
            <h2 id={`t-${g.code}`}>{g.name}</h2>
            <p className="m s">{g.code}</p>
            {writes && !g.draft ? (
              <form action={next}>
                <input type="hidden" name="termsId" value={g.id} />
                <Button kind="quiet">
                  Draft the next issue<span className="vh"> of {g.code}</span>
                </Button>
              </form>
            ) : null}
          </div>
          <ol className="termslist">
            {g.draft ? (
              <li className="draft">
                <Link href={`/terms/${g.draft.versionId}`}>Draft of issue {g.draft.issue}</Link>
                <span>from {showDay(g.draft.effectiveOn)}, when published</span>
                <span className="q">last changed by {g.draft.madeByName || "somebody"}</span>
              </li>
            ) : null}
            {g.issues.map((v) => (
              <Issue
                key={v.versionId}
                of={v}
                now={v.versionId === g.inForce}
                toCome={v.effectiveOn > today}
              />
            ))}
          </ol>
        </section>
      ))}
      <p>
        <Link href="/terms/notices">Rights by law, beside the terms</Link>
        {" · "}
        <Link href="/terms/calendar">Working days and holidays</Link>
      </p>
    </main>
  );
}

function Issue({ of: v, now, toCome }: { of: BoardIssue; now: boolean; toCome: boolean }) {
  return (
    <li className={now ? "on" : undefined} aria-current={now ? "true" : undefined}>
      {now ? <Pin size={11} /> : null}
      <Link href={`/terms/${v.versionId}`}>
        <span className="vh">{v.name}, </span>Issue {v.issue}
      </Link>
      <span>
        from {showDay(v.effectiveOn)}
        {now ? ", in force" : toCome ? ", to come" : ""}
      </span>
      <span className="q">{sold(v.sold)}</span>
    </li>
  );
}
