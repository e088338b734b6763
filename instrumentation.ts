/**
 * Runs once when the server starts. Fetch has no TRACE, so the framework would fail on such a
 * request before any code of ours sees it: under another odd name it reaches proxy.ts, which
 * answers 405.
 */
export async function register(): Promise<void> {
  if (process.env.NEXT_RUNTIME !== "nodejs") return;
  const { subscribe } = await import("node:diagnostics_channel");
  subscribe("http.server.request.start", (message) => {
    const { request } = message as { request: { method?: string } };
    if (request.method === "TRACE") request.method = "PROPFIND";
  });
}
