import { api } from "@/app/_edge/route";
import { permit } from "@/lib/auth/rules";
import { ok, refuse } from "@/lib/base/result";
import { ticketByNumber } from "@/lib/tickets/queries";

/** One ticket with its record. A customer gets their own, without inner notes. */
export const GET = api<NonNullable<Awaited<ReturnType<typeof ticketByNumber>>>, { number: string }>(
  async (ctx, { params }) => {
    const may = permit(ctx, "ticket.read");
    if (!may.ok) return may;
    const found = await ticketByNumber(ctx, Number(params.number));
    return found ? ok(found) : refuse("not_found", "Not found.");
  },
  { version: (t) => t.version },
);
