import type { Metadata } from "next";
import Link from "next/link";
import { requireStaff } from "@/app/_edge/ctx";
import { Empty } from "@/components/ui/empty";
import { may } from "@/lib/auth/rules";
import { capital, countWord, plural, showInstant } from "@/lib/base/show";
import { defaultSite } from "@/lib/ledger/queries";
import { deadLetters, HELD_LIMIT, heldList } from "@/lib/mail/queries";
import type { DeadLetter, HeldView } from "@/lib/mail/schema";
import { AgainForm, HeldForm } from "./forms";

export const metadata: Metadata = { title: "Held mail" };

const DONE: Record<string, string> = {
  aside: "It was put aside. It is kept, and no record shows it.",
  again: "It is on its way again.",
};

export default async function Held({
  searchParams,
}: {
  searchParams: Promise<Record<string, string | string[] | undefined>>;
}) {
  const ctx = await requireStaff("agent", "manager", "admin");
  const query = await searchParams;
  const [held, dead, site] = await Promise.all([heldList(ctx), deadLetters(ctx), defaultSite(ctx)]);
  const done = typeof query.done === "string" ? DONE[query.done] : undefined;
  return (
    <main className="desk pb-10" id="main">
      <div className="deskhead">
        <div>
          <h1>{sentence(held.length, dead.length)}</h1>
          <p>Nobody has answered a held mail, and no customer sees it before it is let in.</p>
        </div>
      </div>
      {done ? <p role="status">{done}</p> : null}
      {held.length === 0 ? (
        <Empty title="Nothing waits for a look.">
          Mail that may not join a record without a person’s look waits here, with its reason.
        </Empty>
      ) : (
        <ol>
          {held.map((h) => (
            <Mail key={h.heldId} mail={h} zone={site.zone} mayOpen={may(ctx, "ticket.open")} />
          ))}
        </ol>
      )}
      {held.length === HELD_LIMIT ? <p className="q">The oldest {HELD_LIMIT} are shown.</p> : null}
      <section aria-labelledby="failed" className="mt-8">
        <h2 id="failed" className="border-t border-ink pt-2 text-[18px] font-[650]">
          Mail of ours that did not arrive
        </h2>
        {dead.length === 0 ? (
          <p className="q">There is none.</p>
        ) : (
          <ul>
            {dead.map((d) => (
              <Failed key={d.outboxId} letter={d} zone={site.zone} />
            ))}
          </ul>
        )}
      </section>
    </main>
  );
}

function sentence(held: number, dead: number): string {
  const first =
    held === 0
      ? "No mail is held"
      : `${capital(countWord(held))} ${plural(held, "mail is", "mails are")} held`;
  return dead === 0 ? `${first}.` : `${first}; ${countWord(dead)} of ours did not arrive.`;
}

function Mail({ mail, zone, mayOpen }: { mail: HeldView; zone: string; mayOpen: boolean }) {
  return (
    <li id={mail.heldId} className="border-t border-ink py-4">
      <h2 className="text-[18px] font-[650]">{mail.reason}</h2>
      <p>
        “{mail.subject || "No subject"}”, from <span className="m">{mail.fromEmail}</span>
        {mail.fromName ? ` (${mail.fromName})` : ""}, {showInstant(mail.heldAt, zone)}
        {mail.hintTicketNumber ? (
          <>
            ; it speaks of <Link href={`/desk/${mail.hintTicketNumber}`}>ticket {mail.hintTicketNumber}</Link>
          </>
        ) : null}
      </p>
      <details className="mt-2" open={mail.text.length < 600}>
        <summary>Its text</summary>
        <p className="max-w-[78ch] whitespace-pre-wrap break-words">{mail.text || "It has no text."}</p>
      </details>
      <details className="mt-1">
        <summary>How it was looked at</summary>
        <ul className="s">
          {mail.filing.map((f, i) => (
            <li key={i}>
              <b>{capital(f.step)}:</b> {f.reason}
            </li>
          ))}
        </ul>
      </details>
      <HeldForm
        heldId={mail.heldId}
        hint={mail.hintTicketNumber}
        fromEmail={mail.fromEmail}
        mayOpen={mayOpen}
      />
    </li>
  );
}

function Failed({ letter, zone }: { letter: DeadLetter; zone: string }) {
  return (
    <li className="flex flex-wrap items-start justify-between gap-4 border-t border-rule py-3">
      <div>
        <p>
          “{letter.subject}” to <span className="m">{letter.toEmail}</span>
          {letter.ticketNumber ? (
            <>
              , <Link href={`/desk/${letter.ticketNumber}`}>ticket {letter.ticketNumber}</Link>
            </>
          ) : null}
        </p>
        <p className="s q">
          {letter.error ?? "No reason was given."} Put in {showInstant(letter.createdAt, zone)}.
        </p>
      </div>
      <AgainForm outboxId={letter.outboxId} />
    </li>
  );
}
