"use server";
import { action } from "@/app/_edge/action";
import { ok } from "@/lib/base/result";
import { cancelImport, startImport } from "@/lib/ledger/commands";

const id = (input: Record<string, unknown>) => (typeof input.id === "string" ? input.id : "");

export const add = action(
  (ctx, input) => startImport(ctx, id(input)),
  ({ importId }) => `/ledger/import/${importId}`,
);

export const stop = action(
  async (ctx, input) => {
    const done = await cancelImport(ctx, id(input));
    return done.ok ? ok({ importId: id(input) }) : done;
  },
  ({ importId }) => `/ledger/import/${importId}`,
);
