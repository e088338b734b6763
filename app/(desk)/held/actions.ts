"use server";
import { action } from "@/app/_edge/action";
import { refuse } from "@/lib/base/result";
import { retryMail } from "@/lib/mail/commands";
import { admitHeld, discardHeld } from "@/lib/tickets/mail.commands";

const text = (v: unknown): string => (typeof v === "string" ? v.trim() : "");

export const admit = action(
  async (ctx, input) => {
    const heldId = text(input.heldId);
    const takesPart = input.takesPart === "on";
    if (input.to === "new") return admitHeld(ctx, { heldId, takesPart });
    const number = Number(text(input.ticketNumber).replace(/^#/, ""));
    if (!Number.isSafeInteger(number) || number < 1)
      return refuse("invalid", "One field needs another look.", {
        fields: { ticketNumber: ["Give the ticket's number, or open a new one."] },
      });
    return admitHeld(ctx, { heldId, ticketNumber: number, takesPart });
  },
  (value) => `/desk/${value.number}`,
);

export const discard = action(
  (ctx, input) => discardHeld(ctx, { heldId: text(input.heldId) }),
  () => "/held?done=aside",
);

export const again = action(
  (ctx, input) => retryMail(ctx, text(input.outboxId)),
  () => "/held?done=again#failed",
);
