import { execFileSync } from "node:child_process";
import { mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import sharp from "sharp";

/** Serials and people of one run: a second run on the same system finds its own. */
export function cast() {
  const code = (n: number) =>
    Array.from({ length: n }, () => "234679ACDEFHJKMNPRTWXY"[Math.floor(Math.random() * 22)]).join("");
  const run = code(4);
  return {
    run,
    order: `OS-9${run}`,
    mailer: {
      name: "Edda Marlow",
      email: `edda-${run.toLowerCase()}@fernquay.example`,
      account: `FERN${run}`,
      company: `Fernquay Labs ${run}`,
    },
    portal: {
      name: "Tamsin Ode",
      email: `tamsin-${run.toLowerCase()}@gullrow.example`,
      account: `GULL${run}`,
      company: `Gullrow Studios ${run}`,
    },
    one: {
      system: `OW2210-${run}A`,
      board: `EB-2210-${run}A`,
      memory: `OM-32R-${run}A`,
      drive: `VS-19F4-${run}A`,
    },
    two: {
      system: `OW2210-${run}B`,
      board: `EB-2210-${run}B`,
      memory: `OM-32R-${run}B`,
      drive: `VS-19F4-${run}B`,
    },
  };
}
export type Cast = ReturnType<typeof cast>;

const day = (back: number) => new Date(Date.now() - back * 86_400_000).toISOString().slice(0, 10);

/** Two systems with their parts, and a few rows that cannot be right. */
export function shipments(c: Cast): string {
  const head =
    "order,account code,account name,buyer kind,country,contact name,contact e-mail,serial,model,model name,kind,family,maker,condition,parent serial,slot,ship date,delivery date,terms,site note,lot,supplier";
  const rows: string[] = [];
  const system = (who: Cast["mailer"], s: Cast["one"], order: string) => {
    const base = [order, who.account, who.company, "business", "GB", who.name, who.email];
    const when = [day(200), day(197), "OW-STD"];
    const row = (
      serial: string,
      model: string,
      kind: string,
      family: string,
      parent: string,
      slot: string,
      lot = "",
      supplier = "",
    ) =>
      rows.push(
        [
          ...base,
          serial,
          model,
          model,
          kind,
          family,
          "",
          "new",
          parent,
          slot,
          ...when,
          kind === "system" ? "rack 7" : "",
          lot,
          supplier,
        ].join(","),
      );
    row(s.system, "OW-2210", "system", "system", "", "");
    row(s.board, "EB-2210", "part", "board", s.system, "Board");
    row(s.memory, "OM-32R", "part", "memory", s.board, "Memory A1", "OM-E1", "Ostrel Memory");
    row(s.drive, "VS-19", "part", "drive", s.system, "Drive bay 1", "VS-E1", "Vantry Storage");
  };
  system(c.mailer, c.one, `${c.order}1`);
  system(c.portal, c.two, `${c.order}2`);
  rows.push(
    `${c.order}3,${c.mailer.account},X,business,GB,,,=SUM(A1),OW-2210,OW-2210,system,system,,new,,,${day(9)},,OW-STD,,,`,
  );
  rows.push(
    `${c.order}4,${c.mailer.account},X,business,GB,,,OW2210-${c.run}Z,OW-2210,OW-2210,system,system,,new,,,31.12.2025,,OW-STD,,,`,
  );
  return [head, ...rows].join("\n");
}

/** A photo as a phone would send it: large, with the place it was taken in its data. */
export function photo(words: string): Promise<Buffer> {
  const svg = `<svg xmlns="http://www.w3.org/2000/svg" width="1200" height="800"><rect width="1200" height="800" fill="#22352c"/><text x="80" y="420" font-size="70" fill="#ede8dc">${words}</text></svg>`;
  return sharp(Buffer.from(svg))
    .jpeg({ quality: 90 })
    .withExif({ IFD3: { GPSLatitudeRef: "N", GPSLatitude: "51/1 30/1 0/1" } })
    .toBuffer();
}

/** Every barcode on every page of a PDF, read by zbar. */
export function barcodes(pdf: Buffer): string[] {
  const dir = mkdtempSync(join(tmpdir(), "story-"));
  try {
    writeFileSync(join(dir, "p.pdf"), pdf);
    execFileSync("pdftoppm", ["-r", "300", "-png", "p.pdf", "p"], { cwd: dir });
    return execFileSync("sh", ["-c", "zbarimg -q --raw *.png"], { cwd: dir, encoding: "utf8" })
      .trim()
      .split("\n");
  } finally {
    rmSync(dir, { recursive: true, force: true });
  }
}
