"use client";
import { useActionState } from "react";
import { UNSENT, type FormState } from "@/app/_edge/form";
import { Button } from "@/components/ui/button";
import { Tag } from "@/components/ui/tag";
import { dismiss, tie } from "./actions";

type Proposed = { unitId: string; serial: string; modelName: string };

/** The machine proposes, a person decides: which of the serials in the text is the mail about? */
export function UnitPlate({
  ticketId,
  number,
  units,
}: {
  ticketId: string;
  number: number;
  units: Proposed[];
}) {
  const [tied, sendTie, tying] = useActionState(tie, UNSENT as FormState<never>);
  const [, sendDismiss, dismissing] = useActionState(dismiss, UNSENT as FormState<never>);
  return (
    <div className="proposed notch" role="group" aria-label="Proposed units">
      <p>
        {units.length === 1
          ? "Its text names one serial. Is that the unit?"
          : `Its text names ${units.length} serials. Which is the unit?`}
      </p>
      {tied.message && !tied.ok ? (
        <p className="err" role="alert">
          {tied.message}
        </p>
      ) : null}
      <ul>
        {units.map((u, i) => (
          <li key={u.unitId}>
            <span>
              <Tag serial={u.serial} /> {u.modelName}
            </span>
            <span className="acts">
              <form action={sendTie}>
                <input type="hidden" name="ticketId" value={ticketId} />
                <input type="hidden" name="number" value={number} />
                <input type="hidden" name="unitId" value={u.unitId} />
                <Button kind={i === 0 ? "main" : "line"} aria-disabled={tying}>
                  Tie this unit<span className="vh"> {u.serial}</span>
                </Button>
              </form>
              <form action={sendDismiss}>
                <input type="hidden" name="ticketId" value={ticketId} />
                <input type="hidden" name="number" value={number} />
                <input type="hidden" name="unitId" value={u.unitId} />
                <Button kind="quiet" aria-disabled={dismissing}>
                  Not this one<span className="vh"> {u.serial}</span>
                </Button>
              </form>
            </span>
          </li>
        ))}
      </ul>
    </div>
  );
}
