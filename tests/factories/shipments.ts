import { COLUMNS } from "@/lib/ledger/shipments";

export type Cells = Partial<Record<(typeof COLUMNS)[number], string>>;

/** One sold system. Every cell can be made wrong by its name. */
export const system = (serial: string, more: Cells = {}): Cells => ({
  order: "ORD-7001",
  "account code": "PINNOCK",
  "account name": "Pinnock Analytics",
  "buyer kind": "business",
  country: "IE",
  "contact name": "Sam Pell",
  "contact e-mail": "sam@pinnock.example",
  serial,
  model: "OW-2210",
  "model name": "OW-2210 two-socket rack server",
  kind: "system",
  family: "system",
  maker: "Ostwick Server Works",
  condition: "new",
  "ship date": "2026-01-05",
  "delivery date": "2026-01-07",
  terms: "OSW-B",
  ...more,
});

/** A part of the system before it, in a slot. */
export const part = (serial: string, of: Cells, slot: string, more: Cells = {}): Cells => ({
  ...of,
  serial,
  model: "VS-19",
  "model name": "Vantry 1.9 TB drive",
  kind: "part",
  family: "drive",
  maker: "Vantry Storage",
  "parent serial": of.serial,
  slot,
  lot: "VS-L01",
  supplier: "Vantry Storage",
  ...more,
});

const cell = (text: string) => (/[",\n;]/.test(text) ? `"${text.replace(/"/g, '""')}"` : text);

export const csv = (rows: Cells[], columns: readonly (typeof COLUMNS)[number][] = COLUMNS): string =>
  [columns.join(","), ...rows.map((r) => columns.map((c) => cell(r[c] ?? "")).join(","))].join("\n");

export const bytesOf = (text: string): Uint8Array => new TextEncoder().encode(text);
