import Link from "next/link";
import type { Metadata } from "next";
import { notFound } from "next/navigation";
import { requireStaff } from "@/app/_edge/ctx";
import { importBatch } from "@/lib/ledger/queries";
import { ImportState } from "./state";

export const metadata: Metadata = { title: "Import" };
const UUID = /^[0-9a-f]{8}(-[0-9a-f]{4}){3}-[0-9a-f]{12}$/;

export default async function OneImport({
  params,
  searchParams,
}: {
  params: Promise<{ id: string }>;
  searchParams: Promise<{ again?: string }>;
}) {
  const ctx = await requireStaff("admin");
  const { id } = await params;
  const batch = UUID.test(id) ? await importBatch(ctx, id) : null;
  if (!batch) notFound();
  const again = (await searchParams).again === "1";
  return (
    <main className="desk narrow" id="main">
      <div className="deskhead">
        <div>
          <h1>{batch.fileName}</h1>
          <p>
            {batch.rowsGood} of {batch.rowsTotal} rows can be added.
            {again ? " This very file was added before: adding it again changes nothing." : ""}
          </p>
        </div>
      </div>
      <ImportState first={batch} />
      {batch.problems.length > 0 ? (
        <section aria-labelledby="problems-h">
          <div className="sec">
            <h2 id="problems-h">
              {batch.problemsTotal} {batch.problemsTotal === 1 ? "thing" : "things"} to look at
            </h2>
            <span className="q">these rows are left out, the good ones are added</span>
          </div>
          <div className="tablewrap" role="region" aria-label="Rows with problems" tabIndex={0}>
            <table className="tbl">
              <thead>
                <tr>
                  <th scope="col" className="num">
                    Line
                  </th>
                  <th scope="col">Column</th>
                  <th scope="col">What is wrong, and what to do</th>
                </tr>
              </thead>
              <tbody>
                {batch.problems.map((p, i) => (
                  <tr key={i}>
                    <td className="num">{p.row}</td>
                    <td>{p.column ?? ""}</td>
                    <td>{p.message}</td>
                  </tr>
                ))}
              </tbody>
            </table>
          </div>
          {batch.problemsTotal > batch.problems.length ? (
            <p className="q">The first {batch.problems.length} are shown.</p>
          ) : null}
        </section>
      ) : null}
      <p className="pact">
        <Link href="/ledger/import">Import another file</Link> <Link href="/ledger">Open the ledger</Link>
      </p>
    </main>
  );
}
