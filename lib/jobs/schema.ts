import { z } from "zod";

/** Every job by name with the shape of its payload, checked when it is put in and when it is taken out. */
export const JOBS = {
  "mail.parse": z.object({ rawMailId: z.uuid() }),
  "mail.send": z.object({ outboxId: z.uuid() }),
  "mail.sweep": z.object({}),
  "file.check": z.object({ fileId: z.uuid() }),
  "ledger.apply_import": z.object({ importId: z.uuid() }),
  "terms.preview": z.object({ previewId: z.uuid() }),
  "cover.follow_days": z.object({ from: z.iso.date(), to: z.iso.date() }),
} as const;

export type JobName = keyof typeof JOBS;
export type JobPayload<N extends JobName> = z.output<(typeof JOBS)[N]>;
