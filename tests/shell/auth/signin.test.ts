import { sql } from "drizzle-orm";
import { beforeAll, describe, expect, it, vi } from "vitest";
import { NextRequest } from "next/server";
import { must } from "@/lib/base/result";
import { countCodeTry, endSessions, issueCode } from "@/lib/auth/commands";
import { CODE_MINUTES } from "@/lib/auth/schema";
import { authOptions, hashCode } from "@/lib/auth/session.io";
import { as, at, count, job, NOON, rows, seller, type Seller } from "../../factories/seller";
import { freshDb } from "../db";

vi.mock("@/app/_edge/ctx", () => ({
  currentCtx: () => Promise.resolve({ ...job(), actor: { kind: "anonymous" } }),
}));
// Outside a request there are neither headers nor a way to go on; both are the framework's own.
vi.mock("next/headers", () => ({
  headers: () => Promise.resolve(new Headers()),
  cookies: () => Promise.resolve(new Map()),
}));
class Sent extends Error {
  constructor(readonly to: string) {
    super(to);
  }
}
vi.mock("next/navigation", () => ({
  redirect: (to: string) => {
    throw new Sent(to);
  },
}));

await freshDb();
let s: Seller;
beforeAll(async () => {
  s = await seller();
  await rows(sql`delete from verification_token returning 1`);
  await rows(sql`delete from attempt returning 1`);
});

/** The one place that consumes a token: next-auth's adapter over our tables. */
const take = (email: string, code: string) =>
  authOptions().adapter!.useVerificationToken!({ identifier: email, token: hashCode(code) });

describe("a code", () => {
  it("is good once, and for its address alone", async () => {
    const { code, email } = must(await issueCode(job(), "sam@pinnock.example"))!;
    expect(code).toMatch(/^[0-9A-HJKMNP-TV-Z]{10}$/);
    expect(await take("dana@lowmere.example", code)).toBeNull();
    expect(await take(email, `${code.slice(0, -1)}${code.endsWith("0") ? "1" : "0"}`)).toBeNull();
    const kept = await take(email, code);
    expect(kept!.expires.getTime()).toBe(NOON.getTime() + CODE_MINUTES * 60_000);
    expect(await take(email, code)).toBeNull();
  });

  it("is good once for two who come at the same time", async () => {
    const { code, email } = must(await issueCode(job(), "sam@pinnock.example"))!;
    const both = await Promise.all([take(email, code), take(email, code)]);
    expect(both.filter(Boolean)).toHaveLength(1);
  });

  it("is kept only as a hash", async () => {
    const { code } = must(await issueCode(job(), "sam@pinnock.example"))!;
    const kept = JSON.stringify(await rows(sql`select * from verification_token`));
    expect(kept).toContain(hashCode(code));
    expect(kept).not.toContain(code);
    expect(JSON.stringify(await rows(sql`select * from audit_row`))).not.toContain(code);
  });

  it("is asked for six times in a quarter of an hour, then no more until the next", async () => {
    const ask = (now: Date) => issueCode(job(now), "dana@lowmere.example");
    const now = at("2026-06-04T10:01:00Z");
    for (let i = 0; i < 6; i++) expect((await ask(now)).ok).toBe(true);
    for (let i = 0; i < 3; i++)
      expect(await ask(now)).toMatchObject({
        ok: false,
        refusal: { code: "too_many", details: { retryAfterSeconds: 900 } },
      });
    expect((await issueCode(job(now), "sam@pinnock.example")).ok).toBe(true);
    expect((await ask(at("2026-06-04T10:16:00Z"))).ok).toBe(true);
  });

  it("is guessed twelve times, then no more", async () => {
    const guess = () => countCodeTry(job(), "dana@lowmere.example");
    for (let i = 0; i < 12; i++) expect((await guess()).ok).toBe(true);
    expect(await guess()).toMatchObject({ ok: false, refusal: { code: "too_many" } });
  });

  it("is not issued to somebody who has left", async () => {
    await rows(sql`update "user" set ended_at = now() where email = 'ruben@ostwick.example' returning id`);
    expect(must(await issueCode(job(), "ruben@ostwick.example"))).toBeNull();
  });
});

describe("asking for a link", () => {
  const ask = async (email: string) => {
    const { askForLink } = await import("@/app/(door)/actions");
    const form = new FormData();
    form.set("email", email);
    form.set("next", "/equipment");
    const { UNSENT } = await import("@/app/_edge/form");
    const before = await count("outbox");
    const sent = await askForLink(UNSENT, form).catch((thrown: unknown) => thrown);
    const to = sent instanceof Sent ? sent.to.replace(encodeURIComponent(email), "…") : sent;
    return { to, mails: (await count("outbox")) - before };
  };
  it("answers alike for a known and an unknown address, and writes to the known one only", async () => {
    const [known, unknown] = [await ask("sam@pinnock.example"), await ask("nobody@nowhere.example")];
    expect(known).toEqual({ to: "/sign-in/sent?email=…&next=%2Fequipment", mails: 1 });
    expect(unknown).toEqual({ ...known, mails: 0 });
    const [mail] = await rows<{ props: { link: string } }>(
      sql`select props from outbox where template = 'sign_in' order by created_at desc limit 1`,
    );
    // The host is the setting's, whatever a request's Host says.
    expect(mail!.props.link).toMatch(/^http:\/\/127\.0\.0\.1:3000\/sign-in\/confirm\?token=/);
    expect(await count(`user`)).toBe(
      (await rows(sql`select 1 from "user" where email <> 'nobody@nowhere.example'`)).length,
    );
  });
});

describe("a typed code", () => {
  const post = async (fields: Record<string, string>, headers: Record<string, string> = {}) => {
    const { POST } = await import("@/app/enter/route");
    return POST(
      new NextRequest("http://127.0.0.1:3000/enter", {
        method: "POST",
        headers,
        body: new URLSearchParams(fields),
      }),
    );
  };
  it("goes on to the place that consumes it, read as people type it, and never to another host", async () => {
    const sent = await post({ email: "Sam@Pinnock.example", code: "7k2m9-q4xib", next: "//evil.example" });
    expect(sent.status).toBe(307);
    const to = new URL(sent.headers.get("location")!);
    expect(to.origin + to.pathname).toBe("http://127.0.0.1:3000/api/auth/callback/email");
    expect(to.searchParams.get("token")).toBe("7K2M9Q4X1B");
    expect(to.searchParams.get("callbackUrl")).toBe("http://127.0.0.1:3000/");
  });
  it("that is too short goes back, with what was typed kept", async () => {
    const sent = await post({ email: "sam@pinnock.example", code: "7K2", next: "/cases" });
    expect(sent.status).toBe(303);
    expect(sent.headers.get("location")).toContain("error=code");
  });
  it("from another site is refused, and the demo's door is shut outside a demo", async () => {
    const cross = await post(
      { email: "sam@pinnock.example", code: "7K2M9-Q4X1B" },
      { "sec-fetch-site": "cross-site" },
    );
    expect(cross.status).toBe(403);
    expect((await post({ demo: "1", email: "tobias@ostwick.example" })).status).toBe(404);
  });
});

describe("sessions", () => {
  it("are ended at once by an admin, and by nobody else", async () => {
    const { createSession, getSessionAndUser } = authOptions().adapter!;
    const token = "a-session-token";
    await createSession!({ sessionToken: token, userId: s.sam.userId, expires: at("2099-01-01T00:00:00Z") });
    expect((await getSessionAndUser!(token))!.user.email).toBe("sam@pinnock.example");
    expect(await endSessions(as(s.agent), s.sam.userId)).toMatchObject({
      ok: false,
      refusal: { code: "forbidden" },
    });
    expect(must(await endSessions(as(s.admin), s.sam.userId))).toEqual({ ended: 1 });
    expect(await getSessionAndUser!(token)).toBeNull();
  });
});
