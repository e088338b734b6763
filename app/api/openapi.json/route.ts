import { env } from "@/lib/env";
import { openApi } from "@/lib/tickets/openapi";

export function GET(): Response {
  return Response.json(openApi(env().MENDBAY_URL), { headers: { "cache-control": "public, max-age=300" } });
}
