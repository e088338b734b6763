import { request as httpRequest } from "node:http";
import { expect, test } from "./fixtures";

test("the system says that it is alive and ready", async ({ request }) => {
  expect(await (await request.get("/healthz")).json()).toEqual({ alive: true });
  expect(await (await request.get("/readyz")).json()).toEqual({
    ready: true,
    database: true,
    migrated: true,
  });
});

test("every answer carries the protective headers, errors too", async ({ request }) => {
  for (const path of ["/sign-in", "/no-such-page", "/api/v1/no-such-route", "/healthz"]) {
    const headers = (await request.get(path)).headers();
    expect(headers["x-content-type-options"], path).toBe("nosniff");
    expect(headers["strict-transport-security"], path).toMatch(/max-age=\d{8}/);
    expect(headers["referrer-policy"], path).toBe("same-origin");
    expect(headers["content-security-policy"], path).toMatch(
      /script-src 'self' 'nonce-[^']+' 'strict-dynamic';/,
    );
    expect(headers["content-security-policy"], path).toContain("frame-ancestors 'none'");
    expect(headers["x-powered-by"], path).toBeUndefined();
  }
});

test("a nonce serves one answer", async ({ request }) => {
  const nonce = async () =>
    /'nonce-([^']+)'/.exec((await request.get("/sign-in")).headers()["content-security-policy"]!)?.[1];
  expect(await nonce()).not.toBe(await nonce());
});

test("odd methods are answered 405 and named", async ({ running }) => {
  const status = (method: string, path: string) =>
    new Promise<number | undefined>((done, fail) => {
      const asking = httpRequest(new URL(path, running.url), { method }, (answer) => {
        answer.resume();
        done(answer.statusCode);
      });
      asking.on("error", fail).end();
    });
  for (const method of ["TRACE", "PUT", "DELETE", "PROPFIND"])
    expect(await status(method, "/sign-in"), method).toBe(405);
  expect(await status("TRACE", "/api/v1/tickets")).toBe(405);
});
