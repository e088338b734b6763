import type { Metadata } from "next";
import Link from "next/link";
import { notFound } from "next/navigation";
import { requireStaff } from "@/app/_edge/ctx";
import { Empty } from "@/components/ui/empty";
import { Tag } from "@/components/ui/tag";
import { goodwillOfTicket } from "@/lib/coverage/goodwill.queries";
import { decisionsOf } from "@/lib/coverage/queries";
import { ticketByNumber } from "@/lib/tickets/queries";
import { AskForm } from "../../ask-form";

export const metadata: Metadata = { title: "Ask for goodwill" };

/** The ticket's own form as a page: what stands behind its button where no script runs. */
export default async function Ask({ params }: { params: Promise<{ number: string }> }) {
  const ctx = await requireStaff("agent", "manager");
  const t = await ticketByNumber(ctx, Number((await params).number));
  if (!t) notFound();
  const [decisions, goodwill] = [await decisionsOf(ctx, t.id), await goodwillOfTicket(ctx, t.id)];
  const asked = new Set(goodwill.filter((g) => g.state === "asked").map((g) => g.ticketUnitId));
  const units = t.units.flatMap((u) => {
    const newest = decisions.filter((d) => d.ticketUnitId === u.id).at(-1);
    const open = newest && ["not_covered", "needs_person"].includes(newest.answer.outcome);
    if (u.state !== "tied" || !open || asked.has(u.id)) return [];
    const what = u.slot ? `${u.slot}, ${u.modelName}` : u.modelName;
    return [{ ticketUnitId: u.id, serial: u.serial, what, headline: newest.answer.headline.staff }];
  });
  return (
    <main className="desk goodwill" id="main">
      <div className="deskhead">
        <div>
          <h1>Ask for goodwill</h1>
          <p>
            “{t.faultWords.length > 120 ? `${t.faultWords.slice(0, 118)}…` : t.faultWords}”,{" "}
            {t.accountName ?? t.personEmail},{" "}
            <Link href={`/desk/${t.number}`}>
              ticket <span className="m">{t.number}</span>
            </Link>
          </p>
        </div>
      </div>
      {units.length === 0 ? (
        <Empty title="No unit of this ticket needs an exception.">
          Goodwill is for a tied unit whose newest decision says no or needs a person, and that nobody has
          asked for yet.
        </Empty>
      ) : (
        <>
          <ul className="gw-units">
            {units.map((u) => (
              <li key={u.ticketUnitId}>
                <Tag serial={u.serial} /> {u.headline}
              </li>
            ))}
          </ul>
          <AskForm ticketId={t.id} number={t.number} units={units} />
        </>
      )}
    </main>
  );
}
