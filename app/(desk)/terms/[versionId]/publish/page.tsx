import Link from "next/link";
import type { Metadata } from "next";
import { notFound, redirect } from "next/navigation";
import { requireStaff } from "@/app/_edge/ctx";
import { civilDayIn } from "@/lib/base/civil";
import { countWord, plural, showDay } from "@/lib/base/show";
import { checkEffective, checkTerms } from "@/lib/coverage/terms";
import { newestPreview, salesUnder, termsIssue } from "@/lib/coverage/terms.queries";
import { compareTerms, comparisonWords } from "@/lib/coverage/termwords";
import { env } from "@/lib/env";
import { PublishForm } from "./form";

export const metadata: Metadata = { title: "Publish" };
const UUID = /^[0-9a-f]{8}(-[0-9a-f]{4}){3}-[0-9a-f]{12}$/;
const figure = (n: number) => n.toLocaleString("en-US");

/** Says what follows, before it does: a published issue cannot be taken back. */
export default async function Publish({ params }: { params: Promise<{ versionId: string }> }) {
  const ctx = await requireStaff("admin");
  const { versionId } = await params;
  const v = UUID.test(versionId) ? await termsIssue(ctx, versionId) : null;
  if (!v) notFound();
  if (v.publishedAt) redirect(`/terms/${v.id}`);
  const today = civilDayIn(ctx.now, env().MENDBAY_ZONE);
  const sales = await salesUnder(ctx, { versionId: v.id, termsId: v.termsId, fromOn: v.effectiveOn });
  const preview = await newestPreview(ctx, v.id);
  const fresh = preview?.state === "done" && preview.ofVersion === v.version;
  const change = comparisonWords(compareTerms(v.before?.clauses ?? [], v.clauses));
  const stops = [
    ...checkTerms(v.clauses).map((p) => (p.number ? `Clause ${p.number}: ${p.message}` : p.message)),
    ...[checkEffective(v.effectiveOn, { last: v.before, today }) ?? []].flat(),
    ...(v.before && change === null ? [`Nothing differs from issue ${v.before.issue}.`] : []),
  ];
  return (
    <main className="desk narrow terms" id="main">
      <div className="publishplate notch">
        <h1>
          Publish {v.name}, issue {v.issue}?
        </h1>
        <p className="q">
          <span className="m">{v.code}</span>
          {v.before && change
            ? `; against issue ${v.before.issue}: ${change}`
            : `; ${figure(v.clauses.length)} ${plural(v.clauses.length, "clause")}`}
        </p>
        <ul className="follows">
          <li>
            Sales shipped <b>from {showDay(v.effectiveOn)} on</b> under <span className="m">{v.code}</span>{" "}
            are made under it.
          </li>
          <li>
            {sales.ofTerms === 0
              ? "Nothing was sold under these terms yet."
              : `${figure(sales.ofTerms)} ${plural(sales.ofTerms, "sale")} made before ${plural(sales.ofTerms, "keeps its issue", "keep their issue")}.`}
            {sales.shippedSince > 0
              ? ` ${figure(sales.shippedSince)} of them shipped on that day or later and ${plural(sales.shippedSince, "stays", "stay")} under the issue ${plural(sales.shippedSince, "it was", "they were")} made under.`
              : ""}
          </li>
          <li>
            <b>It can never be changed or taken back.</b> A correction is the next issue.
          </li>
          <li>
            {fresh
              ? `What it would do was counted for this very draft: ${countWord(preview.answer.ended)} ${plural(preview.answer.ended, "unit")} covered today would not be, ${countWord(preview.answer.ticketsDiffer)} open ${plural(preview.answer.ticketsDiffer, "ticket")} would be answered otherwise.`
              : "What it would do was not counted for the draft as it stands."}{" "}
            <Link href={`/terms/${v.id}#preview`}>{fresh ? "Read it" : "Count it first"}</Link>
          </li>
          <li>Rights by law stand beside it and come first: have somebody licensed read what you publish.</li>
        </ul>
        <PublishForm versionId={v.id} version={v.version} issue={v.issue} stops={stops} />
      </div>
    </main>
  );
}
