"use client";
import { useActionState } from "react";
import { UNSENT, type FormState } from "@/app/_edge/form";
import { Button } from "@/components/ui/button";
import { Tag } from "@/components/ui/tag";
import { dismiss, tie } from "./actions";

/** The machine proposes, a person decides: is this the unit the mail is about? */
export function UnitPlate({
  ticketId,
  number,
  unit,
}: {
  ticketId: string;
  number: number;
  unit: { unitId: string; serial: string; modelName: string };
}) {
  const [tied, sendTie, tying] = useActionState(tie, UNSENT as FormState<never>);
  const [, sendDismiss, dismissing] = useActionState(dismiss, UNSENT as FormState<never>);
  const hidden = (
    <>
      <input type="hidden" name="ticketId" value={ticketId} />
      <input type="hidden" name="number" value={number} />
      <input type="hidden" name="unitId" value={unit.unitId} />
    </>
  );
  return (
    <div className="proposed notch" role="group" aria-label={`Proposed unit ${unit.serial}`}>
      <p>
        Its text names <Tag serial={unit.serial} />, {unit.modelName}. Is that the unit?
      </p>
      {tied.message && !tied.ok ? (
        <p className="err" role="alert">
          {tied.message}
        </p>
      ) : null}
      <div className="acts">
        <form action={sendTie}>
          {hidden}
          <Button aria-disabled={tying}>Tie this unit</Button>
        </form>
        <form action={sendDismiss}>
          {hidden}
          <Button kind="line" aria-disabled={dismissing}>
            Not this one
          </Button>
        </form>
      </div>
    </div>
  );
}
