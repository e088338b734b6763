import { serialInPath } from "@/lib/base/serial";
import type { Metadata } from "next";
import { notFound } from "next/navigation";
import { requireCustomer } from "@/app/_edge/ctx";
import { LawAside } from "@/components/coverage/law-notice";
import { PackDrawing } from "@/components/rma/pack-drawing";
import { Pin } from "@/components/ui/pin";
import { ButtonLink } from "@/components/ui/button";
import { CautionStrip } from "@/components/ui/caution-strip";
import { Tag } from "@/components/ui/tag";
import { showDay, showInstant } from "@/lib/base/show";
import { lawBeside } from "@/lib/coverage/law.queries";
import { REMEDY_WORDS, type Remedy } from "@/lib/coverage/schema";
import { env } from "@/lib/env";
import { rmaByNumber } from "@/lib/rma/queries";
import { cautionsFor, packingSteps } from "@/lib/rma/rules";
import { SentForm, WithdrawForm } from "./forms";

export const metadata: Metadata = { title: "Your RMA" };

const STAGES = ["authorized", "in_transit", "received", "at_bench", "settled"] as const;
const STAGE_WORDS: Record<string, [title: string, text: string]> = {
  authorized: ["Send it.", "Pack it as below and hand it to a carrier."],
  in_transit: ["On its way to us.", "We scan it in when it arrives, and tell you."],
  received: ["At our dock.", "Its serial was checked, and it was photographed."],
  at_bench: ["At the bench.", "We test it and tell you what we find, whatever we find."],
  settled: ["Settled.", "What was promised is done."],
};

export default async function Rma({ params }: { params: Promise<{ number: string }> }) {
  const ctx = await requireCustomer();
  const rma = await rmaByNumber(ctx, serialInPath((await params).number));
  if (!rma) notFound();
  const decisionId = rma.lines.find((l) => l.decisionId)?.decisionId;
  const law = decisionId ? await lawBeside(ctx, decisionId) : null;
  const at = STAGES.indexOf(rma.state as (typeof STAGES)[number]);
  const ended = ["withdrawn", "expired", "declined"].includes(rma.state);
  const sendBy = rma.expiresOn ? showDay(rma.expiresOn) : "";
  return (
    <>
      <p className="prow">
        {rma.lines.map((l) => (
          <Tag key={l.id} serial={l.serial} />
        ))}
      </p>
      <h1>
        <span className="m">{rma.number}</span> is{" "}
        {ended
          ? rma.state
          : rma.state === "authorized"
            ? "authorized"
            : rma.state.replace("_", " ").replace("at bench", "at the bench")}
        .
      </h1>
      <p>
        {REMEDY_WORDS[rma.remedy as Remedy].charAt(0).toUpperCase() +
          REMEDY_WORDS[rma.remedy as Remedy].slice(1)}
        .{" "}
        {rma.state === "authorized"
          ? `Send it by ${sendBy}.`
          : rma.settledAt
            ? `Settled ${showInstant(rma.settledAt, env().MENDBAY_ZONE)}.`
            : ""}
      </p>
      {rma.fees.map((f) => (
        <p key={f.lineId + f.kind}>
          <b>Told before.</b> {f.words} <span className="m">{(f.cents / 100).toFixed(2)} EUR</span>
        </p>
      ))}
      {ended ? null : (
        <ol className="nexts">
          {STAGES.map((s, i) => (
            <li key={s} className={i === at ? "now" : undefined} aria-current={i === at ? "step" : undefined}>
              {i === at ? <Pin /> : null}
              <b>{STAGE_WORDS[s]![0]}</b> {STAGE_WORDS[s]![1]}
            </li>
          ))}
        </ol>
      )}
      {rma.state === "authorized" ? (
        <>
          <h2>How to pack it</h2>
          <CautionStrip column items={cautionsFor(rma.lines)} />
          <p>
            Before you start: power off, unplug every lead, wait until no lamp is lit, clip on a wrist strap.
          </p>
          <ol className="packs">
            {packingSteps(rma.lines, sendBy).map((s) => (
              <li key={s.title}>
                <PackDrawing drawing={s.drawing} />
                <div>
                  <b>{s.title}</b>
                  <span>{s.text}</span>
                </div>
              </li>
            ))}
          </ol>
          <p>
            <b>Do not send</b> rails, caddies, bezels, cables or other parts: send only what the tags above
            name. Loose batteries stay with you.
          </p>
          <p className="pact">
            <ButtonLink href={`/papers/traveler/${rma.id}`} prefetch={false}>
              Print the traveler (PDF)
            </ButtonLink>
          </p>
          <h2>Send it to</h2>
          <address className="paddr">
            {rma.site.name}, <span className="m">{rma.number}</span>
            {rma.site.addressLines.map((l) => (
              <span key={l}>{l}</span>
            ))}
          </address>
          <h2>Handed over?</h2>
          <SentForm rmaId={rma.id} number={rma.number} />
          <h2>Changed your mind?</h2>
          <WithdrawForm rmaId={rma.id} number={rma.number} />
        </>
      ) : null}
      <p>
        <a href={`/cases/${rma.ticketNumber}`}>Read or answer in your case {rma.ticketNumber}</a>
      </p>
      {law ? <LawAside notice={law} /> : null}
    </>
  );
}
