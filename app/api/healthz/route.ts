export const dynamic = "force-dynamic";

/** The process answers; nothing else is asked. */
export function GET(): Response {
  return Response.json({ alive: true }, { headers: { "cache-control": "no-store" } });
}
