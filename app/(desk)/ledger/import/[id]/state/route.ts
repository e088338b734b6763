import { api } from "@/app/_edge/route";
import { permit } from "@/lib/auth/rules";
import { ok, refuse } from "@/lib/base/result";
import { importBatch } from "@/lib/ledger/queries";

const UUID = /^[0-9a-f]{8}(-[0-9a-f]{4}){3}-[0-9a-f]{12}$/;

/** How far an import is, for its page to ask. */
export const GET = api<
  {
    id: string;
    state: string;
    rowsGood: number;
    rowsDone: number;
    rowsTotal: number;
    added: Record<string, number>;
    error: string | null;
  },
  { id: string }
>(async (ctx, { params }) => {
  const may = permit(ctx, "ledger.import");
  if (!may.ok) return refuse("not_found", "Not found.");
  const b = UUID.test(params.id) ? await importBatch(ctx, params.id) : null;
  return b
    ? ok({
        id: b.id,
        state: b.state,
        rowsGood: b.rowsGood,
        rowsDone: b.rowsDone,
        rowsTotal: b.rowsTotal,
        added: b.added,
        error: b.error,
      })
    : refuse("not_found", "Not found.");
});
