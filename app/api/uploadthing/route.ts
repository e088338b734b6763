import { createRouteHandler, createUploadthing, UTFiles, type FileRouter } from "uploadthing/next";
import { UploadThingError } from "uploadthing/server";
import { z } from "zod";
import { currentCtx } from "@/app/_edge/ctx";
import { jobCtx, type Ctx } from "@/lib/ctx";
import type { Result } from "@/lib/base/result";
import { keepPhoto } from "@/lib/dock/commands";
import { KeepPhoto } from "@/lib/dock/schema";
import { addEvidence } from "@/lib/evidence/commands";
import { fileArrived, promiseFiles } from "@/lib/files/commands";
import { attachEvidence } from "@/lib/tickets/commands";
import type { FilePurpose } from "@/lib/files/schema";

const f = createUploadthing({
  errorFormatter: (e) => ({ message: e.cause instanceof Error ? e.cause.message : e.message }),
});

function said<T>(result: Result<T>): T {
  if (result.ok) return result.value;
  throw new UploadThingError({
    code:
      result.refusal.code === "forbidden" || result.refusal.code === "unauthenticated"
        ? "FORBIDDEN"
        : "BAD_REQUEST",
    message: result.refusal.message,
  });
}

type Sent = readonly { name: string; size: number; type: string }[];

/** Promises the files, and sends our ids along: only ids leave our server. */
async function promise(
  ctx: Ctx,
  sent: Sent,
  purpose: FilePurpose,
  link: (ctx: Ctx, fileIds: string[]) => Promise<void>,
) {
  const accountId = ctx.actor.kind === "customer" ? ctx.actor.accountId : null;
  const { fileIds } = said(await promiseFiles(ctx, { purpose, accountId, files: [...sent] }));
  await link(ctx, fileIds);
  return { fileIds, [UTFiles]: sent.map((file, i) => ({ ...file, customId: fileIds[i]! })) };
}

async function arrived(file: { key: string; size: number; customId: string | null }) {
  if (file.customId)
    said(await fileArrived(jobCtx("upload"), { fileId: file.customId, key: file.key, size: file.size }));
  return { fileId: file.customId };
}

const limits = { maxFileSize: "32MB", maxFileCount: 10 } as const;
const PICTURES = {
  "image/jpeg": limits,
  "image/png": limits,
  "image/webp": limits,
  "image/heic": limits,
} as const;
// A browser calls a log many things, and some nothing at all: the check decides by the bytes.
const EVIDENCE = {
  ...PICTURES,
  video: limits,
  audio: limits,
  text: limits,
  pdf: limits,
  blob: limits,
} as const;
// File names repeat; a key must not.
const options = { awaitServerData: true, getFileHashParts: () => [crypto.randomUUID()] };

const router = {
  evidence: f(EVIDENCE, options)
    .input(
      z.object({
        reportId: z.uuid().optional(),
        ticketId: z.uuid().optional(),
        wanted: z.string().max(200).optional(),
      }),
    )
    .middleware(async ({ files, input }) => {
      const ctx = await currentCtx();
      return promise(ctx, files, "evidence", async (ctx, fileIds) => {
        if (ctx.actor.kind !== "customer")
          throw new UploadThingError({ code: "FORBIDDEN", message: "Sign in as the customer." });
        // To a case: with its entry in the record, and only to a case of theirs.
        if (input.ticketId) {
          said(
            await attachEvidence(ctx, {
              ticketId: input.ticketId,
              fileIds,
              source: "portal",
              fromName: ctx.actor.name,
            }),
          );
          return;
        }
        if (!input.reportId)
          throw new UploadThingError({ code: "BAD_REQUEST", message: "Start from your case or a report." });
        said(
          await addEvidence(ctx, {
            fileIds,
            reportId: input.reportId,
            ticketId: input.ticketId,
            accountId: ctx.actor.accountId,
            source: "portal",
            fromName: ctx.actor.name,
            wanted: input.wanted,
          }),
        );
      });
    })
    .onUploadComplete(({ file }) => arrived(file)),
  photo: f(PICTURES, options)
    .input(KeepPhoto.omit({ fileId: true }))
    .middleware(async ({ files, input }) => {
      const ctx = await currentCtx();
      return promise(
        ctx,
        files,
        input.subject === "bench_test" ? "bench_photo" : "dock_photo",
        async (ctx, fileIds) => {
          for (const fileId of fileIds) said(await keepPhoto(ctx, { ...input, fileId }));
        },
      );
    })
    .onUploadComplete(({ file }) => arrived(file)),
} satisfies FileRouter;

export const { GET, POST } = createRouteHandler({ router, config: { logLevel: "Error" } });
