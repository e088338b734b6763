import type { Metadata } from "next";
import Link from "next/link";
import { notFound } from "next/navigation";
import { requireStaff } from "@/app/_edge/ctx";
import { DecisionBody } from "@/components/coverage/decision";
import { decisionRows } from "@/components/coverage/decision-ruler";
import { Ruler } from "@/components/coverage/ruler";
import { Button } from "@/components/ui/button";
import { ErrorSummary } from "@/components/ui/error-summary";
import { civilDayIn } from "@/lib/base/civil";
import { showDay } from "@/lib/base/show";
import { differenceOf } from "@/lib/coverage/difference";
import { decisionById, decisionInputs } from "@/lib/coverage/queries";
import { decide } from "@/lib/coverage/rules";
import { coverClauseOf, WhatIf, withWhatIf } from "@/lib/coverage/whatif";
import { env } from "@/lib/env";
import { ticketNumberOf } from "@/lib/tickets/queries";
import { Facts } from "./facts";

export const metadata: Metadata = { title: "What if" };
const UUID = /^[0-9a-f]{8}(-[0-9a-f]{4}){3}-[0-9a-f]{12}$/;

type Props = {
  params: Promise<{ decisionId: string }>;
  searchParams: Promise<Record<string, string | string[]>>;
};

/** One decision as it stands beside what it would be: tried in the address alone, stored nowhere. */
export default async function WhatIfPage({ params, searchParams }: Props) {
  const ctx = await requireStaff("agent", "manager", "admin");
  const { decisionId } = await params;
  if (!UUID.test(decisionId)) notFound();
  const [stored, input] = [await decisionById(ctx, decisionId), await decisionInputs(ctx, decisionId)];
  if (!stored || !input) notFound();
  const number = await ticketNumberOf(ctx, stored.ticketId);
  const typed = Object.fromEntries(
    Object.entries(await searchParams).map(([k, v]) => [k, String(Array.isArray(v) ? (v[0] ?? "") : v)]),
  );
  const asked = WhatIf.safeParse(typed);
  const errors: Record<string, string> = {};
  if (!asked.success)
    for (const issue of asked.error.issues) errors[String(issue.path[0] ?? "")] ??= issue.message;
  const as = decide(input);
  const put = asked.success ? withWhatIf(input, asked.data) : input;
  const then = decide(put);
  const difference = differenceOf({ inputs: input, answer: as }, { inputs: put, answer: then });
  const moved = difference.facts.length > 0;
  const today = civilDayIn(ctx.now, env().MENDBAY_ZONE);
  return (
    <main id="main" className="whatif">
      <div className="deskhead">
        <div>
          <h1>What if a fact were other?</h1>
          <p>
            {input.what}, claimed on {showDay(input.claimOn)}. Nothing is stored here; to decide anew, change
            the fact on{" "}
            <Link href={`/desk/${number}`}>
              ticket <span className="m">{number}</span>
            </Link>
            .
          </p>
        </div>
      </div>
      <div className="wcols">
        <form method="get" className="wform" aria-label="Facts to try">
          <ErrorSummary
            title="Nothing was tried"
            items={Object.entries(errors).map(([field, message]) => ({ field, message }))}
          />
          <Facts input={input} clause={coverClauseOf(input)} typed={typed} errors={errors} />
          <p className="acts">
            <Button>Try these facts</Button> <Link href={`/desk/what-if/${decisionId}`}>As it stands</Link>
          </p>
        </form>
        <section className="wans" aria-label="As it stands">
          <h2>As it stands</h2>
          <Ruler
            rows={decisionRows(as)}
            shippedOn={input.sale.shippedOn}
            claimOn={input.claimOn}
            todayOn={today}
            mini
          />
          <DecisionBody answer={as} />
        </section>
        <section className="wans" aria-label="With these facts" aria-live="polite">
          <h2>{moved ? "With these facts" : "With these facts: choose one on the left"}</h2>
          <Ruler
            rows={decisionRows(then)}
            shippedOn={put.sale.shippedOn}
            claimOn={put.claimOn}
            todayOn={today}
            mini
          />
          <DecisionBody answer={then} difference={moved ? difference : undefined} differs="Would differ" />
        </section>
      </div>
    </main>
  );
}
