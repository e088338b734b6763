import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { addDays } from "@/lib/base/civil";
import {
  BUILT_IN,
  forbiddenIn,
  KeepLawNotice,
  noticeFor,
  regionOf,
  type LawNotice,
} from "@/lib/coverage/law";
import { decide } from "@/lib/coverage/rules";
import { LAW_REGIONS } from "@/lib/coverage/schema";
import { DeclineRma } from "@/lib/rma/schema";
import { claim, CLAUSES, WRITES } from "./facts";

const at = (country: string, buyerKind: string, onDay = "2026-12-01", kept: LawNotice[] = []) =>
  noticeFor(kept, { country, buyerKind, onDay });

describe("the body of law for a country", () => {
  // ISO 3166-1 alpha-2; members of the Union as of 2026.
  it.each([
    ["IE", "EU"],
    ["de", "EU"],
    ["NO", "EU"],
    ["GB", "UK"],
    ["US", "US"],
    ["AU", "AU"],
    ["CH", "other"],
    ["", "other"],
  ])("%s is %s", (country, region) => expect(regionOf(country)).toBe(region));
});

describe("a notice of rights by law", () => {
  it("is there for any country, buyer and day, and only one", () => {
    fc.assert(
      fc.property(
        fc.string({ minLength: 0, maxLength: 3 }),
        fc.constantFrom("business", "consumer", "unknown", "anything"),
        fc.nat(20_000).map((n) => addDays("2000-01-01", n)),
        (country, buyerKind, onDay) => {
          const n = at(country, buyerKind, onDay);
          expect(n.region).toBe(regionOf(country));
          expect(n.effectiveOn <= onDay).toBe(true);
        },
      ),
    );
  });

  it("tells a buyer we do not know what it tells a consumer", () => {
    for (const country of ["IE", "GB", "US", "AU", "JP"])
      expect(at(country, "unknown")).toEqual(at(country, "consumer"));
  });

  // Directive (EU) 2024/1799: states apply it from 31 July 2026.
  it("tells of the longer time after repair from the day the directive is applied", () => {
    expect(at("IE", "consumer", "2026-07-30").words).not.toContain("longer by twelve months");
    expect(at("IE", "consumer", "2026-07-31").words).toContain("longer by twelve months");
    expect(at("IE", "business", "2026-07-31").words).not.toContain("twelve months");
  });

  // Directive (EU) 2019/771 Art. 10(1), 11(1); Consumer Rights Act 2015 s. 22(3), 19(14)-(15).
  it.each([
    ["IE", ["within two years of delivery", "first year"]],
    ["GB", ["within 30 days", "within six months"]],
  ])("names the times of the statute in %s", (country, times) => {
    for (const time of times) expect(at(country, "consumer").words).toContain(time);
  });

  it("that was kept is shown from its own day, and before one built in of that day", () => {
    const mine = { ...at("IE", "consumer"), effectiveOn: "2026-07-31", title: "Ours" };
    const later = { ...mine, effectiveOn: "2027-01-01", title: "Later" };
    const kept = [later, mine];
    expect(at("IE", "consumer", "2026-07-30", kept).title).not.toBe("Ours");
    expect(at("IE", "consumer", "2026-07-31", kept).title).toBe("Ours");
    expect(at("IE", "consumer", "2026-12-31", kept).title).toBe("Ours");
    expect(at("IE", "consumer", "2027-01-01", kept).title).toBe("Later");
    expect(at("GB", "consumer", "2027-01-01", kept).title).not.toBe("Later");
  });

  it("built in stands beside our warranty, takes nothing away and names its source", () => {
    expect(new Set(BUILT_IN.map((n) => `${n.region} ${n.forConsumers}`)).size).toBe(LAW_REGIONS.length * 2);
    for (const n of BUILT_IN) {
      expect(forbiddenIn(`${n.title} ${n.words}`), n.title).toBeNull();
      expect(n.words).toMatch(/beside our warranty|Beside our warranty|beside it/);
      expect(n.source.length).toBeGreaterThan(3);
      expect(KeepLawNotice.safeParse({ ...n, effectiveOn: "2027-01-01" }).success).toBe(true);
    }
  });

  it.each([
    ["title", { title: "" }],
    ["words", { words: "Too short." }],
    ["words", { words: `${"a ".repeat(700)}` }],
    ["words", { words: "Beyond these terms you have no rights at all, whatever you may read elsewhere." }],
    ["title", { title: "All implied warranties are disclaimed" }],
    ["effectiveOn", { effectiveOn: "2026-02-30" }],
    ["source", { source: "" }],
  ])("is refused at %s: %o", (field, wrong) => {
    const read = KeepLawNotice.safeParse({ ...at("IE", "consumer"), effectiveOn: "2027-01-01", ...wrong });
    expect(read.error?.issues.map((i) => i.path[0])).toContain(field);
  });
});

describe("wording that takes rights away", () => {
  it.each([
    "You have no rights in this matter.",
    "You have no claim.",
    "This voids your warranty",
    "The warranty is void.",
    "You are not entitled to a refund.",
  ])("is stopped in a refusal: %s", (reason) => {
    const read = DeclineRma.safeParse({
      ticketId: "6f1d1c1e-8f0c-4e5a-9a39-0d4b1a3c7a11",
      ticketUnitId: "6f1d1c1e-8f0c-4e5a-9a39-0d4b1a3c7a11",
      reason,
    });
    expect(read.error?.issues[0]).toMatchObject({
      path: ["reason"],
      message: expect.stringContaining("under our warranty") as string,
    });
  });
  it.each([
    "Under our warranty we cannot take this one on.",
    "The contact was bent after delivery; our photo from before shows it straight.",
    "Your rights by law stand beside this.",
  ])("lets pass: %s", (reason) => expect(forbiddenIn(reason)).toBeNull());
});

describe("a consumer, or a buyer we do not know", () => {
  it("meets no fee, no hold and no freight on a fault, whatever the clauses say", () => {
    const clauses = [
      ...CLAUSES,
      { ...WRITES, number: "3.9", condition: "refurbished", freight: "customer_both" as const },
    ];
    fc.assert(
      fc.property(
        fc.constantFrom("consumer", "unknown"),
        fc.constantFrom("new", "refurbished"),
        fc.nat(1200),
        (buyerKind, condition, after) => {
          const input = claim({ clauses, sale: { condition, buyerKind: buyerKind as "consumer" } });
          const d = decide({ ...input, claimOn: addDays(input.sale.shippedOn, after) });
          expect(d.fees).toEqual([]);
          expect(d.handling.holdCents).toBeNull();
          expect(["seller_both", null]).toContain(d.handling.freight);
        },
      ),
    );
  });
});
