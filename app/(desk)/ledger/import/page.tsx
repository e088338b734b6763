import type { Metadata } from "next";
import { requireStaff } from "@/app/_edge/ctx";
import { Button } from "@/components/ui/button";
import { Empty } from "@/components/ui/empty";
import { showInstant } from "@/lib/base/show";
import { env } from "@/lib/env";
import { recentImports } from "@/lib/ledger/queries";
import { COLUMNS } from "@/lib/ledger/shipments";
import { fieldIds } from "@/components/ui/field";

export const metadata: Metadata = { title: "Import shipments" };

const ERRORS: Record<string, string> = {
  none: "Choose a file first.",
  large: "The file is over 64 MB. Split it by order and send the parts one after another.",
};
const STATE_WORDS = {
  previewed: "read, not added",
  applying: "being added",
  applied: "added",
  failed: "failed",
  cancelled: "stopped",
} as const;

export default async function ImportPage({
  searchParams,
}: {
  searchParams: Promise<Record<string, string | string[] | undefined>>;
}) {
  const ctx = await requireStaff("admin");
  const query = await searchParams;
  const error = typeof query.error === "string" ? (ERRORS[query.error] ?? query.error.slice(0, 400)) : null;
  const recent = await recentImports(ctx);
  const ids = fieldIds("file");
  return (
    <main className="desk narrow" id="main">
      <div className="deskhead">
        <div>
          <h1>Import shipments</h1>
          <p>
            One row for each unit: systems, and their parts with parent and slot. You see what is wrong before
            anything is added.
          </p>
        </div>
      </div>
      <form action="/ledger/import/upload" method="post" encType="multipart/form-data" className="actform">
        {error ? (
          <p className="err" role="alert" id={ids.error}>
            {error}
          </p>
        ) : null}
        <div className="field">
          <label htmlFor={ids.id}>Shipments as CSV</label>
          <p className="hint" id={ids.hint}>
            UTF-8 or UTF-16, comma, semicolon or tab; up to 64 MB and 250 000 rows.
          </p>
          <input
            id={ids.id}
            type="file"
            name="file"
            accept=".csv,text/csv,text/plain"
            className="in"
            aria-describedby={ids.hint}
            required
          />
        </div>
        <Button>Read it</Button>
      </form>
      <details className="cols">
        <summary>Columns</summary>
        <p className="m s">{COLUMNS.join(", ")}</p>
        <p className="q">
          Days as 2026-03-04. Kind: system or part. Condition: new or refurbished. Buyer kind: business,
          consumer or unknown. Country: two letters.
        </p>
      </details>
      <div className="sec">
        <h2>Before</h2>
      </div>
      {recent.length === 0 ? (
        <Empty title="Nothing was imported yet.">The first file fills the ledger.</Empty>
      ) : null}
      {recent.length > 0 ? (
        <ul className="plist">
          {recent.map((i) => (
            <li key={i.id}>
              <a href={`/ledger/import/${i.id}`}>{i.fileName}</a>, {i.rowsTotal} rows, {STATE_WORDS[i.state]},{" "}
              {showInstant(i.createdAt, env().MENDBAY_ZONE)}
            </li>
          ))}
        </ul>
      ) : null}
    </main>
  );
}
