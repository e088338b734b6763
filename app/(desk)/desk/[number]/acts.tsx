"use client";
import { useActionState, useState } from "react";
import { UNSENT, type FormState } from "@/app/_edge/form";
import { AskForm } from "../../goodwill/ask-form";
import { Button, ButtonLink } from "@/components/ui/button";
import { ErrorSummary } from "@/components/ui/error-summary";
import { Check, Choice, ChoiceGroup, Field, Select, TextArea } from "@/components/ui/field";
import { REMEDY_WORDS, type Outcome, type Remedy } from "@/lib/coverage/schema";
import { authorize, close, decline } from "./actions";
import { DecideForm, type Known } from "./decide-form";
import { Hidden, problems } from "./form-parts";
import { TieForm } from "./tie-form";

export type UnitAct = {
  ticketUnitId: string;
  serial: string;
  what: string;
  faultClass: string | null;
  decision: { outcome: Outcome; remedies: Remedy[]; fees: string[]; headline: string } | null;
  /** Who waits for a manager's answer, and what was granted by the newest decision and not used yet. */
  goodwill: { waits: string | null; grants: { ref: string; remedy: Remedy }[] };
  rmaNumber: string | null;
};

/** What may be authorized: what goodwill grants first, as it was asked for, then what the clause gives. */
const remediesOf = (u: UnitAct): Remedy[] => [
  ...new Set([...u.goodwill.grants.map((g) => g.remedy), ...(u.decision?.remedies ?? [])]),
];
type Act = "tie" | "decide" | "authorize" | "goodwill" | "decline" | "close";
type Props = {
  ticketId: string;
  number: number;
  closed: boolean;
  units: UnitAct[];
  /** Day of the ticket's first receipt. */
  firstDay: string;
  /** What the newest decision knew, so that deciding again starts from there. */
  known: Known | null;
};

/** The next acts of a ticket, in the order they are done. What cannot be done yet says why. */
export function Acts({ ticketId, number, closed, units, firstDay, known }: Props) {
  const first = units[0];
  const decided = units.filter((u) => u.decision);
  const covered = decided.filter(
    (u) => u.decision!.outcome === "covered" || u.decision!.outcome === "covered_doa",
  );
  const [open, setOpen] = useState<Act | null>(null);
  const toggle = (what: Act) => setOpen((o) => (o === what ? null : what));
  const onRma = units.filter((u) => u.rmaNumber);
  const authorizable = decided.filter((u) => !u.rmaNumber && remediesOf(u).length > 0);
  const saidNo = decided.filter((u) => !u.rmaNumber && !covered.includes(u));
  const askable = saidNo.filter((u) => u.goodwill.waits === null);
  return (
    <section className="actsbox" aria-label="What to do next">
      <div className="acts">
        <Button type="button" kind="line" onClick={() => toggle("tie")} aria-expanded={open === "tie"}>
          {first ? "Tie another unit" : "Tie a unit"}
        </Button>
        <Button
          type="button"
          kind="line"
          onClick={() => toggle("decide")}
          aria-expanded={open === "decide"}
          reason={first ? undefined : "Decide: tie a unit first"}
        >
          {decided.length > 0 ? "Decide again" : "Take the decision"}
        </Button>
        <Button
          type="button"
          kind="line"
          onClick={() => toggle("authorize")}
          aria-expanded={open === "authorize"}
          reason={
            authorizable.length > 0
              ? undefined
              : onRma.length > 0
                ? `On ${onRma[0]!.rmaNumber} already`
                : decided.length > 0
                  ? "RMA: no clause gives a remedy"
                  : "RMA: decide first"
          }
        >
          Authorize an RMA
        </Button>
        {askable.length > 0 ? (
          // A link with a page behind it, so that it also asks where no script runs.
          <ButtonLink
            kind="line"
            href={`/goodwill/ask/${number}`}
            prefetch={false}
            aria-expanded={open === "goodwill"}
            onClick={(e) => {
              if (e.metaKey || e.ctrlKey || e.shiftKey) return;
              e.preventDefault();
              toggle("goodwill");
            }}
          >
            Ask for goodwill
          </ButtonLink>
        ) : saidNo.length > 0 ? (
          <Button type="button" kind="line" reason={`Goodwill: asked by ${saidNo[0]!.goodwill.waits}`} />
        ) : null}
        {decided.length > 0 && covered.length === 0 ? (
          <Button
            type="button"
            kind="line"
            onClick={() => toggle("decline")}
            aria-expanded={open === "decline"}
          >
            Decline
          </Button>
        ) : null}
        {closed ? null : (
          <Button type="button" kind="quiet" onClick={() => toggle("close")} aria-expanded={open === "close"}>
            Close the ticket
          </Button>
        )}
      </div>
      {open === "tie" ? <TieForm ticketId={ticketId} number={number} firstDay={firstDay} /> : null}
      {open === "decide" ? (
        <DecideForm ticketId={ticketId} number={number} units={units} known={known} />
      ) : null}
      {open === "authorize" ? (
        <AuthorizeForm ticketId={ticketId} number={number} units={authorizable} />
      ) : null}
      {open === "goodwill" ? <AskForm ticketId={ticketId} number={number} units={askable} /> : null}
      {open === "decline" ? <DeclineForm ticketId={ticketId} number={number} units={decided} /> : null}
      {open === "close" ? <CloseForm ticketId={ticketId} number={number} /> : null}
    </section>
  );
}

const grantedBy = (grants: UnitAct["goodwill"]["grants"], remedy: Remedy): string | undefined => {
  const refs = grants.filter((g) => g.remedy === remedy).map((g) => g.ref);
  return refs.length > 0
    ? `By goodwill, ${refs.join(", ")}. No fee, and the customer is told so.`
    : undefined;
};

function AuthorizeForm({ ticketId, number, units }: { ticketId: string; number: number; units: UnitAct[] }) {
  const [state, send, busy] = useActionState(authorize, UNSENT as FormState<never>);
  const [lines, setLines] = useState(units.map((u) => u.ticketUnitId));
  const chosen = units.filter((u) => lines.includes(u.ticketUnitId));
  const remedies = (chosen[0] ? remediesOf(chosen[0]) : []).filter((r) =>
    chosen.every((u) => remediesOf(u).includes(r)),
  );
  const granted = chosen.flatMap((u) => u.goodwill.grants);
  const other = state.details?.ticketNumber;
  return (
    <form action={send} className="actform">
      <ErrorSummary title="This RMA was not authorized" items={problems(state)} />
      {other ? (
        <p>
          <a href={`/desk/${String(other)}`}>
            Open ticket {String(other)}
            {state.details?.rmaNumber ? `, ${String(state.details.rmaNumber)}` : ""}
          </a>
        </p>
      ) : null}
      <Hidden ticketId={ticketId} number={number} />
      <fieldset className="field">
        <legend>Comes back</legend>
        {units.map((u) => (
          <Check
            key={u.ticketUnitId}
            name="lines"
            value={u.ticketUnitId}
            title={
              <>
                <span className="m">{u.serial}</span>, {u.what}
              </>
            }
            detail={u.decision?.headline}
            checked={lines.includes(u.ticketUnitId)}
            onChange={(e) =>
              setLines((l) =>
                e.target.checked ? [...l, u.ticketUnitId] : l.filter((x) => x !== u.ticketUnitId),
              )
            }
          />
        ))}
      </fieldset>
      <ChoiceGroup
        key={remedies.join()}
        legend="Remedy"
        name="remedy"
        hint={
          granted.length > 0
            ? "What was granted first, then in the order of the clause."
            : "In the order of the clause."
        }
        error={state.fields?.remedy?.[0]}
      >
        {remedies.map((r, i) => (
          <Choice
            key={r}
            name="remedy"
            value={r}
            title={REMEDY_WORDS[r]}
            detail={grantedBy(granted, r)}
            defaultChecked={i === 0}
          />
        ))}
      </ChoiceGroup>
      {[...new Set(chosen.flatMap((u) => u.decision?.fees ?? []))].map((f) => (
        <p className="hint" key={f}>
          Told to the customer before: {f}
        </p>
      ))}
      <Button aria-disabled={busy} reason={chosen.length === 0 ? "Choose a line first" : undefined}>
        {busy ? "Authorizing" : "Authorize and mail the traveler"}
      </Button>
    </form>
  );
}

function DeclineForm({ ticketId, number, units }: { ticketId: string; number: number; units: UnitAct[] }) {
  const [state, send, busy] = useActionState(decline, UNSENT as FormState<never>);
  return (
    <form action={send} className="actform">
      <ErrorSummary title="Nothing was sent" items={problems(state)} />
      <Hidden ticketId={ticketId} number={number} />
      {units.length > 1 ? (
        <Select
          label="For which unit"
          name="ticketUnitId"
          options={units.map((u) => ({ value: u.ticketUnitId, label: u.serial }))}
        />
      ) : (
        <input type="hidden" name="ticketUnitId" value={units[0]?.ticketUnitId ?? ""} />
      )}
      <TextArea
        label="The finding, in words the customer can read"
        name="reason"
        hint="The letter adds the clause, the dates, what would change it and what we offer instead. Write “under our warranty”."
        error={state.fields?.reason?.[0]}
        defaultValue={String(state.values?.reason ?? "")}
        key={String(state.values?.reason ?? "")}
      />
      <Button kind="stop" aria-disabled={busy}>
        Decline and send the letter
      </Button>
    </form>
  );
}

function CloseForm({ ticketId, number }: { ticketId: string; number: number }) {
  const [state, send, busy] = useActionState(close, UNSENT as FormState<never>);
  return (
    <form action={send} className="actform">
      <ErrorSummary title="It was not closed" items={problems(state)} />
      <Hidden ticketId={ticketId} number={number} />
      <Field label="Why nothing more is to do" name="reason" />
      <Button kind="line" aria-disabled={busy}>
        Close the ticket
      </Button>
    </form>
  );
}
