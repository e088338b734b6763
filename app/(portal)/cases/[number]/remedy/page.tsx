import type { Metadata } from "next";
import { notFound, redirect } from "next/navigation";
import { requireCustomer } from "@/app/_edge/ctx";
import { LawAside } from "@/components/coverage/law-notice";
import { Tag } from "@/components/ui/tag";
import { capital, countWord, plural } from "@/lib/base/show";
import { lawBeside } from "@/lib/coverage/law.queries";
import { decisionsOf } from "@/lib/coverage/queries";
import { rmasOfTicket } from "@/lib/rma/queries";
import { ticketByNumber } from "@/lib/tickets/queries";
import { standingOf, together } from "../standing";
import { RemedyForm } from "./form";

export const metadata: Metadata = { title: "Choose how we make it good" };

export default async function RemedyPage({ params }: { params: Promise<{ number: string }> }) {
  const ctx = await requireCustomer();
  const t = await ticketByNumber(ctx, Number((await params).number));
  if (!t) notFound();
  const [decisions, rmas] = [await decisionsOf(ctx, t.id), await rmasOfTicket(ctx, t.id)];
  const { now, later, remedies } = together(standingOf(t.units, decisions, rmas));
  const [first] = now;
  if (!first) redirect(rmas[0] ? `/rma/${rmas[0].number}` : `/cases/${t.number}`);
  const law = await lawBeside(ctx, first.decision.id);
  const batteries = now.map((s) => s.unit.answers.battery ?? "inside");
  const freights = new Set(now.map((s) => s.decision.answer.handling?.freight ?? null));
  return (
    <>
      <p className="prow">
        {now.slice(0, 6).map((s) => (
          <Tag key={s.unit.id} serial={s.unit.serial} />
        ))}
        {now.length > 6 ? <span>and {now.length - 6} more</span> : null}
      </p>
      <h1>How shall we make {now.length === 1 ? "it" : "them"} good?</h1>
      {later > 0 ? (
        <p>
          Their clauses give the same remedies. {capital(countWord(later))} more{" "}
          {plural(later, "has other ones: it comes", "have other ones: they come")} next.
        </p>
      ) : null}
      <RemedyForm
        ticketId={t.id}
        units={now.map((s) => ({
          id: s.unit.id,
          serial: s.unit.serial,
          what: s.unit.slot ? `${s.unit.slot}, ${s.unit.modelName}` : s.unit.modelName,
        }))}
        remedies={remedies}
        freight={freights.size === 1 ? [...freights][0]! : null}
        fees={[
          ...new Set(
            now.flatMap((s) =>
              s.decision.answer.fees.map((f) => `${f.words} ${(f.cents / 100).toFixed(2)} EUR.`),
            ),
          ),
        ]}
        battery={
          batteries.includes("damaged") ? "damaged" : batteries.every((b) => b === "none") ? "none" : "inside"
        }
      />
      {law ? <LawAside notice={law} /> : null}
    </>
  );
}
