"use server";
import { action } from "@/app/_edge/action";
import { ok, refuse } from "@/lib/base/result";
import { noteGivenOn, noteMovedPart, notePause, noteTransferNotice } from "@/lib/coverage/holding.commands";
import { unitBySerial } from "@/lib/ledger/queries";

const text = (v: unknown): string => (typeof v === "string" ? v : "");
const at = (v: { serial: string }) => `/ledger/${encodeURIComponent(v.serial)}?noted=1`;

/** A fact of who holds a unit and where, noted by hand; its cover follows at once. */
export const givenOn = action(async (ctx, input) => {
  const done = await noteGivenOn(ctx, {
    unitId: text(input.unitId),
    accountCode: text(input.accountCode),
    onDay: text(input.onDay),
    ...(text(input.noticedOn) ? { noticedOn: text(input.noticedOn) } : {}),
  });
  return done.ok ? ok({ serial: text(input.serial) }) : done;
}, at);

export const noticed = action(async (ctx, input) => {
  const done = await noteTransferNotice(ctx, {
    unitId: text(input.unitId),
    noticedOn: text(input.noticedOn),
  });
  return done.ok ? ok({ serial: text(input.serial) }) : done;
}, at);

export const moved = action(async (ctx, input) => {
  const into = text(input.toSerial) ? await unitBySerial(ctx, text(input.toSerial)) : null;
  if (!into)
    return refuse("not_found", "Scan or type the serial of the system it stands in now.", {
      fields: {
        toSerial: [
          text(input.toSerial)
            ? `${text(input.toSerial)} is not in the ledger. Look at each character again.`
            : "Scan or type the serial of the system it stands in now.",
        ],
      },
    });
  const done = await noteMovedPart(ctx, {
    partUnitId: text(input.unitId),
    toUnitId: into.systemUnitId ?? into.unitId,
    slot: text(input.slot),
    onDay: text(input.onDay),
    ...(text(input.noticedOn) ? { noticedOn: text(input.noticedOn) } : {}),
  });
  return done.ok ? ok({ serial: text(input.serial) }) : done;
}, at);

export const paused = action(async (ctx, input) => {
  const done = await notePause(ctx, {
    unitId: text(input.unitId),
    from: text(input.from),
    to: text(input.to),
    reason: text(input.reason),
  });
  return done.ok ? ok({ serial: text(input.serial) }) : done;
}, at);
