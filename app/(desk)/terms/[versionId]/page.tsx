import Link from "next/link";
import type { Metadata } from "next";
import { notFound } from "next/navigation";
import { requireStaff } from "@/app/_edge/ctx";
import { Button } from "@/components/ui/button";
import { Pin } from "@/components/ui/pin";
import { may } from "@/lib/auth/rules";
import { civilDayIn } from "@/lib/base/civil";
import { capital, countWord, plural, showDay } from "@/lib/base/show";
import { CLAUSE_KINDS, type ClauseKind } from "@/lib/coverage/schema";
import { newestPreview, salesUnder, termsIssue } from "@/lib/coverage/terms.queries";
import { checkTerms } from "@/lib/coverage/terms";
import { compareTerms } from "@/lib/coverage/termwords";
import { env } from "@/lib/env";
import { next } from "../actions";
import { ClauseList } from "./clauses";
import { Compare } from "./compare";
import { DraftEnd, HeadForm } from "./head";
import { PreviewPart } from "./preview-part";

export const metadata: Metadata = { title: "Terms" };
const UUID = /^[0-9a-f]{8}(-[0-9a-f]{4}){3}-[0-9a-f]{12}$/;

export default async function TermsVersion({
  params,
  searchParams,
}: {
  params: Promise<{ versionId: string }>;
  searchParams: Promise<Record<string, string | string[] | undefined>>;
}) {
  const ctx = await requireStaff();
  const { versionId } = await params;
  const query = await searchParams;
  const v = UUID.test(versionId) ? await termsIssue(ctx, versionId) : null;
  if (!v) notFound();
  const draft = v.publishedAt === null;
  const writes = draft && may(ctx, "terms.write");
  const today = civilDayIn(ctx.now, env().MENDBAY_ZONE);
  const inForce = v.published.find((p) => p.effectiveOn <= today)?.id === v.id;
  const rows = compareTerms(v.before?.clauses ?? [], v.clauses);
  const problems = draft ? checkTerms(v.clauses) : [];
  const one = (name: string) => (typeof query[name] === "string" ? query[name] : undefined);
  const kind = CLAUSE_KINDS.find((k) => k === one("kind"));
  const sold = draft ? null : await salesUnder(ctx, { versionId, termsId: v.termsId, fromOn: v.effectiveOn });
  return (
    <main className="desk narrow terms" id="main">
      <div className="deskhead">
        <div className="issuehead" aria-current={inForce ? "true" : undefined}>
          {inForce ? <Pin size={14} /> : null}
          <h1>
            {v.name}, {draft ? `draft of issue ${v.issue}` : `issue ${v.issue}`}
          </h1>
          <p>
            <span className="m">{v.code}</span>,{" "}
            {draft
              ? `${v.before ? `drafted from issue ${v.before.issue}` : "new terms"}, to come in force on ${showDay(v.effectiveOn)}; last changed by ${v.madeByName || "somebody"}.`
              : `from ${showDay(v.effectiveOn)}${inForce ? ", in force" : v.effectiveOn > today ? ", to come" : ""}. Published${v.madeByName ? ` by ${v.madeByName}` : ""}: it never changes.`}{" "}
            {sold
              ? `${sold.under === 0 ? "Nothing was sold" : `${sold.under.toLocaleString("en-US")} ${plural(sold.under, "sale was", "sales were")} made`} under it. `
              : ""}
            {draft ? "" : v.note}
          </p>
        </div>
        {!draft && may(ctx, "terms.write") ? (
          v.draftId ? (
            <Link href={`/terms/${v.draftId}`}>Open the draft of the next issue</Link>
          ) : (
            <form action={next}>
              <input type="hidden" name="termsId" value={v.termsId} />
              <Button kind="line">Draft the next issue</Button>
            </form>
          )
        ) : null}
      </div>
      {draft && problems.length > 0 && v.clauses.length > 0 ? (
        <section className="stops" aria-labelledby="stops-h">
          <h2 id="stops-h">
            {problems.length === 1
              ? "One thing keeps it from being published"
              : `${capital(countWord(problems.length))} things keep it from being published`}
          </h2>
          <ul>
            {problems.map((p, i) => (
              <li key={i}>
                {p.index >= 0 && writes ? (
                  <Link href={`/terms/${v.id}?clause=${v.clauses[p.index]!.id}#open`}>Clause {p.number}</Link>
                ) : p.number ? (
                  `Clause ${p.number}`
                ) : null}
                {p.number ? ": " : ""}
                {p.message}
              </li>
            ))}
          </ul>
        </section>
      ) : null}
      <ClauseList
        of={v}
        rows={rows}
        writes={writes}
        open={writes ? one("clause") : undefined}
        kind={kind as ClauseKind | undefined}
      />
      {writes ? (
        <HeadForm
          versionId={v.id}
          version={v.version}
          effectiveOn={v.effectiveOn}
          note={v.note}
          after={v.before ? showDay(v.before.effectiveOn) : null}
        />
      ) : null}
      {v.before ? (
        <Compare rows={rows} before={v.before} draft={draft} />
      ) : (
        <p className="q">
          {draft
            ? "There is no issue before it to compare with."
            : "It is the first issue: there is none before it to compare with."}
        </p>
      )}
      {draft ? (
        <>
          <PreviewPart
            of={v}
            preview={await newestPreview(ctx, v.id)}
            writes={writes}
            show={one("show")}
            all={one("all") === "1"}
            zone={env().MENDBAY_ZONE}
            now={ctx.now}
          />
          {writes ? (
            <>
              <DraftEnd versionId={v.id} version={v.version} issue={v.issue} problems={problems.length} />
            </>
          ) : null}
        </>
      ) : null}
      <p className="q lawline">
        Rights by law may stand beside these terms and come first; the desk warns of them and does not decide
        them.
      </p>
      <p>
        <Link href="/terms">All terms</Link>
      </p>
    </main>
  );
}
