import type { Metadata } from "next";
import { notFound, redirect } from "next/navigation";
import { requireCustomer } from "@/app/_edge/ctx";
import { LawAside } from "@/components/coverage/law-notice";
import { Tag } from "@/components/ui/tag";
import { lawBeside } from "@/lib/coverage/law.queries";
import { decisionsOf } from "@/lib/coverage/queries";
import { rmasOfTicket } from "@/lib/rma/queries";
import { ticketByNumber } from "@/lib/tickets/queries";
import { RemedyForm } from "./form";

export const metadata: Metadata = { title: "Choose how we make it good" };

export default async function RemedyPage({ params }: { params: Promise<{ number: string }> }) {
  const ctx = await requireCustomer();
  const t = await ticketByNumber(ctx, Number((await params).number));
  if (!t) notFound();
  const [rma] = await rmasOfTicket(ctx, t.id);
  if (rma) redirect(`/rma/${rma.number}`);
  const newest = (await decisionsOf(ctx, t.id)).at(-1);
  const unit = t.units.find((u) => u.id === newest?.ticketUnitId);
  if (!newest || !unit || (newest.answer.outcome !== "covered" && newest.answer.outcome !== "covered_doa"))
    redirect(`/cases/${t.number}`);
  const law = await lawBeside(ctx, newest.id);
  return (
    <>
      <p className="prow">
        <Tag serial={unit.serial} />
      </p>
      <h1>How shall we make it good?</h1>
      <RemedyForm
        ticketId={t.id}
        ticketUnitId={unit.id}
        remedies={newest.answer.remedies}
        freight={newest.answer.handling?.freight ?? null}
        fees={newest.answer.fees.map((f) => `${f.words} ${(f.cents / 100).toFixed(2)} EUR.`)}
        battery={unit.answers.battery ?? "inside"}
      />
      {law ? <LawAside notice={law} /> : null}
    </>
  );
}
