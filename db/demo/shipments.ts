import { addDays } from "@/lib/base/civil";
import { CUSTOMERS, MODELS, SUPPLIER_OF, type Customer, type ModelCode } from "./scenario";
import type { Seed } from "./seed";

const HEAD =
  "order,account code,account name,buyer kind,country,contact name,contact e-mail,serial,model,model name,kind,family,maker,condition,parent serial,slot,ship date,delivery date,terms,site note,lot,supplier";

const SERIAL: Partial<Record<ModelCode, string>> = {
  "VS-19": "VS-19F4",
  "VS-38": "VS-38A0",
  "OM-32R": "OM-32R",
  "OM-64R": "OM-64R",
  "KP-800": "KP-08C1",
  "KP-1600": "KP-16C1",
  "CS-4216": "CS-4216",
  "CS-4224": "CS-4224",
  "ON-210": "ON-210",
};
/** The bad lot of the scenario: drives whose early failures a manager should find. */
export const BAD_LOT = "VS-L09";

export function partSerial(seed: Seed, code: ModelCode): string {
  return `${SERIAL[code] ?? code}-${seed.code(4)}${seed.chance(0.5) ? "" : seed.code(1)}`;
}

type Built = { slot: string; code: ModelCode; parent: "system" | "board" };

/** What a model is built of. */
export function buildOf(seed: Seed, model: ModelCode): Built[] {
  const parts: Built[] = [];
  const add = (slot: string, code: ModelCode, parent: Built["parent"] = "system") =>
    parts.push({ slot, code, parent });
  if (model === "OW-4420") {
    add("Board", "EB-4420");
    for (let i = 1; i <= 4; i++) add(`Socket ${i}`, "CS-4224", "board");
    for (const bank of ["A", "B"]) for (let i = 1; i <= 4; i++) add(`Memory ${bank}${i}`, "OM-64R", "board");
    for (let i = 1; i <= seed.int(4, 6); i++) add(`Drive bay ${i}`, "VS-38");
    add("Supply 1", "KP-1600");
    add("Supply 2", "KP-1600");
    add("Network 1", "ON-210");
  } else if (model === "OW-2210") {
    add("Board", "EB-2210");
    for (let i = 1; i <= 2; i++) add(`Socket ${i}`, "CS-4216", "board");
    for (let i = 1; i <= 4; i++) add(`Memory A${i}`, "OM-32R", "board");
    for (let i = 1; i <= seed.int(2, 4); i++) add(`Drive bay ${i}`, "VS-19");
    add("Supply 1", "KP-800");
    add("Supply 2", "KP-800");
  } else {
    add("Board", "EB-1108");
    add("Memory A1", "OM-32R", "board");
    add("Memory A2", "OM-32R", "board");
    add("Drive bay 1", "VS-19");
    add("Supply 1", "KP-800");
  }
  return parts;
}

type Row = Record<string, string>;
const quote = (v: string) => (/[",\n]/.test(v) ? `"${v.replace(/"/g, '""')}"` : v);
export const csvOf = (rows: Row[]): string =>
  [
    HEAD,
    ...rows.map((r) =>
      HEAD.split(",")
        .map((c) => quote(r[c] ?? ""))
        .join(","),
    ),
  ].join("\n");

export function systemRows(
  seed: Seed,
  s: {
    model: ModelCode;
    serial: string;
    customer: Customer;
    order: string;
    shippedOn: string;
    deliveredOn: string;
    condition: "new" | "refurbished";
    lotOf: (code: ModelCode) => string;
  },
): Row[] {
  const base: Row = {
    order: s.order,
    "account code": s.customer.code,
    "account name": s.customer.name,
    "buyer kind": s.customer.kind,
    country: s.customer.country,
    "contact name": s.customer.person,
    "contact e-mail": s.customer.email,
    condition: s.condition,
    "ship date": s.shippedOn,
    "delivery date": s.deliveredOn,
    terms: s.condition === "new" ? "OW-STD" : "OW-REF",
  };
  const unit = (code: ModelCode, serial: string): Row => {
    const m = MODELS[code];
    return {
      ...base,
      serial,
      model: m.code,
      "model name": m.name,
      kind: m.kind,
      family: m.family.replace("_", " "),
      maker: m.maker,
      supplier: SUPPLIER_OF[code] ?? "",
      lot: SUPPLIER_OF[code] ? s.lotOf(code) : "",
    };
  };
  const rows: Row[] = [{ ...unit(s.model, s.serial), "site note": seed.pick(s.customer.rooms) }];
  let board = "";
  for (const p of buildOf(seed, s.model)) {
    const serial = partSerial(seed, p.code);
    if (p.slot === "Board") board = serial;
    rows.push({
      ...unit(p.code, serial),
      "parent serial": p.parent === "board" ? board : s.serial,
      slot: p.slot,
    });
  }
  return rows;
}

/** Two years of shipments, one file a quarter. Same seed, same files. */
export function shipmentFiles(seed: Seed, today: string, systems: number): { name: string; csv: string }[] {
  const weights = CUSTOMERS.flatMap((c) => Array.from({ length: c.weight }, () => c));
  const start = addDays(today, -745);
  const files: { name: string; rows: Row[] }[] = Array.from({ length: 8 }, (_, i) => ({
    name: `shipments-${i + 1}.csv`,
    rows: [],
  }));
  let order = 20_100;
  const used = new Set<string>();
  for (let i = 0; i < systems; i++) {
    const day = Math.floor((i / systems) * 735) + seed.int(0, 6);
    const shippedOn = addDays(start, Math.min(743, day));
    const customer = seed.pick(weights);
    const roll = seed.next();
    const model: ModelCode =
      customer.kind === "consumer"
        ? "OW-1108"
        : roll < 0.24
          ? "OW-4420"
          : roll < 0.74
            ? "OW-2210"
            : "OW-1108";
    let serial = "";
    do serial = `${model.replace("-", "")}-${seed.code(5)}`;
    while (used.has(serial));
    // Two serials of the scenario that differ in one character, sold to two customers.
    if (model === "OW-4420" && customer.code === "BRAMBLE" && !used.has("OW4420-7K3QX"))
      serial = "OW4420-7K3QX";
    if (model === "OW-4420" && customer.code === "LOWMERE" && !used.has("OW4420-7K30X"))
      serial = "OW4420-7K30X";
    used.add(serial);
    const condition = seed.chance(0.16) ? "refurbished" : "new";
    const quarter = Math.min(7, Math.floor(day / 92));
    // The bad lot went into what was shipped about eight months ago.
    const lotOf = (code: ModelCode) =>
      code === "VS-19" && day > 490 && day < 540
        ? BAD_LOT
        : `${(SERIAL[code] ?? code).slice(0, 2)}-L${String(quarter + 1).padStart(2, "0")}${code.slice(-1)}`;
    files[quarter]!.rows.push(
      ...systemRows(seed, {
        model,
        serial,
        customer,
        order: `OS-${order++}`,
        shippedOn,
        deliveredOn: seed.chance(0.9) ? addDays(shippedOn, seed.int(1, 5)) : "",
        condition,
        lotOf,
      }),
    );
  }
  return files.filter((f) => f.rows.length > 0).map((f) => ({ name: f.name, csv: csvOf(f.rows) }));
}
