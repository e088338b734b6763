import type { Ctx } from "@/lib/ctx";
import type { JobName, JobPayload } from "../schema";

export type Handler<N extends JobName> = (ctx: Ctx, payload: JobPayload<N>) => Promise<void>;

/**
 * Which file does which job. Loaded when the first such job comes, so that one broken
 * handler stops its own jobs and no other. A job without a line here waits, and is retried.
 */
export const HANDLERS: { [N in JobName]?: () => Promise<{ handle: Handler<N> }> } = {
  "mail.parse": () => import("./parseMail"),
  "mail.send": () => import("./sendMail"),
  "mail.sweep": () => import("./sweepMail"),
  "file.check": () => import("./checkFile"),
  "ledger.apply_import": () => import("./applyImport"),
  "terms.preview": () => import("./preview"),
  "cover.follow_days": () => import("./followDays"),
};
