import { Fragment, type ReactNode } from "react";
import { Folded, RecordEntry } from "@/components/tickets/entry";
import { Tag } from "@/components/ui/tag";
import { showBytes, showDay, showWait } from "@/lib/base/show";
import { DecisionBody } from "@/components/coverage/decision";
import type { Difference } from "@/lib/coverage/difference";
import type { OursOfGoodwill } from "@/lib/coverage/goodwill.queries";
import type { DecisionView } from "@/lib/coverage/queries";
import { REMEDY_WORDS, type Remedy } from "@/lib/coverage/schema";
import { TEST_OUTCOME_WORDS, type TestOutcome } from "@/lib/dock/schema";
import type { EvidenceView } from "@/lib/evidence/queries";
import type { MessageView } from "@/lib/mail/schema";
import type { RmaView } from "@/lib/rma/schema";
import { showEuros } from "@/lib/tickets/goodwill";
import type { EntryView } from "@/lib/tickets/schema";

type Props = {
  entries: EntryView[];
  messages: Record<string, MessageView>;
  evidence: EvidenceView[];
  decisions: DecisionView[];
  /** What each decision says that the one before it, for the same unit, did not. */
  differences: ReadonlyMap<string, Difference>;
  ours: OursOfGoodwill;
  rmas: RmaView[];
  zone: string;
};

/** Text with the references of this record made into links to their entries. */
function Cited({ text, refs }: { text: string; refs: Set<string> }) {
  const parts = text.split(/\b([MECRDBSN]\d{1,3})\b/);
  return (
    <>
      {parts.map((p, i) =>
        i % 2 === 1 && refs.has(p) ? (
          <a key={i} className="cite" href={`#${p}`} aria-label={`Entry ${p}`}>
            {p}
          </a>
        ) : (
          <Fragment key={i}>{p}</Fragment>
        ),
      )}
    </>
  );
}

/** Text of a mail, its quoted parts folded to a line with their count; nothing is removed. */
function MailText({ message, refs }: { message: MessageView; refs: Set<string> }) {
  const lines = message.text.split("\n");
  const out: ReactNode[] = [];
  let at = 0;
  const plain = (from: number, to: number) => {
    const text = lines.slice(from, to).join("\n").trim();
    if (text)
      out.push(
        <p key={`p${from}`} className="said">
          <Cited text={text} refs={refs} />
        </p>,
      );
  };
  for (const [from, to] of [...message.folds].sort((a, b) => a[0] - b[0])) {
    if (from < at || to > lines.length) continue;
    plain(at, from);
    out.push(
      <Folded key={`f${from}`} words={`${to - from} quoted ${to - from === 1 ? "line" : "lines"} folded`}>
        <pre className="quoted">{lines.slice(from, to).join("\n")}</pre>
      </Folded>,
    );
    at = to;
  }
  plain(at, lines.length);
  return <>{out.length > 0 ? out : <p className="q">No text in it.</p>}</>;
}

const PROOFS: Record<string, string> = {
  signed_in: "in the portal, signed in",
  ours: "",
  proved: "sender proved",
  not_checked: "sender not proved",
  not_proved: "sender not proved",
};

function Files({ files }: { files: EvidenceView[] }) {
  const photos = files.filter((f) => f.kind === "photo" && f.state === "clean");
  const rest = files.filter((f) => !photos.includes(f));
  return (
    <>
      {photos.length > 0 ? (
        <div className="shots">
          {photos.map((f) => (
            <figure className="shot" key={f.id}>
              {/* eslint-disable-next-line @next/next/no-img-element -- from our authorized route, never cached or resized elsewhere */}
              <img src={`/files/${f.fileId}`} alt={`Photo ${f.name}`} loading="lazy" />
              <figcaption>{f.name}</figcaption>
            </figure>
          ))}
        </div>
      ) : null}
      {rest.length > 0 ? (
        <ul className="filelist">
          {rest.map((f) => (
            <li key={f.id}>
              {f.state === "clean" ? (
                <a href={`/files/${f.fileId}`}>{f.name}</a>
              ) : (
                <span className="m">{f.name}</span>
              )}{" "}
              <span className="q">{showBytes(f.size)}</span>{" "}
              {f.state === "rejected" ? (
                <span className="err">not kept: {f.reason}</span>
              ) : f.state === "clean" ? null : (
                <span className="q">being checked</span>
              )}
            </li>
          ))}
        </ul>
      ) : null}
    </>
  );
}

export function Record({ entries, messages, evidence, decisions, differences, ours, rmas, zone }: Props) {
  const refs = new Set(entries.map((e) => e.ref));
  const str = (v: unknown) => (typeof v === "string" ? v : "");
  const body = (
    e: EntryView,
  ): { title: ReactNode; by?: ReactNode; right?: ReactNode; kind?: "decision"; children?: ReactNode } => {
    const message = messages[str(e.data.messageId)];
    switch (e.kind) {
      case "mail_in":
      case "mail_noted":
        return {
          title: message?.fromName || message?.fromEmail || e.actorName,
          by:
            e.kind === "mail_noted"
              ? "an automatic mail, filed"
              : e.data.channel === "portal"
                ? "in the portal"
                : "e-mail to the warranty desk",
          right:
            message && e.data.channel !== "portal" ? (PROOFS[message.proof] ?? message.proof) : undefined,
          children: message ? <MailText message={message} refs={refs} /> : <p>{e.line}</p>,
        };
      case "mail_out":
        return {
          title: e.actorName,
          by: message ? `to ${message.toEmails.join(", ")}` : undefined,
          right: sendState(message),
          children: message ? <MailText message={message} refs={refs} /> : <p>{e.line}</p>,
        };
      case "mail_auto":
        return { title: "Mendbay", by: e.line, right: sendState(message) };
      case "fault_reported":
        return {
          title: e.actorName,
          by: e.actorKind === "customer" ? "reported it in the portal" : "wrote down a report",
          right: "claim date",
          children: (
            <>
              <p className="said">{str(e.data.words) || e.line}</p>
              <Answers answers={(e.data.answers as Record<string, string> | undefined) ?? {}} />
            </>
          ),
        };
      case "evidence_added": {
        const ids = Array.isArray(e.data.evidenceIds) ? (e.data.evidenceIds as string[]) : [];
        const files = evidence.filter((x) => ids.includes(x.id));
        return {
          title: "Evidence",
          by: `${e.line.toLowerCase()}, by ${str(e.data.source) === "mail" ? "mail" : str(e.data.source) || e.actorName}`,
          children: <Files files={files} />,
        };
      }
      case "evidence_wanted":
        return {
          title: e.actorName,
          by: e.line.charAt(0).toLowerCase() + e.line.slice(1),
          children: str(e.data.text) ? <p className="said">{str(e.data.text)}</p> : undefined,
        };
      case "decision": {
        const d = decisions.find((x) => x.id === e.data.decisionId);
        return {
          title: "Coverage decision",
          by: d?.madeByName === "Mendbay" ? "by the rules, shown to the customer" : e.actorName,
          right: d ? `clause ${d.answer.clauseNumber ?? "none"}, engine ${d.engine}` : undefined,
          kind: "decision",
          children: d ? (
            <>
              <DecisionBody answer={d.answer} difference={differences.get(d.id)} />
              <p className="q">
                <a href={`/desk/what-if/${d.id}`}>What if a fact were other?</a>
              </p>
            </>
          ) : (
            <p>{e.line}</p>
          ),
        };
      }
      case "goodwill_asked":
      case "goodwill_granted":
      case "goodwill_declined": {
        const kept = ours.get(str(e.data.goodwillId));
        const answered = entries.some((x) => x.kind !== e.kind && x.data.goodwillId === e.data.goodwillId);
        return {
          title: e.actorName,
          by: `${GOODWILL_WORDS[e.kind]} ${str(e.data.unitSerial)}${e.data.remedy ? `: ${remedyWords(e.data.remedy)}` : ""}`,
          right:
            e.kind === "goodwill_granted" && typeof kept?.limitCents === "number"
              ? `up to ${showEuros(kept.limitCents)}, for us only`
              : e.kind === "goodwill_granted"
                ? undefined
                : "for us only",
          children: (
            <>
              <p className="said">
                <Cited text={str(e.data.reason) || (kept?.words ?? "")} refs={refs} />
              </p>
              {message ? (
                <Folded words="The customer was told by mail">
                  <MailText message={message} refs={refs} />
                </Folded>
              ) : null}
              {e.kind === "goodwill_asked" && !answered ? (
                <p className="q">
                  <a href={`/goodwill#g-${str(e.data.goodwillId)}`}>It waits for a manager’s answer</a>
                </p>
              ) : null}
            </>
          ),
        };
      }
      case "rma_authorized":
      case "rma_requested": {
        const rma = rmas.find((r) => r.id === e.data.rmaId);
        return {
          title: `${str(e.data.number)} authorized`,
          by: <Cited text={`remedy: ${remedyWords(e.data.remedy)}${byGoodwill(e.data, ours)}`} refs={refs} />,
          right: e.actorName,
          children: rma ? (
            <dl className="rma">
              <div>
                <dt>Comes back</dt>
                <dd className="taglist">
                  {rma.lines.map((l) => (
                    <Tag key={l.id} serial={l.serial} part={l.systemSerial !== null} />
                  ))}
                </dd>
              </div>
              <div>
                <dt>Due at our dock</dt>
                <dd>{rma.expiresOn ? showDay(rma.expiresOn) : "no day"}</dd>
              </div>
              <div>
                <dt>Paper</dt>
                <dd>
                  <a href={`/papers/traveler/${rma.id}`}>traveler</a>
                </dd>
              </div>
            </dl>
          ) : undefined,
        };
      }
      case "dock_received":
        return {
          title: "Dock scan",
          by: e.line.charAt(0).toLowerCase() + e.line.slice(1),
          right: e.actorName,
          children: <Pictures ids={e.data.photos} />,
        };
      case "dock_stopped":
        return { title: "Dock stopped", by: e.line, right: e.actorName };
      case "bench_closed":
        return {
          title: "Bench result",
          by: `${TEST_OUTCOME_WORDS[str(e.data.outcome) as TestOutcome] ?? ""}: ${str(e.data.finding)}`,
          right: e.actorName,
          children: <Pictures ids={e.data.photos} />,
        };
      case "note":
        return {
          title: e.actorName,
          by: "a note for us, no customer sees it",
          children: (
            <p className="said">
              <Cited text={str(e.data.text) || e.line} refs={refs} />
            </p>
          ),
        };
      default:
        return { title: e.line, right: e.actorName };
    }
  };
  return (
    <>
      {entries.length === 0 ? <p className="q">Nothing is written here yet.</p> : null}
      {entries.map((e, i) => {
        const next = entries[i + 1];
        const { children, ...head } = body(e);
        return (
          <RecordEntry
            key={e.id}
            refName={e.ref}
            at={e.at}
            zone={zone}
            gap={next ? showWait(next.at.getTime() - e.at.getTime()) : null}
            now={next === undefined}
            {...head}
          >
            {children}
          </RecordEntry>
        );
      })}
    </>
  );
}

const GOODWILL_WORDS = {
  goodwill_asked: "asks for goodwill for",
  goodwill_granted: "grants goodwill for",
  goodwill_declined: "declines goodwill for",
} as const;

const remedyWords = (v: unknown): string => REMEDY_WORDS[v as Remedy] ?? (typeof v === "string" ? v : "");

/** ", by goodwill C4, up to 420.00 EUR", of an RMA that goes by a grant. */
function byGoodwill({ goodwill }: Record<string, unknown>, ours: OursOfGoodwill): string {
  if (!Array.isArray(goodwill)) return "";
  const given = goodwill as { ref: string; goodwillId: string }[];
  const cents = given.reduce((sum, g) => sum + (ours.get(g.goodwillId)?.limitCents ?? 0), 0);
  return `, by goodwill ${given.map((g) => g.ref).join(", ")}, up to ${showEuros(cents)}`;
}

function sendState(message: MessageView | undefined): ReactNode {
  if (!message?.outboxState) return undefined;
  if (message.outboxState === "sent") return "sent";
  if (message.outboxState === "dead")
    return <span className="err">not delivered: {message.outboxError}</span>;
  return "on its way";
}

function Answers({ answers }: { answers: Record<string, string> }) {
  const words: [string, string | undefined][] = [
    ["Units", answers.units],
    ["Left out", answers.leftOut],
    ["Since", answers.since],
    [
      "Battery",
      answers.battery &&
        { none: "none in it", inside: "inside, unharmed", damaged: "DAMAGED: no label, isolate, call" }[
          answers.battery
        ],
    ],
    ["Data", answers.data && (answers.data === "sanitize" ? "we sanitize it" : "cleared by the customer")],
  ];
  const given = words.filter(([, v]) => v);
  if (given.length === 0) return null;
  return (
    <dl className="rma">
      {given.map(([k, v]) => (
        <div key={k}>
          <dt>{k}</dt>
          <dd>{v}</dd>
        </div>
      ))}
    </dl>
  );
}

function Pictures({ ids }: { ids: unknown }) {
  if (!Array.isArray(ids) || ids.length === 0) return null;
  return (
    <div className="shots small">
      {(ids as string[]).slice(0, 6).map((id) => (
        <figure className="shot" key={id}>
          {/* eslint-disable-next-line @next/next/no-img-element -- from our authorized route */}
          <img src={`/files/${id}`} alt="Photo from the warehouse" loading="lazy" />
        </figure>
      ))}
    </div>
  );
}
