import "server-only";
import { unstable_rethrow } from "next/navigation";
import type { NextRequest } from "next/server";
import { ok, refuse, type Result } from "@/lib/base/result";
import type { Ctx } from "@/lib/ctx";
import { env } from "@/lib/env";
import { log } from "@/lib/log";
import { currentCtx } from "./ctx";
import { crashed, nextLink, problem, versionIn } from "./problem";

const MAX_BODY = 1_048_576;

export type Call<P> = {
  params: P;
  /** The query as an object; a name that comes twice is a list. */
  query: Record<string, string | string[]>;
  request: NextRequest;
  /** The JSON body. Read it once. */
  body(): Promise<Result<unknown>>;
  /** The version that If-Match names, when there is one. */
  version: number | undefined;
};

type How<T> = {
  /** 201 with the place of what was made. */
  created?: (value: T) => string;
  /** The version of what is answered, for a later If-Match. */
  version?: (value: T) => number | undefined;
  /** The cursor of the next page. */
  cursor?: (value: T) => string | null | undefined;
};

/**
 * A route handler from a query or command: Result → HTTP. Refusals become problem details; a
 * throw is a bug: logged with the request's id, and answered without its words.
 *
 *     export const GET = api((ctx, { query }) => desk(ctx, query));
 */
export function api<T, P = Record<string, string>>(
  run: (ctx: Ctx, call: Call<P>) => Promise<Result<T>>,
  how: How<T> = {},
): (request: NextRequest, at: { params: Promise<P> }) => Promise<Response> {
  return async (request, at) => {
    const ctx = await currentCtx();
    const where = { origin: env().MENDBAY_URL, requestId: ctx.requestId };
    try {
      const foreign = refuseForeign(request);
      const result = foreign ?? (await run(ctx, await callOf(request, await at.params)));
      return result.ok ? answer(request, ctx, result.value, how) : problem(result.refusal, where);
    } catch (thrown) {
      unstable_rethrow(thrown);
      log.error({ err: thrown, requestId: ctx.requestId, path: request.nextUrl.pathname }, "request failed");
      return crashed(where);
    }
  };
}

/** A cookie is sent by the browser whoever asks: a change asked for by another site is refused. */
function refuseForeign(request: NextRequest) {
  const reads = ["GET", "HEAD", "OPTIONS"].includes(request.method);
  if (reads || request.headers.get("sec-fetch-site") !== "cross-site") return undefined;
  return refuse("forbidden", "This was asked for by another site.");
}

async function callOf<P>(request: NextRequest, params: P): Promise<Call<P>> {
  const query: Call<P>["query"] = {};
  for (const name of new Set(request.nextUrl.searchParams.keys())) {
    const all = request.nextUrl.searchParams.getAll(name);
    query[name] = all.length > 1 ? all : (all[0] ?? "");
  }
  return {
    params,
    query,
    request,
    body: () => readJson(request),
    version: versionIn(request.headers.get("if-match")),
  };
}

async function readJson(request: NextRequest): Promise<Result<unknown>> {
  if (!/^application\/([a-z.]+\+)?json\b/i.test(request.headers.get("content-type") ?? ""))
    return refuse("unsupported", "Send JSON, with content-type application/json.");
  let text = "";
  let size = 0;
  const decoder = new TextDecoder("utf-8");
  for await (const chunk of request.body ?? []) {
    size += chunk.byteLength;
    if (size > MAX_BODY) return refuse("too_large", "The body may have 1 MiB at most.");
    text += decoder.decode(chunk, { stream: true });
  }
  try {
    return ok(JSON.parse(text + decoder.decode()) as unknown);
  } catch {
    return refuse("invalid", "The body is not JSON.");
  }
}

function answer<T>(request: NextRequest, ctx: Ctx, value: T, how: How<T>): Response {
  const headers = new Headers({ "cache-control": "private, no-store", "x-request-id": ctx.requestId });
  const place = how.created?.(value);
  if (place) headers.set("location", place);
  const version = how.version?.(value);
  if (version !== undefined) headers.set("etag", `"${version}"`);
  const link = nextLink(request.nextUrl, how.cursor?.(value));
  if (link) headers.set("link", link);
  if (value === undefined) return new Response(null, { status: 204, headers });
  headers.set("content-type", "application/json");
  return new Response(JSON.stringify(value), { status: place ? 201 : 200, headers });
}
