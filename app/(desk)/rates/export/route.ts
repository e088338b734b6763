import { currentCtx } from "@/app/_edge/ctx";
import type { Result } from "@/lib/base/result";
import type { Ctx } from "@/lib/ctx";
import { rates, survival, triangle } from "@/lib/reliability/queries";
import { ratesSheet, SHEETS, survivalSheet, triangleSheet, type Sheet } from "@/lib/reliability/sheet";

const sheetOf: Record<Sheet, (ctx: Ctx, filter: unknown) => Promise<Result<string>>> = {
  rates: async (ctx, filter) => then(await rates(ctx, filter), ratesSheet),
  survival: async (ctx, filter) => then(await survival(ctx, filter), survivalSheet),
  triangle: async (ctx, filter) => then(await triangle(ctx, filter), triangleSheet),
};

function then<T>(result: Result<T>, write: (value: T) => string): Result<string> {
  return result.ok ? { ok: true, value: write(result.value) } : result;
}

/** A figure's rows as CSV, by the same filter as the page. Who may not read rates finds nothing here. */
export async function GET(request: Request): Promise<Response> {
  const { searchParams } = new URL(request.url);
  const sheet = SHEETS.find((s) => s === (searchParams.get("sheet") ?? "rates"));
  const found = sheet ? await sheetOf[sheet](await currentCtx(), Object.fromEntries(searchParams)) : null;
  if (!found?.ok)
    return new Response("Not found.", {
      status: 404,
      headers: { "content-type": "text/plain; charset=utf-8", "cache-control": "no-store" },
    });
  return new Response(found.value, {
    headers: {
      "content-type": "text/csv; charset=utf-8",
      "content-disposition": `attachment; filename="${sheet}.csv"`,
      "cache-control": "private, no-store",
      "x-content-type-options": "nosniff",
    },
  });
}
