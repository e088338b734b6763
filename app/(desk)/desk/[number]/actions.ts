"use server";
import { action } from "@/app/_edge/action";
import { ok, refuse, type Result } from "@/lib/base/result";
import type { Ctx } from "@/lib/ctx";
import { unitBySerial } from "@/lib/ledger/queries";
import { authorizeRma, declineClaim } from "@/lib/rma/commands";
import {
  addNote,
  askEvidence,
  closeTicket,
  dismissUnit,
  reply,
  takeDecision,
  tieUnit,
} from "@/lib/tickets/commands";

const text = (v: unknown): string => (typeof v === "string" ? v : "");
const list = (v: unknown): string[] =>
  (Array.isArray(v) ? v.map(text) : v === undefined ? [] : [text(v)]).filter(Boolean);

const at = (value: { number: string; ref: string }) => `/desk/${value.number}?done=${value.ref}#${value.ref}`;

/** Every act of a ticket's page ends at its newest entry. */
function act(run: (ctx: Ctx, input: Record<string, unknown>) => Promise<Result<{ ref: string }>>) {
  return action(async (ctx, input) => {
    const done = await run(ctx, input);
    return done.ok ? ok({ number: text(input.number), ref: done.value.ref }) : done;
  }, at);
}

export const write = act(async (ctx, input) => {
  const ticketId = text(input.ticketId);
  if (input.mode === "ask")
    return askEvidence(ctx, { ticketId, wanted: list(input.wanted), text: text(input.text) });
  if (input.mode === "note") return addNote(ctx, { ticketId, text: text(input.text) });
  return reply(ctx, { ticketId, text: text(input.text) });
});

export const tie = act(async (ctx, input) => {
  let unitId = text(input.unitId);
  if (!unitId) {
    const serial = text(input.serial);
    const hit = serial ? await unitBySerial(ctx, serial) : null;
    if (!hit)
      return refuse("not_found", serial ? `${serial} is not in the ledger.` : "Scan or type the serial.", {
        fields: {
          serial: [
            serial
              ? `${serial} is not in the ledger. Look at each character again.`
              : "Scan or type the serial.",
          ],
        },
      });
    unitId = hit.unitId;
  }
  return tieUnit(ctx, {
    ticketId: text(input.ticketId),
    unitId,
    ...(text(input.namedIn) ? { namedIn: text(input.namedIn) } : {}),
  });
});

export const dismiss = act(async (ctx, input) => {
  const done = await dismissUnit(ctx, { ticketId: text(input.ticketId), unitId: text(input.unitId) });
  return done.ok ? ok({ ref: "newest" }) : done;
});

export const decide = act((ctx, input) => {
  const found = Object.entries((input.finding ?? {}) as Record<string, unknown>);
  const names = (value: string) => found.filter(([, v]) => v === value).map(([name]) => name);
  return takeDecision(ctx, {
    ticketId: text(input.ticketId),
    ticketUnitId: text(input.ticketUnitId),
    faultClass: text(input.faultClass) as never,
    established: names("shown"),
    ruledOut: names("ruled_out"),
    powerOnHours: input.powerOnHours,
    terabytesWritten: input.terabytesWritten,
    ...(text(input.logSerial) ? { logSerial: text(input.logSerial) } : {}),
  });
});

export const authorize = act((ctx, input) =>
  authorizeRma(ctx, {
    ticketId: text(input.ticketId),
    lines: list(input.lines).map((ticketUnitId) => ({ ticketUnitId })),
    remedy: text(input.remedy) as never,
  }),
);

export const decline = act((ctx, input) =>
  declineClaim(ctx, {
    ticketId: text(input.ticketId),
    ticketUnitId: text(input.ticketUnitId),
    reason: text(input.reason),
  }),
);

export const close = act((ctx, input) =>
  closeTicket(ctx, {
    ticketId: text(input.ticketId),
    reason: text(input.reason) || "Nothing more to do here",
  }),
);
