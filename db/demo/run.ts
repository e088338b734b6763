import { sql } from "drizzle-orm";
import { closePool, rawDb } from "@/db/client";
import { issueCode, keepPerson } from "@/lib/auth/commands";
import { addDays, civilDayIn } from "@/lib/base/civil";
import { must } from "@/lib/base/result";
import { publishTerms } from "@/lib/coverage/commands";
import { noteGivenOn } from "@/lib/coverage/holding.commands";
import type { Actor, Ctx } from "@/lib/ctx";
import { handle as applyImport } from "@/lib/jobs/handlers/applyImport";
import { addStock, keepSite, moveUnit, previewImport, startImport } from "@/lib/ledger/commands";
import { replyAddress } from "@/lib/mail/token.io";
import { authorizeRma } from "@/lib/rma/commands";
import {
  answer,
  ask,
  authorize,
  byMail,
  byPortal,
  goesBack,
  goesOut,
  goodwill,
  received,
  sent,
  Story,
  tested,
  tieAndDecide,
  type Part,
} from "./flows";
import { picture } from "./pictures";
import { CUSTOMERS, FAULTS, MODELS, STAFF, SUPPLIER_OF, TERMS, type ModelCode } from "./scenario";
import { Seed } from "./seed";
import { BAD_LOT, partSerial, shipmentFiles } from "./shipments";

/**
 * The demo: two years of the invented seller, made by the modules' own commands. One seed, so the
 * same day gives the same seller; days are counted back from today, so that it does not age.
 */
const SYSTEMS = 530;
const ZONE = "Europe/London";
const say = (words: string) => process.send?.(words);

const seed = new Seed(20_260_131);
const now = new Date();
const today = civilDayIn(now, ZONE);
const job = (at = now): Ctx => ({
  actor: { kind: "job", name: "demo" },
  now: at,
  requestId: "demo",
  newId: () => seed.uuid(),
});
const dayAt = (day: string, hour = seed.int(8, 15)): Date =>
  new Date(`${day}T${String(hour).padStart(2, "0")}:${String(seed.int(0, 59)).padStart(2, "0")}:00Z`);

const begun = await rawDb().execute<{ n: number }>(sql`select count(*)::int as n from site`);
if (begun.rows[0]!.n > 0) {
  await closePool();
  process.exit(0);
}

// ---- the house: site, people, terms
const start = dayAt(addDays(today, -760), 9);
const year = Number(today.slice(0, 4));
must(
  await keepSite(job(start), {
    code: "HARBOUR",
    name: "Warranty desk",
    zone: ZONE,
    addressLines: ["Dock 2", "9 Slipway Yard", "Example Harbour"],
    country: "GB",
    workdays: [1, 2, 3, 4, 5],
    opensAt: "08:30",
    closesAt: "17:00",
    holidays: [year - 2, year - 1, year, year + 1].flatMap((y) => [
      { day: `${y}-01-01`, name: "New Year's Day" },
      { day: `${y}-12-25`, name: "Christmas Day" },
      { day: `${y}-12-26`, name: "Boxing Day" },
    ]),
  }),
);
for (const p of STAFF) must(await keepPerson(job(start), { ...p, roles: [...p.roles] }));
for (const { yearsBefore, ...t } of TERMS)
  must(
    await publishTerms(job(dayAt(addDays(today, -365 * yearsBefore - 20))), {
      ...t,
      effectiveOn: addDays(today, -365 * yearsBefore),
    }),
  );

// ---- stock in bays: every model is known before it is sold
for (const code of Object.keys(MODELS) as ModelCode[]) {
  const system = MODELS[code].kind === "system";
  for (let i = 0; i < (system ? 2 : 5); i++) {
    must(
      await addStock(job(start), {
        serial: system ? `${code.replace("-", "")}-${seed.code(5)}` : partSerial(seed, code),
        model: MODELS[code],
        condition: i === 0 && !system ? "refurbished" : "new",
        place: `S-${seed.int(10, 60)}`,
        lot: SUPPLIER_OF[code] ? `${code.slice(0, 2)}-S0` : null,
        supplier: SUPPLIER_OF[code]?.toUpperCase() ?? null,
      }),
    );
  }
}

// ---- what was sold: the importer's own way, a file a quarter
let done = 0;
const files = shipmentFiles(seed, today, SYSTEMS);
async function bring(name: string, csv: string, at: Date): Promise<void> {
  const { importId } = must(
    await previewImport(job(at), { fileName: name, bytes: new TextEncoder().encode(csv) }),
  );
  must(await startImport(job(at), importId));
  await applyImport(job(at), { importId });
}
for (const f of files) {
  await bring(f.name, f.csv, start);
  say(`Shipments ${++done} of ${files.length}`);
}
await rawDb().execute(sql`analyze`);

// ---- people of the customers
const customers = new Map<string, Extract<Actor, { kind: "customer" }>>();
for (const c of CUSTOMERS) {
  must(await issueCode(job(), c.email, { unlimited: true }));
  const found = await rawDb().execute<{ userId: string; contactId: string; accountId: string }>(
    sql`select user_id as "userId", id as "contactId", account_id as "accountId" from contact where email = ${c.email}`,
  );
  const row = found.rows[0];
  if (row) customers.set(c.email, { kind: "customer", ...row, name: c.person, email: c.email });
}
await rawDb().execute(sql`delete from verification_token`);
const staffRows = await rawDb().execute<{ id: string; email: string }>(sql`select id, email from "user"`);
const staff = (email: string): Actor => {
  const p = STAFF.find((x) => x.email === email)!;
  return {
    kind: "staff",
    userId: staffRows.rows.find((r) => r.email === email)!.id,
    name: p.name,
    email,
    roles: [...p.roles],
  };
};
const people = {
  noor: staff("noor@ostwick.example"),
  ruben: staff("ruben@ostwick.example"),
  piotr: staff("piotr@ostwick.example"),
  mei: staff("mei@ostwick.example"),
  anneke: staff("anneke@ostwick.example"),
};

// ---- parts that may fail
const partRows = await rawDb().execute<Part>(sql`
  select u.id as "unitId", u.serial, m.family::text as family, m.code as "modelCode", i.slot, su.id as "systemUnitId", su.serial as "systemSerial", l.code as lot,
    s.shipped_on::text as "shippedOn", a.code as customer, c.email, s.condition::text as condition
  from installation i join unit u on u.id = i.unit_id join model m on m.id = u.model_id left join lot l on l.id = u.lot_id
  join sale_line s on s.id = i.sale_line_id join unit su on su.id = s.unit_id join account a on a.id = s.account_id join contact c on c.account_id = a.id
  where i.to_on is null and s.ended_on is null order by s.shipped_on, u.serial`);
const systemRowsFound = await rawDb().execute<Part>(sql`
  select u.id as "unitId", u.serial, 'system' as family, m.code as "modelCode", '' as slot, u.id as "systemUnitId", u.serial as "systemSerial", null as lot,
    s.shipped_on::text as "shippedOn", a.code as customer, c.email, s.condition::text as condition
  from sale_line s join unit u on u.id = s.unit_id join model m on m.id = u.model_id join account a on a.id = s.account_id join contact c on c.account_id = a.id
  where s.ended_on is null order by s.shipped_on, u.serial`);
const taken = new Set<string>();
const WEIGHT: Record<string, number> = {
  drive: 40,
  memory: 14,
  power_supply: 18,
  board: 14,
  processor: 3,
  network: 6,
};

/** A part of a system not yet in the story, of a family, shipped between two ages in days. */
function choose(want: {
  family?: string;
  fromDays: number;
  toDays: number;
  lot?: string;
  customer?: string;
  condition?: string;
}): Part | null {
  const [oldest, youngest] = [addDays(today, -want.fromDays), addDays(today, -want.toDays)];
  const pool = (want.family === "system" ? systemRowsFound.rows : partRows.rows).filter(
    (p) =>
      p.shippedOn >= oldest &&
      p.shippedOn <= youngest &&
      !taken.has(p.systemUnitId) &&
      (!want.family || p.family === want.family) &&
      (!want.lot || p.lot === want.lot) &&
      (!want.customer || p.customer === want.customer) &&
      (!want.condition || p.condition === want.condition) &&
      p.systemSerial !== "OW4420-7K3QX",
  );
  const p = pool.length === 0 ? null : seed.pick(pool);
  if (p) taken.add(p.systemUnitId);
  return p;
}
const familyByWeight = (): string => {
  let roll = seed.next() * Object.values(WEIGHT).reduce((a, b) => a + b, 0);
  for (const [f, w] of Object.entries(WEIGHT)) if ((roll -= w) <= 0) return f;
  return "drive";
};
const story = (at: Date) => new Story(seed, at, people, customers, now);
const fault = (family: string) => seed.pick(FAULTS[family] ?? FAULTS.board!);

// ---- closed returns, oldest first
type Plan = { on: string; part: Part; kind: "confirmed" | "no_fault" | "damage" | "twice" | "credit" };
const plans: Plan[] = [];
const plan = (kind: Plan["kind"], part: Part | null, least = 3) => {
  if (!part) return;
  const age = (new Date(today).getTime() - new Date(part.shippedOn).getTime()) / 86_400_000;
  const longest = Math.min(age - 12, part.condition === "refurbished" ? 170 : 690);
  if (longest <= least) return;
  plans.push({
    kind,
    part,
    on: addDays(
      part.shippedOn,
      Math.max(least, Math.min(Math.floor(longest), Math.floor(seed.exponential(longest * 0.6)))),
    ),
  });
};
for (let i = 0; i < 13; i++) {
  const p = choose({ family: "drive", fromDays: 400, toDays: 60, lot: BAD_LOT });
  if (p) plans.push({ kind: "confirmed", part: p, on: addDays(p.shippedOn, seed.int(15, 130)) });
}
for (let i = 0; i < 62; i++)
  plan("confirmed", choose({ family: familyByWeight(), fromDays: 740, toDays: 40 }));
for (let i = 0; i < 4; i++) plan("confirmed", choose({ family: "system", fromDays: 700, toDays: 60 }));
for (let i = 0; i < 9; i++)
  plan(
    "no_fault",
    choose({ family: seed.pick(["memory", "power_supply", "network", "drive"]), fromDays: 700, toDays: 60 }),
  );
for (let i = 0; i < 3; i++)
  plan("damage", choose({ family: seed.pick(["board", "processor"]), fromDays: 700, toDays: 90 }));
plan("twice", choose({ family: "memory", fromDays: 700, toDays: 300 }));
plan("twice", choose({ family: "drive", fromDays: 700, toDays: 300 }));
plans.sort((a, b) => a.on.localeCompare(b.on));

async function whole(s: Story, part: Part, kind: Plan["kind"]): Promise<void> {
  const [faultClass, words, finding] = fault(part.family);
  let ids: { ticketId: string; ticketUnitId: string };
  if (seed.chance(0.6)) {
    ids = await byPortal(s, part, faultClass, words, seed.chance(0.35) ? 2 : 0);
  } else {
    const c = CUSTOMERS.find((x) => x.email === part.email)!;
    const ticketId = await byMail(
      s,
      { name: c.person, email: c.email },
      words,
      `Good morning,\n\n${words}. It is ${part.serial} in ${part.systemSerial}.\n\n${c.person}`,
      null,
    );
    if (!ticketId) return;
    s.later(seed.int(1, 6));
    ids = { ticketId, ticketUnitId: await tieAndDecide(s, ticketId, part, faultClass) };
    s.later(0.3);
    await answer(
      s,
      ticketId,
      `Thank you, that is clear. ${part.serial} is covered; you get an RMA with the next mail. Power off and unplug every lead before you pull it.`,
    );
  }
  s.later(seed.int(1, 20));
  const rmaId = await authorize(s, ids.ticketId, ids.ticketUnitId, kind === "credit" ? "refund" : undefined);
  if (!rmaId) return;
  s.later(seed.int(20, 90));
  await sent(s, rmaId, part.email);
  s.later(seed.int(24, 80));
  await received(s, rmaId);
  s.later(seed.int(4, 60));
  if (kind === "confirmed" || kind === "credit") {
    await tested(s, rmaId, {
      outcome: "fault_confirmed",
      disposition: kind === "credit" ? "repair" : seed.pick(["repair", "return_to_supplier", "scrap"]),
      finding,
      part,
    });
    s.later(seed.int(1, 12));
    await goesOut(s, rmaId, part);
  } else {
    await tested(s, rmaId, {
      outcome: kind === "damage" ? "damage_not_covered" : "no_fault_found",
      disposition: "send_back",
      part,
      finding:
        kind === "damage"
          ? "three contacts bent, pressed from above; our photo from before shipping shows them straight"
          : "all steps pass twice; the fault did not come",
    });
    s.later(seed.int(1, 12));
    await goesBack(s, rmaId);
  }
}

done = 0;
for (const p of plans) {
  await whole(story(dayAt(p.on)), p.part, p.kind);
  if (p.kind === "twice") await whole(story(dayAt(addDays(p.on, 40))), p.part, "no_fault");
  if (++done % 10 === 0) say(`Returns ${done} of ${plans.length}`);
}

// ---- a unit returned, refunded, and sold again as refurbished under its serial
const back = choose({ family: "system", fromDays: 420, toDays: 300, customer: "PINNOCK", condition: "new" });
if (back) {
  const s = story(dayAt(addDays(back.shippedOn, 9)));
  const ids = await byPortal(s, back, "no_power", "Dead out of the box, no lamps at all", 1);
  s.later(5);
  const { rmaId } = must(
    await authorizeRma(s.agent, {
      ticketId: ids.ticketId,
      lines: [{ ticketUnitId: ids.ticketUnitId }],
      remedy: "refund",
    }),
  );
  s.later(30);
  await sent(s, rmaId, back.email);
  s.later(40);
  await received(s, rmaId);
  s.later(10);
  await tested(s, rmaId, {
    outcome: "fault_confirmed",
    disposition: "repair",
    finding: "no standby rail; the board was dead",
    part: back,
  });
  s.later(8);
  await goesOut(s, rmaId, back);
  s.later(200);
  must(await moveUnit(s.dock, { unitId: back.unitId, whereabouts: "stock", place: "R-12" }));
  const lowmere = CUSTOMERS.find((c) => c.code === "LOWMERE")!;
  const m = MODELS[back.modelCode];
  const shippedOn = addDays(back.shippedOn, 90);
  const head =
    "order,account code,account name,buyer kind,country,contact name,contact e-mail,serial,model,kind,family,condition,ship date,delivery date,terms,site note";
  const row = [
    "OS-29001",
    lowmere.code,
    lowmere.name,
    lowmere.kind,
    lowmere.country,
    lowmere.person,
    lowmere.email,
    back.serial,
    m.code,
    m.kind,
    m.family,
    "refurbished",
    shippedOn,
    addDays(shippedOn, 2),
    "OW-REF",
    "hall 2",
  ];
  await bring("resale-1.csv", `${head}\n${row.join(",")}`, dayAt(shippedOn));
}

// ---- the unit of the scenario: Bramblegate's server with its socket, its drive log and its RMA under way
say("Open tickets");
const mine = partRows.rows.filter((p) => p.systemSerial === "OW4420-7K3QX");
const board = mine.find((p) => p.family === "board");
if (board) {
  const s = story(new Date(now.getTime() - 6 * 86_400_000));
  s.later(0);
  const ticketId = await byMail(
    s,
    { name: "Ifeoma Carrow", email: "ifeoma@bramblegate.example" },
    "Socket 3 is not seen since the board swap",
    "Good morning,\n\nSince your engineer changed the board the machine OW4420-7K3QX does not see socket 3, and the drive in bay 4 drops out under load. We have a teaching run next week and need all four sockets by then.\n\nIfeoma Carrow\nBramblegate University\n\n> On Tuesday the warranty desk wrote:\n> The board was changed today.\n> Please watch it for a day.",
    await picture(seed, "socket"),
  );
  if (ticketId) {
    s.later(1);
    await answer(
      s,
      ticketId,
      "Thank you, that is clear. Please keep the socket cover on, and power off and unplug before you open it; the heat sink stays hot for ten minutes. M1 names the drive in bay 4 too; we look at the board first.",
    );
    s.later(4);
    const ticketUnitId = await tieAndDecide(s, ticketId, board, "not_detected");
    s.later(0.4);
    const rmaId = await authorize(s, ticketId, ticketUnitId, "advance_replacement");
    if (rmaId) {
      s.later(22);
      await sent(s, rmaId, "ifeoma@bramblegate.example");
    }
  }
}

// ---- what is open now, in every state
const recent = (hours: number) => story(new Date(now.getTime() - hours * 3_600_000));
const open = (want: Parameters<typeof choose>[0] = { fromDays: 600, toDays: 30 }) =>
  choose({ family: familyByWeight(), ...want }) ?? choose({ fromDays: 740, toDays: 10 });
async function mailed(hours: number, opts: { stranger?: boolean; noSerial?: boolean; photo?: boolean } = {}) {
  const part = open();
  if (!part) return null;
  const [faultClass, words] = fault(part.family);
  const c = CUSTOMERS.find((x) => x.email === part.email)!;
  const s = recent(hours);
  const from = opts.stranger
    ? { name: "Lior Banwell", email: `lior${seed.int(1, 99)}@quarrystone.example` }
    : { name: c.person, email: c.email };
  const ticketId = await byMail(
    s,
    from,
    words,
    `Hello,\n\n${words}.${opts.noSerial ? " Where do I find the serial?" : ` The part is ${part.serial}, in ${part.systemSerial}.`}\n\n${from.name}`,
    opts.photo ? await picture(seed, "drive") : null,
  );
  return ticketId ? { s, part, ticketId, faultClass } : null;
}
// Waiting on us: unread mail, with and without a serial.
for (const [hours, opts] of [
  [1, { photo: true }],
  [3, {}],
  [20, { photo: true }],
  [29, {}],
  [5, { stranger: true }],
  [26, { noSerial: true }],
] as const)
  await mailed(hours, opts);
// Portal reports that a person must look at: contacts, damage.
for (const hours of [2, 7, 24]) {
  const part = choose({ family: "board", fromDays: 700, toDays: 60 });
  if (part)
    await byPortal(recent(hours), part, "bent_contacts", "A contact in socket 2 looks pressed down", 2);
}
// Asked for evidence, waiting on the customer.
for (const hours of [30, 50, 77, 120, 150]) {
  const m = await mailed(hours);
  if (!m) continue;
  m.s.later(2);
  await tieAndDecide(m.s, m.ticketId, m.part, m.faultClass);
  m.s.later(0.3);
  await ask(m.s, m.ticketId, ["event log", "photo of the label"], "To be sure which part it is:");
}
// Portal: covered, remedy not chosen yet.
for (const hours of [4, 9, 30, 52]) {
  const part = open();
  if (part) await byPortal(recent(hours), part, ...(fault(part.family).slice(0, 2) as [string, string]), 1);
}
// Cover ended: told, waiting on the customer.
for (const hours of [28, 75]) {
  const part = choose({ family: "drive", fromDays: 745, toDays: 400, condition: "refurbished" });
  if (part) await byPortal(recent(hours), part, "failed_drive", "Drive no longer seen", 0);
}
// Cover ended, and somebody thinks that an exception is right: granted, declined, and one that waits.
for (const [days, wish, given] of [
  [
    38,
    {
      reason: "They chose us for forty machines this spring, and this is their first fault.",
      remedy: "repair",
    },
    { words: "For the first fault of a new customer, once.", limit: "180" },
  ],
  [
    24,
    { reason: "The customer says that it failed in its first week and nobody wrote.", remedy: "credit" },
    { words: "Its log shows months of work after that week. Offer a paid repair." },
  ],
  [
    9,
    {
      reason: "It is of the lot that fails early; our own figures show it.",
      remedy: "replacement_on_receipt",
    },
    { words: "The lot is ours to answer for.", limit: "240" },
  ],
  [
    1,
    { reason: "Second drive of the same bay within a year; C1 counts the days only.", remedy: "repair" },
    null,
  ],
] as const) {
  const part = choose({ family: "drive", fromDays: 745, toDays: 300, condition: "refurbished" });
  if (!part) continue;
  const s = recent(days * 24);
  const ids = await byPortal(s, part, "failed_drive", "Drive drops out of the array", 0);
  s.later(3);
  await goodwill(s, ids, wish, given);
}
/** Authorized, and then as far as `steps` goes: 1 sent, 2 received, 3 bench begun, 4 tested. */
async function underWay(hours: number, steps: number, family?: string): Promise<void> {
  const part = open(family ? { family, fromDays: 600, toDays: 40 } : undefined);
  if (!part) return;
  const [faultClass, words, finding] = fault(part.family);
  const s = recent(hours);
  const ids = await byPortal(s, part, faultClass, words, seed.chance(0.5) ? 2 : 0);
  s.later(3);
  const rmaId = await authorize(s, ids.ticketId, ids.ticketUnitId);
  if (!rmaId || steps === 0) return;
  s.later(hours / 8);
  await sent(s, rmaId, part.email);
  if (steps === 1) return;
  s.later(hours / 4);
  await received(s, rmaId);
  if (steps === 2) return;
  s.later(hours / 8);
  await tested(s, rmaId, { outcome: "fault_confirmed", disposition: "return_to_supplier", finding, part });
}
for (const hours of [6, 20, 45, 70, 100]) await underWay(hours, 0);
for (const hours of [60, 80, 100, 150, 260]) await underWay(hours, 1);
for (const hours of [90, 120, 140, 190])
  await underWay(hours, 2, seed.pick(["drive", "memory", "power_supply"]));
for (const hours of [150, 200]) await underWay(hours, 4, "drive");
// A mail that may not be joined without a person's look.
// Its address was signed for somebody else: a forwarded mail, perhaps, or somebody who wants the parcel.
for (const n of [1, 2]) {
  const some = await rawDb().execute<{ number: number; email: string }>(
    sql`select number, person_email as email from ticket where closed_at is null and account_id is not null order by number limit 1 offset ${n * 3}`,
  );
  const about = some.rows[0];
  if (!about) continue;
  await byMail(
    recent(n * 4),
    { name: "Pat Orrin", email: "pat@pinnock-billing.example" },
    n === 1 ? "Re: your server order" : "New address for the replacement",
    n === 1
      ? "Please tell me when the part was shipped, I keep the books for them now.\n\nPat Orrin"
      : "Please send the replacement to our new address in the port instead.\n\nPat Orrin",
    null,
    replyAddress(about.number, about.email),
  );
}

// ---- one that was given on without a word to us: its claim waits for the written notice
const given = choose({ family: "system", fromDays: 420, toDays: 120, customer: "PINNOCK" });
if (given) {
  const s = recent(30);
  must(
    await noteGivenOn(s.agent, {
      unitId: given.unitId,
      accountCode: "LOWMERE",
      onDay: addDays(today, -12),
    }),
  );
  const [faultClass, words] = fault("system");
  await byPortal(s, { ...given, customer: "LOWMERE", email: "dana@lowmere.example" }, faultClass, words, 0);
}

// ---- mails of the past were sent in the past
await rawDb().execute(
  sql`select graphile_worker.remove_job('mail:' || id::text) from outbox where created_at < ${addDays(today, -2)}::date`,
);
await rawDb().execute(
  sql`update outbox set state = 'sent', sent_at = created_at, attempts = 1 where created_at < ${addDays(today, -2)}::date`,
);
await rawDb().execute(sql`analyze`);
const counted = await rawDb().execute<{ tickets: number; parts: number; systems: number }>(sql`
  select (select count(*)::int from ticket) as tickets, (select count(*)::int from installation) as parts, (select count(*)::int from sale_line) as systems`);
say(
  `${counted.rows[0]!.systems} systems, ${counted.rows[0]!.parts} parts, ${counted.rows[0]!.tickets} tickets`,
);
console.log(JSON.stringify(counted.rows[0]));
await closePool();
process.exit(0);
