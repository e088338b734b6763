import { execFileSync } from "node:child_process";
import { mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { describe, expect, it } from "vitest";
import { renderTraveler } from "@/lib/rma/pdf.io";
import type { RmaLineView, RmaView } from "@/lib/rma/schema";

const line = (serial: string, more: Partial<RmaLineView> = {}): RmaLineView => ({
  id: serial,
  ticketUnitId: serial,
  unitId: serial,
  serial,
  modelCode: "OW-4420",
  modelName: "OW-4420 four-socket rack server",
  family: "system",
  slot: null,
  systemUnitId: null,
  systemSerial: null,
  remedy: "advance_replacement",
  faultWords: "Socket 3 is not seen",
  state: "open",
  decisionId: null,
  weightKg: 38,
  dataBearing: true,
  battery: "coin",
  ...more,
});
const rma = (lines: RmaLineView[]): RmaView => ({
  id: "1",
  number: "RMA-1207-K",
  ticketId: "1",
  ticketNumber: 3061,
  accountId: "1",
  accountName: "Łąka Datenpflege",
  personName: "Ifeoma Carrow",
  personEmail: "i@bramblegate.example",
  faultWords: "Socket 3 is not seen since the board swap",
  state: "authorized",
  remedy: "advance_replacement",
  authorizedAt: new Date(0),
  authorizedByName: "Noor Haddad",
  expiresOn: "2026-11-18",
  dueBackOn: "2026-11-18",
  battery: null,
  site: {
    name: "Warranty desk",
    addressLines: ["Dock 2", "9 Slipway Yard", "Example Harbour"],
    zone: "Europe/London",
  },
  version: 1,
  createdAt: new Date(0),
  settledAt: null,
  lines,
  fees: [],
});

/** Read by zbar, which shares no code with what drew them. */
function read(pdf: Buffer): { codes: string[]; pages: number; text: string } {
  const dir = mkdtempSync(join(tmpdir(), "traveler-"));
  try {
    writeFileSync(join(dir, "t.pdf"), pdf);
    execFileSync("pdftoppm", ["-r", "300", "-png", "t.pdf", "t"], { cwd: dir });
    const pngs = execFileSync("ls", { cwd: dir, encoding: "utf8" })
      .split("\n")
      .filter((f) => f.endsWith(".png"));
    const codes = pngs.flatMap((p) =>
      execFileSync("zbarimg", ["-q", "--raw", p], { cwd: dir, encoding: "utf8" }).trim().split("\n"),
    );
    return {
      codes,
      pages: pngs.length,
      text: execFileSync("pdftotext", ["-layout", "t.pdf", "-"], { cwd: dir, encoding: "utf8" }),
    };
  } finally {
    rmSync(dir, { recursive: true, force: true });
  }
}

describe("the traveler", () => {
  it("fits one sheet, and each of its barcodes reads as the serial or RMA printed beside it", async () => {
    const { codes, pages, text } = read(
      await renderTraveler(
        rma([
          line("OW4420-7K3QX"),
          line("VS-19F4-00K7", { family: "drive", slot: "Bay 5", modelName: "Drive 1.9 TB" }),
        ]),
        "Ostwick Server Works",
        new Date(0),
      ),
    );
    expect(pages).toBe(1);
    expect(new Set(codes)).toEqual(new Set(["OW4420-7K3QX", "RMA-1207-K", "VS-19F4-00K7"]));
    for (const printed of [
      "OW4420-7K3QX",
      "RMA-1207-K",
      "Łąka Datenpflege",
      "Lithium battery inside",
      "Two-person lift, 38 kg",
      "18 November 2026",
    ])
      expect(text).toContain(printed);
  });
  it("reads a long foreign serial too", async () => {
    const { codes, pages } = read(
      await renderTraveler(
        rma([
          line("KP-22C1-3H8N-A0099127", {
            family: "power_supply",
            weightKg: 1,
            battery: "none",
            dataBearing: false,
          }),
        ]),
        "Ostwick Server Works",
        new Date(0),
      ),
    );
    expect(pages).toBe(1);
    expect(codes).toContain("KP-22C1-3H8N-A0099127");
  });
});
