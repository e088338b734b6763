import { must } from "@/lib/base/result";
import type { Ctx } from "@/lib/ctx";
import { sweepMail } from "@/lib/mail/commands";

/** Every two minutes: mail whose job was lost with the worker that had it. */
export async function handle(ctx: Ctx): Promise<void> {
  must(await sweepMail(ctx));
}
