import fc from "fast-check";
import { beforeAll, describe, expect, test } from "vitest";

const settings = {
  DATABASE_URL: "postgres://nobody@127.0.0.1/none",
  MENDBAY_SECRET: "a secret that only tests know, 32 and more",
};
let token: typeof import("@/lib/mail/token.io");
beforeAll(async () => {
  Object.assign(process.env, settings);
  token = await import("@/lib/mail/token.io");
});

const holds = (address: string, email = "ines@pinnock.example") => {
  const read = token.readReplyAddress(address);
  return read !== null && token.tokenHolds(read, [email]);
};

describe("the signed reply address", () => {
  test("holds for its ticket and person, in upper case too", () => {
    const address = token.replyAddress(1042, "ines@pinnock.example");
    expect(holds(address)).toBe(true);
    expect(holds(address.toUpperCase())).toBe(true);
    expect(token.readReplyAddress(address)?.ticketNumber).toBe(1042);
    expect(holds(address, "other@pinnock.example")).toBe(false);
  });

  // RFC 5321 s. 4.5.3.1.1: a local part has 64 octets at most.
  test("its local part stays within the limit for every ticket", () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 2_000_000_000 }), fc.emailAddress(), (n, email) => {
        const address = token.replyAddress(n, email);
        return address.indexOf("@") <= 64 && holds(address, email);
      }),
    );
  });

  test("any one character changed, and it does not hold", () => {
    const address = token.replyAddress(1042, "ines@pinnock.example");
    const at = address.indexOf("@");
    for (let i = 2; i < at; i++)
      for (const c of "0123456789abcdefghjkmnpqrstvwxyz+-".replace(address[i]!, ""))
        expect(holds(address.slice(0, i) + c + address.slice(i + 1))).toBe(false);
  });

  test("10,000 guessed ones: none holds", () => {
    const letters = fc.constantFrom(..."0123456789abcdefghjkmnpqrstvwxyz");
    fc.assert(
      fc.property(
        fc.string({ unit: letters, minLength: 20, maxLength: 20 }),
        (tag) => !holds(`r+a000010j${tag}@ostwick.example`),
      ),
      { numRuns: 10_000 },
    );
  });

  test("another domain's address of the same form is none of ours", () => {
    const address = token.replyAddress(7, "a@b.example").replace("ostwick.example", "0stwick.example");
    expect(token.readReplyAddress(address)).toBeNull();
  });
});
