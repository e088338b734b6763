"use client";
import Link from "next/link";
import { useActionState, useEffect, type ReactNode } from "react";
import { useRouter } from "next/navigation";
import { UNSENT, type FormState } from "@/app/_edge/form";
import { Uploader } from "@/components/evidence/uploader";
import { Button } from "@/components/ui/button";
import { CautionStrip } from "@/components/ui/caution-strip";
import { ErrorSummary } from "@/components/ui/error-summary";
import { Choice, ChoiceGroup, Field, TextArea } from "@/components/ui/field";
import { showBytes } from "@/lib/base/show";
import { answer, send } from "../../../actions";

type Common = { reportId: string; page: number; back: string; answers: Record<string, string> };

function items(state: FormState<unknown>) {
  const list = Object.entries(state.fields ?? {}).flatMap(([field, messages]) =>
    messages.map((message) => ({ field, message })),
  );
  return list.length === 0 && state.message && !state.ok ? [{ message: state.message }] : list;
}

/** One question, its answer kept, Back keeping it too. */
function Page({
  reportId,
  page,
  back,
  children,
  next = "Next question",
}: Common & { children: (state: FormState<unknown>) => ReactNode; next?: string }) {
  const [state, submit, busy] = useActionState(answer, UNSENT as FormState<never>);
  return (
    <form action={submit} className="question" noValidate>
      <ErrorSummary title="Before we go on" items={items(state)} />
      <input type="hidden" name="reportId" value={reportId} />
      <input type="hidden" name="page" value={page} />
      <input type="hidden" name="back" value={back} />
      {children(state)}
      <p className="pact">
        <Button type="submit" aria-disabled={busy}>
          {back ? "Keep and check" : next}
        </Button>
        {page > 1 ? (
          <a href={`/report/${reportId}/${page - 1}`}>Back</a>
        ) : (
          <Link href="/equipment">Back to your equipment</Link>
        )}
      </p>
    </form>
  );
}

const typed = (state: FormState<unknown>, name: string, kept: string | undefined) => {
  const v = state.values?.[name];
  return typeof v === "string" ? v : (kept ?? "");
};

export function UnitPage(p: Common & { units: { unitId: string; serial: string; name: string }[] }) {
  return (
    <Page {...p}>
      {(state) => (
        <>
          <h1>Which unit is it?</h1>
          <ChoiceGroup legend="Your units" name="unitId" error={state.fields?.unitId?.[0]} quiet>
            {p.units.map((u) => (
              <Choice
                key={u.unitId}
                name="unitId"
                value={u.unitId}
                title={<span className="m">{u.serial}</span>}
                detail={u.name}
                defaultChecked={p.answers.unitId === u.unitId}
              />
            ))}
          </ChoiceGroup>
          <Field
            label="Or type a serial"
            name="serial"
            mono
            hint="Of the unit or of a part in it. Blanks, dashes and capitals do not matter."
            error={state.fields?.serial?.[0]}
            defaultValue={typed(state, "serial", "")}
            autoComplete="off"
          />
        </>
      )}
    </Page>
  );
}

export function PartPage(
  p: Common & { parts: { unitId: string; serial: string; slot: string; name: string; depth: number }[] },
) {
  return (
    <Page {...p}>
      {(state) => (
        <>
          <h1>Which part of it?</h1>
          <p>As we built it, place by place. An alert often names the place.</p>
          <ChoiceGroup legend="Parts" name="partId" error={state.fields?.partId?.[0]} quiet>
            <Choice
              name="partId"
              value="whole"
              title="The whole unit, or I do not know"
              detail="We find out together."
              defaultChecked={p.answers.partId === "whole"}
            />
            <div className="parts-tree">
              {p.parts.map((part) => (
                <div key={part.unitId} style={{ "--d": part.depth - 1 } as React.CSSProperties}>
                  <Choice
                    name="partId"
                    value={part.unitId}
                    title={part.slot}
                    detail={
                      <>
                        <span className="m">{part.serial}</span>, {part.name}
                      </>
                    }
                    defaultChecked={p.answers.partId === part.unitId}
                  />
                </div>
              ))}
            </div>
          </ChoiceGroup>
        </>
      )}
    </Page>
  );
}

export function FaultPage(p: Common & { choices: { value: string; words: string }[] }) {
  return (
    <Page {...p}>
      {(state) => (
        <>
          <h1>What does it do?</h1>
          <ChoiceGroup
            legend="The fault"
            name="faultClass"
            hint="What comes closest."
            error={state.fields?.faultClass?.[0]}
            quiet
          >
            {p.choices.map((c) => (
              <Choice
                key={c.value}
                name="faultClass"
                value={c.value}
                title={c.words}
                defaultChecked={p.answers.faultClass === c.value}
              />
            ))}
          </ChoiceGroup>
        </>
      )}
    </Page>
  );
}

export function WordsPage(p: Common) {
  return (
    <Page {...p}>
      {(state) => (
        <>
          <h1>Tell us in your words</h1>
          <TextArea
            label="What happens, and when"
            name="words"
            rows={6}
            hint="What you saw, what you tried, what changed before it."
            error={state.fields?.words?.[0]}
            defaultValue={typed(state, "words", p.answers.words)}
          />
          <Field
            label="Since when"
            name="since"
            hint="A day or an occasion, such as “since the board swap”. You may leave it empty."
            defaultValue={typed(state, "since", p.answers.since)}
          />
        </>
      )}
    </Page>
  );
}

export function EvidencePage(
  p: Common & {
    wanted: { what: string; why: string }[];
    files: { id: string; name: string; size: number; state: string; reason: string | null }[];
  },
) {
  const router = useRouter();
  const checking = p.files.some((f) => f.state === "quarantined");
  useEffect(() => {
    if (!checking) return;
    const again = setInterval(() => router.refresh(), 1200);
    return () => clearInterval(again);
  }, [checking, router]);
  return (
    <Page {...p}>
      {() => (
        <>
          <h1>Can you show us?</h1>
          <ul className="wanted">
            {p.wanted.map((w) => (
              <li key={w.what}>
                <b>{w.what.charAt(0).toUpperCase() + w.what.slice(1)}.</b> {w.why}
              </li>
            ))}
          </ul>
          <CautionStrip
            column
            items={[
              {
                drawing: "mains",
                title: "First power off and unplug every lead.",
                detail: "Wait 30 seconds, until no lamp is lit.",
              },
              {
                drawing: "esd",
                title: "Clip your wrist strap to the chassis.",
                detail: "Mind sharp edges. The heat sink stays hot for ten minutes.",
              },
              {
                drawing: "socket",
                title: "Put the socket cover back on after.",
                detail: "Never touch bare contacts. Never open a power supply.",
              },
            ]}
          />
          <Uploader
            endpoint="evidence"
            input={{ reportId: p.reportId }}
            label="Take or choose photos, video or logs"
            hint="Up to 25 MB each, ten at once."
            onDone={() => router.refresh()}
          />
          {p.files.length > 0 ? (
            <>
              <h2>With us already</h2>
              <ul className="ups">
                {p.files.map((f) => (
                  <li className="up" key={f.id}>
                    <span className="f">{f.name}</span>
                    <span className="m">{showBytes(f.size)}</span>
                    <span className={f.state === "rejected" ? "st bad" : "st okk"}>
                      {f.state === "rejected"
                        ? f.reason
                        : f.state === "clean"
                          ? "Sent and looked at."
                          : "Sent, being looked at."}
                    </span>
                  </li>
                ))}
              </ul>
            </>
          ) : null}
          <p className="hint">
            You can go on while a file is being sent. Nothing to show? Go on; you can send it later.
          </p>
        </>
      )}
    </Page>
  );
}

export function SafetyPage(p: Common) {
  return (
    <Page {...p}>
      {(state) => (
        <>
          <h1>Is it safe to send?</h1>
          <ChoiceGroup
            legend="Batteries"
            name="battery"
            hint="Boards hold a coin cell, some controllers a pack."
            error={state.fields?.battery?.[0]}
          >
            <Choice
              name="battery"
              value="none"
              title="No battery in it"
              defaultChecked={p.answers.battery === "none"}
            />
            <Choice
              name="battery"
              value="inside"
              title="A battery inside, and it looks as it should"
              defaultChecked={p.answers.battery === "inside"}
            />
            <Choice
              name="battery"
              value="damaged"
              title="A battery that is swollen, hot, leaking or dented"
              detail="Do not ship it. Keep it apart, away from what burns. A person calls you."
              defaultChecked={p.answers.battery === "damaged"}
            />
          </ChoiceGroup>
          <ChoiceGroup legend="Data" name="data" hint="Drives, boot modules and some controllers hold data.">
            <Choice
              name="data"
              value="cleared"
              title="I clear it, or nothing is on it"
              defaultChecked={p.answers.data !== "sanitize"}
            />
            <Choice
              name="data"
              value="sanitize"
              title="You sanitize it"
              detail="You get a sanitization record."
              defaultChecked={p.answers.data === "sanitize"}
            />
          </ChoiceGroup>
        </>
      )}
    </Page>
  );
}

export function CheckPage(p: Common & { facts: { page: number; label: string; value: string }[] }) {
  const [state, submit, busy] = useActionState(send, UNSENT as FormState<never>);
  return (
    <form action={submit} className="question">
      <ErrorSummary title="It cannot go yet" items={items(state)} />
      <h1>Is this right?</h1>
      <dl className="check">
        {p.facts.map((f) => (
          <div key={f.page}>
            <dt>{f.label}</dt>
            <dd>{f.value || <span className="err">not answered</span>}</dd>
            <dd>
              <a href={`/report/${p.reportId}/${f.page}?back=check`}>
                Change<span className="vh"> {f.label.toLowerCase()}</span>
              </a>
            </dd>
          </div>
        ))}
      </dl>
      <input type="hidden" name="reportId" value={p.reportId} />
      <p className="pact">
        <Button type="submit" aria-disabled={busy}>
          {busy ? "Sending" : "Send the report"}
        </Button>
        <a href={`/report/${p.reportId}/6`}>Back</a>
      </p>
      <p className="hint">You read our decision at once, with its reasons.</p>
    </form>
  );
}
