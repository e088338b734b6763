import { api } from "@/app/_edge/route";
import { refuse } from "@/lib/base/result";
import { reply } from "@/lib/tickets/commands";
import { ticketByNumber } from "@/lib/tickets/queries";

/** Adds to the record. The version read before goes into If-Match, so that nobody writes past a colleague. */
export const POST = api<{ ref: string }, { number: string }>(
  async (ctx, { params, body, version }) => {
    const ticket = await ticketByNumber(ctx, Number(params.number));
    if (!ticket) return refuse("not_found", "Not found.");
    if (version === undefined)
      return refuse("version_missing", "Send If-Match with the ETag you read the ticket with.");
    const input = await body();
    if (!input.ok) return input;
    const text = (input.value as { text?: unknown } | null)?.text;
    return reply(ctx, { ticketId: ticket.id, text: typeof text === "string" ? text : "" }, version);
  },
  { created: (v) => `#${v.ref}` },
);
