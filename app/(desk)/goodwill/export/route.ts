import { currentCtx } from "@/app/_edge/ctx";
import { goodwillSheet } from "@/lib/coverage/goodwill";
import { goodwillRows } from "@/lib/coverage/goodwill.queries";

/** The list as CSV, by the same filter as the page. Who may not read it finds nothing here. */
export async function GET(request: Request): Promise<Response> {
  const { searchParams } = new URL(request.url);
  const found = await goodwillRows(await currentCtx(), {
    ...Object.fromEntries(searchParams),
    after: null,
  });
  if (!found.ok)
    return new Response("Not found.", {
      status: 404,
      headers: { "content-type": "text/plain; charset=utf-8", "cache-control": "no-store" },
    });
  return new Response(goodwillSheet(found.value.rows, found.value.zone), {
    headers: {
      "content-type": "text/csv; charset=utf-8",
      "content-disposition": 'attachment; filename="goodwill.csv"',
      "cache-control": "private, no-store",
      "x-content-type-options": "nosniff",
    },
  });
}
