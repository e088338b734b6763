import { sql } from "drizzle-orm";
import { rawDb } from "@/db/client";
import { issueCode, keepPerson } from "@/lib/auth/commands";
import { must } from "@/lib/base/result";
import { publishTerms } from "@/lib/coverage/commands";
import { jobCtx, type Actor, type Ctx, type Role } from "@/lib/ctx";
import { handle as applyImport } from "@/lib/jobs/handlers/applyImport";
import { addStock, keepSite, previewImport, startImport } from "@/lib/ledger/commands";
import { bytesOf, csv, part, system, type Cells } from "./shipments";
import { BUSINESS_TERMS } from "./terms";

export const at = (text: string): Date => new Date(text);
/** A working Wednesday at the site, inside its hours. */
export const NOON = at("2026-06-03T11:00:00Z");

export const as = (actor: Actor, now = NOON): Ctx => ({
  actor,
  now,
  requestId: "test",
  newId: () => crypto.randomUUID(),
});
export const job = (now = NOON): Ctx => jobCtx("test", { now });

export const rows = async <T = Record<string, unknown>>(query: ReturnType<typeof sql>): Promise<T[]> =>
  (await rawDb().execute(query)).rows as T[];
export const count = async (table: string): Promise<number> =>
  (await rows<{ n: number }>(sql`select count(*)::int as n from ${sql.identifier(table)}`))[0]!.n;

export const DRIVE = {
  code: "VS-19",
  name: "Vantry 1.9 TB drive",
  kind: "part",
  family: "drive",
  maker: "Vantry Storage",
  facts: { interface: "two-lane", form: "2.5 inch", media: "flash", gb: 1920 },
  dataBearing: true,
} as const;
export const SERVER = {
  code: "OW-2210",
  name: "OW-2210 two-socket rack server",
  kind: "system",
  family: "system",
  maker: "Ostwick Server Works",
  facts: { chassis: "OW-2210" },
  weightKg: 21,
  dataBearing: true,
  battery: "coin",
} as const;

async function staff(name: string, role: Role): Promise<Actor> {
  const email = `${name.toLowerCase().replace(/ .*/, "")}@ostwick.example`;
  const { userId } = must(await keepPerson(job(), { email, name, roles: [role] }));
  return { kind: "staff", userId, name, email, roles: [role] };
}

/** A contact who has signed in once: the way a customer gets their user. */
export async function customer(email: string): Promise<Extract<Actor, { kind: "customer" }>> {
  must(await issueCode(job(), email, { unlimited: true }));
  const [row] = await rows<{ userId: string; contactId: string; accountId: string; name: string }>(
    sql`select user_id as "userId", id as "contactId", account_id as "accountId", name from contact where email = ${email}`,
  );
  return { kind: "customer", ...row!, email };
}

/** Sells what the rows say, through the import's own way. */
export async function sell(list: Cells[]): Promise<string> {
  const { importId } = must(
    await previewImport(job(), { fileName: "shipments.csv", bytes: bytesOf(csv(list)) }),
  );
  must(await startImport(job(), importId));
  await applyImport(job(), { importId });
  return importId;
}

export async function stock(serial: string, model: Parameters<typeof addStock>[1]["model"] = DRIVE) {
  return must(await addStock(job(), { serial, model, condition: "new", place: "S-12" }));
}

export async function unitId(serial: string): Promise<string> {
  const found = await rows<{ id: string }>(sql`select id from unit where serial = ${serial}`);
  if (!found[0]) throw new Error(`${serial} is not in the ledger of this test`);
  return found[0].id;
}

/** Site, terms, people, two customers with a system each, and like parts in stock. */
export async function seller() {
  must(
    await keepSite(job(), {
      code: "HARBOUR",
      name: "Warranty desk",
      zone: "Europe/London",
      addressLines: ["Dock 2", "9 Slipway Yard", "Example Harbour"],
      country: "GB",
      workdays: [1, 2, 3, 4, 5],
      opensAt: "08:30",
      closesAt: "17:00",
      holidays: [{ day: "2026-12-25", name: "Christmas Day" }],
    }),
  );
  const { versionId } = must(await publishTerms(job(), BUSINESS_TERMS));
  const pinnock = system("OW2210-PIN01");
  const lowmere = system("OW2210-LOW01", {
    order: "ORD-7002",
    "account code": "LOWMERE",
    "account name": "Lowmere Hosting",
    country: "DE",
    "contact name": "Dana Voss",
    "contact e-mail": "dana@lowmere.example",
  });
  await stock("VS19-STOCK1");
  await stock("VS19-STOCK2");
  await stock("OW2210-STK01", SERVER);
  await sell([
    pinnock,
    part("VS19-PIN0A", pinnock, "Drive bay 1"),
    part("VS19-PIN0B", pinnock, "Drive bay 2"),
    lowmere,
    part("VS19-LOW0A", lowmere, "Drive bay 1"),
  ]);
  return {
    versionId,
    agent: await staff("Noor Haddad", "agent"),
    second: await staff("Ruben Castellan", "agent"),
    dock: await staff("Piotr Lund", "warehouse"),
    bench: await staff("Mei Okafor", "warehouse"),
    manager: await staff("Anneke Sow", "manager"),
    admin: await staff("Tobias Renn", "admin"),
    sam: await customer("sam@pinnock.example"),
    dana: await customer("dana@lowmere.example"),
  };
}
export type Seller = Awaited<ReturnType<typeof seller>>;
