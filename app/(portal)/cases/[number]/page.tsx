import type { Metadata } from "next";
import { notFound } from "next/navigation";
import { requireCustomer } from "@/app/_edge/ctx";
import { Tag } from "@/components/ui/tag";
import { countWord, showInstant } from "@/lib/base/show";
import { env } from "@/lib/env";
import { evidenceOf } from "@/lib/evidence/queries";
import { decisionsOf } from "@/lib/coverage/queries";
import { rmasOfTicket } from "@/lib/rma/queries";
import { ticketByNumber } from "@/lib/tickets/queries";
import { moveWords } from "../words";
import { AnswerForm, MoreEvidence } from "./forms";
import { standingOf } from "./standing";

export const metadata: Metadata = { title: "Your case" };

export default async function Case({
  params,
  searchParams,
}: {
  params: Promise<{ number: string }>;
  searchParams: Promise<Record<string, string | string[] | undefined>>;
}) {
  const ctx = await requireCustomer();
  const t = await ticketByNumber(ctx, Number((await params).number));
  if (!t) notFound();
  const sent = (await searchParams).sent === "1";
  const [evidence, rmas] = [await evidenceOf(ctx, t.id), await rmasOfTicket(ctx, t.id)];
  const open = standingOf(t.units, await decisionsOf(ctx, t.id), rmas).filter((s) => s.open).length;
  const decided = t.entries.findLast((e) => e.kind === "decision");
  return (
    <>
      <p className="prow">
        {t.units
          .filter((u) => u.state === "tied")
          .map((u) => (
            <Tag key={u.id} serial={u.serial} />
          ))}
        <span className="hint">
          Case <span className="m">{t.number}</span>
        </span>
      </p>
      <h1>“{t.faultWords.length > 160 ? `${t.faultWords.slice(0, 158)}…` : t.faultWords}”</h1>
      {sent ? (
        <p className="okk" role="status">
          Sent. It is in the record below, and we have it.
        </p>
      ) : null}
      <p>{moveWords(t)}</p>
      <ul className="plist">
        {decided ? (
          <li>
            <a href={`/cases/${t.number}/decision`}>Read the coverage decision</a>
          </li>
        ) : null}
        {open > 0 && rmas.length > 0 ? (
          <li>
            <a href={`/cases/${t.number}/remedy`}>
              Choose how we make the {open === 1 ? "other unit" : `other ${countWord(open)} units`} good
            </a>
          </li>
        ) : null}
        {rmas.map((r) => (
          <li key={r.id}>
            <a href={`/rma/${r.number}`}>Follow {r.number}</a>
          </li>
        ))}
      </ul>
      <h2>The record</h2>
      <ol className="crecord">
        {t.entries.map((e, i) => {
          const message = typeof e.data.messageId === "string" ? t.messages[e.data.messageId] : undefined;
          const files = Array.isArray(e.data.evidenceIds)
            ? evidence.filter((x) => (e.data.evidenceIds as string[]).includes(x.id))
            : [];
          return (
            <li key={e.id} id={i === t.entries.length - 1 ? "newest" : undefined}>
              <p className="hint">
                <span className="cite">{e.ref}</span> {showInstant(e.at, env().MENDBAY_ZONE)},{" "}
                {e.actorKind === "customer"
                  ? "you"
                  : e.actorKind === "staff"
                    ? e.actorName
                    : env().MENDBAY_SELLER}
              </p>
              {message?.text ? <p className="said">{message.text}</p> : <p>{e.line}</p>}
              {files.length > 0 ? (
                <ul className="shots">
                  {files.map((f) => (
                    <li key={f.id}>
                      {f.state === "clean" && f.kind === "photo" ? (
                        // A picture of theirs from our authorized route: no optimizer, no cache.
                        // eslint-disable-next-line @next/next/no-img-element
                        <img src={`/files/${f.fileId}`} alt={f.name} loading="lazy" />
                      ) : null}
                      <span className="hint">
                        {f.state === "clean" ? (
                          f.kind === "photo" ? (
                            f.name
                          ) : (
                            <a href={`/files/${f.fileId}`}>{f.name}</a>
                          )
                        ) : f.state === "rejected" ? (
                          `${f.name}: ${f.reason}`
                        ) : (
                          `${f.name}, being looked at`
                        )}
                      </span>
                    </li>
                  ))}
                </ul>
              ) : null}
            </li>
          );
        })}
      </ol>
      <h2>Answer</h2>
      <AnswerForm ticketId={t.id} number={t.number} />
      <MoreEvidence ticketId={t.id} />
    </>
  );
}
