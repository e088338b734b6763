import type { Metadata } from "next";
import { notFound } from "next/navigation";
import { requireCustomer } from "@/app/_edge/ctx";
import { LawAside } from "@/components/coverage/law-notice";
import { PortalCoverBar } from "@/components/coverage/portal-bar";
import { Pin } from "@/components/ui/pin";
import { ButtonLink } from "@/components/ui/button";
import { Tag } from "@/components/ui/tag";
import { civilDayIn } from "@/lib/base/civil";
import { capital, showDay } from "@/lib/base/show";
import { lawBeside } from "@/lib/coverage/law.queries";
import { decisionsOf } from "@/lib/coverage/queries";
import { FREIGHT_TOLD, OUTCOME_WORDS, REMEDY_WORDS } from "@/lib/coverage/schema";
import { env } from "@/lib/env";
import { rmasOfTicket } from "@/lib/rma/queries";
import { ticketByNumber } from "@/lib/tickets/queries";
import { standingOf } from "../standing";

export const metadata: Metadata = { title: "Your cover" };

export default async function DecisionLetter({
  params,
  searchParams,
}: {
  params: Promise<{ number: string }>;
  searchParams: Promise<{ unit?: string }>;
}) {
  const ctx = await requireCustomer();
  const t = await ticketByNumber(ctx, Number((await params).number));
  if (!t) notFound();
  const [decisions, rmas] = [await decisionsOf(ctx, t.id), await rmasOfTicket(ctx, t.id)];
  const all = standingOf(t.units, decisions, rmas);
  const asked = (await searchParams).unit;
  // What a person must decide, or is not covered, is read first where a case has several units.
  const newest = all.find((s) => s.unit.id === asked)?.decision ?? decisions.at(-1);
  if (!newest) notFound();
  const law = await lawBeside(ctx, newest.id);
  const d = newest.answer;
  const unit = t.units.find((u) => u.id === newest.ticketUnitId);
  const covers = d.outcome === "covered" || d.outcome === "covered_doa";
  // Decisions of an earlier engine say nothing of freight.
  const freight = d.handling?.freight ?? null;
  const cover = d.windows.find((w) => w.kind === "cover");
  const doa = d.windows.find((w) => w.kind === "doa");
  const open = all.filter((s) => s.open);
  const rma =
    all.find((s) => s.decision.id === newest.id)?.rmaNumber ?? (open.length === 0 ? rmas[0]?.number : null);
  return (
    <>
      <p>
        {ctx.actor.name}
        {t.accountName && t.accountName !== ctx.actor.name ? `, ${t.accountName}` : ""}
      </p>
      {all.length > 1 ? (
        <nav aria-label="Units of this case">
          <ul className="plist">
            {all.map((s) => (
              <li key={s.unit.id}>
                <a
                  href={`/cases/${t.number}/decision?unit=${s.unit.id}`}
                  aria-current={s.decision.id === newest.id ? "page" : undefined}
                  className="m"
                >
                  {s.unit.serial}
                </a>
                , {OUTCOME_WORDS[s.decision.answer.outcome]}
                {s.rmaNumber ? `, on ${s.rmaNumber}` : ""}
              </li>
            ))}
          </ul>
        </nav>
      ) : null}
      {unit ? (
        <p className="prow">
          <Tag serial={unit.serial} />
          {unit.systemSerial ? <Tag serial={unit.systemSerial} part /> : null}
        </p>
      ) : null}
      <h1>{d.headline.customer}</h1>
      {covers ? (
        <p>
          You may choose how we make it good{d.remedies.length > 1 ? "" : `: ${REMEDY_WORDS[d.remedies[0]!]}`}
          . It costs you nothing
          {freight && freight !== "seller_both" ? " but the freight told below" : ""}
          {d.fees.length > 0
            ? d.fees.length === 1
              ? ", with one exception told below"
              : ", with the exceptions told below"
            : ""}
          .
        </p>
      ) : d.outcome === "needs_person" ? (
        <p>
          This cannot be decided by dates alone. A person of the desk reads it and writes to you; nothing is
          refused until then.
        </p>
      ) : (
        <p>That is about our warranty alone. There are still three ways on, and you choose: see below.</p>
      )}
      {cover ? (
        <PortalCoverBar
          shippedOn={cover.firstOn < cover.startOn ? cover.firstOn : cover.startOn}
          endsOn={cover.lastOn}
          doaUntil={doa?.lastOn}
          todayOn={civilDayIn(ctx.now, env().MENDBAY_ZONE)}
          saidOn={newest.claimOn}
          state={d.outcome === "needs_person" ? "person" : d.outcome === "not_covered" ? "ended" : "covered"}
        />
      ) : null}
      <h2>Why</h2>
      {d.reasons.map((r) => (
        <p key={r.rule}>{capital(r.customer)}</p>
      ))}
      {d.wouldChange.length > 0 ? (
        <p>
          <b>What would change this.</b> {d.wouldChange.map((w) => w.customer).join(" ")}
        </p>
      ) : null}
      {covers && freight ? (
        <p>
          <b>Freight.</b> {FREIGHT_TOLD[freight]}
        </p>
      ) : null}
      {d.fees.map((f) => (
        <p key={f.kind}>
          <b>Told before.</b> {f.words} <span className="m">{(f.cents / 100).toFixed(2)} EUR</span>
        </p>
      ))}
      <h2>What happens next</h2>
      {covers ? (
        <ol className="nexts">
          <li className={rma ? undefined : "now"}>
            {rma ? null : <Pin />}
            <b>Choose how we make it good.</b> {d.remedies.map((r) => capital(REMEDY_WORDS[r])).join(", or ")}
            .
          </li>
          <li>
            <b>Pack it.</b> You get packing steps for exactly this part, and a traveler that goes with it.
          </li>
          <li>
            <b>Send it within fourteen days.</b> Clear the data first, or let us: you get a record of it.
          </li>
          <li>
            <b>We test and tell you.</b> You hear from us, whatever we find.
          </li>
        </ol>
      ) : d.outcome === "needs_person" ? (
        <ol className="nexts">
          <li className="now">
            <Pin />
            <b>Send what would help.</b>{" "}
            {d.evidenceWanted.length > 0
              ? `${capital(d.evidenceWanted.join(", "))}.`
              : "Everything we asked for is here."}{" "}
            Keep the unit as it is.
          </li>
          <li>
            <b>A person decides.</b> You hear from us within one working day.
          </li>
        </ol>
      ) : (
        <ol className="nexts">
          <li className="now">
            <Pin />
            <b>Show us what would change it.</b> Answer in your case, with a file if you have one; we decide
            again.
          </li>
          <li>
            <b>Or ask for a price.</b> A paid repair or a like part; you get the price first and owe nothing
            for asking.
          </li>
          <li>
            <b>Or leave it as it is.</b> We close the case, and nothing is billed.
          </li>
        </ol>
      )}
      <p className="pact">
        {rma ? (
          <ButtonLink href={`/rma/${rma}`}>Follow {rma}</ButtonLink>
        ) : covers || open.length > 0 ? (
          <ButtonLink href={`/cases/${t.number}/remedy`}>Choose how we make it good</ButtonLink>
        ) : (
          <ButtonLink href={`/cases/${t.number}`}>Answer in your case</ButtonLink>
        )}
      </p>
      <p>
        {newest.madeByName === "Mendbay" ? "Decided by the rules of your terms" : newest.madeByName}
        <br />
        Warranty desk, {showDay(civilDayIn(newest.madeAt, env().MENDBAY_ZONE))},{" "}
        <a href={`mailto:${env().MENDBAY_MAIL_FROM}`}>{env().MENDBAY_MAIL_FROM}</a>
      </p>
      {law ? <LawAside notice={law} /> : null}
    </>
  );
}
