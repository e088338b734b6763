import Link from "next/link";
import type { Metadata } from "next";
import { notFound } from "next/navigation";
import { requireStaff } from "@/app/_edge/ctx";
import { periodWords } from "@/lib/base/period";
import { showDay } from "@/lib/base/show";
import { termsVersion } from "@/lib/coverage/queries";
import { REMEDY_WORDS, type ClauseFact } from "@/lib/coverage/schema";
import { FAMILY_WORDS, type Family } from "@/lib/ledger/schema";

export const metadata: Metadata = { title: "Terms" };
const UUID = /^[0-9a-f]{8}(-[0-9a-f]{4}){3}-[0-9a-f]{12}$/;

const BASIS = {
  shipped: "the ship day",
  delivered: "delivery",
  invoiced: "the invoice day",
  installed: "the day it is fitted",
} as const;

function rule(c: ClauseFact): string {
  if (c.kind === "exclusion")
    return `Left out once ${c.evidence.join(" and ") || "evidence"} shows it; without that a person decides.`;
  if (c.kind === "fee")
    return `${((c.feeCents ?? 0) / 100).toFixed(2)} EUR, only with notice on the authorization; never for a consumer’s faulty unit.`;
  if (!c.period) return c.words;
  const from = c.startBasis ? `from ${BASIS[c.startBasis]}` : "";
  const grace =
    c.startBasis === "delivered" && c.deliveryGraceDays > 0
      ? ` (ship day and ${c.deliveryGraceDays} days without proof)`
      : "";
  const day = c.dayRule === "event_day_excluded" ? "that day not counted" : "that day counted";
  const hours = c.enduranceHours
    ? `, or ${c.enduranceHours.toLocaleString("en-US")} hours, whichever is first`
    : "";
  return `${periodWords(c.period)} ${from}${grace}, ${day}${hours}.`;
}

export default async function TermsVersion({ params }: { params: Promise<{ versionId: string }> }) {
  const ctx = await requireStaff();
  const { versionId } = await params;
  const v = UUID.test(versionId) ? await termsVersion(ctx, versionId) : null;
  if (!v) notFound();
  return (
    <main className="desk narrow" id="main">
      <div className="deskhead">
        <div>
          <h1>
            {v.name}, issue {v.issue}
          </h1>
          <p>
            <span className="m">{v.code}</span>, from {showDay(v.effectiveOn)}.{" "}
            {v.publishedAt ? "Published: it never changes." : "A draft."} {v.note}
          </p>
        </div>
      </div>
      <div className="tablewrap" role="region" aria-label="Clauses" tabIndex={0}>
        <table className="tbl">
          <thead>
            <tr>
              <th scope="col">Clause</th>
              <th scope="col">About</th>
              <th scope="col">Parts</th>
              <th scope="col">Rule</th>
              <th scope="col">Remedies, in order</th>
            </tr>
          </thead>
          <tbody>
            {v.clauses.map((c) => (
              <tr key={c.id}>
                <td className="m">{c.number}</td>
                <td>{c.title}</td>
                <td>
                  {c.families.length === 0
                    ? "every part"
                    : c.families.map((f) => FAMILY_WORDS[f as Family].toLowerCase()).join(", ")}
                  {c.condition ? `, ${c.condition}` : ""}
                </td>
                <td>{rule(c)}</td>
                <td>{c.remedies.map((r) => REMEDY_WORDS[r]).join(", ") || "–"}</td>
              </tr>
            ))}
          </tbody>
        </table>
      </div>
      <p className="q">
        Rights by law may stand beside these terms and come first; the desk warns of them and does not decide
        them.
      </p>
      <p>
        <Link href="/terms">All terms</Link>
      </p>
    </main>
  );
}
