import { readiness } from "@/lib/jobs/queries";

export const dynamic = "force-dynamic";

/** May this process take requests: its database answers and has the newest shape. */
export async function GET(): Promise<Response> {
  const state = await readiness();
  return Response.json(state, {
    status: state.ready ? 200 : 503,
    headers: { "cache-control": "no-store" },
  });
}
