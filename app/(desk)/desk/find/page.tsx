import type { Metadata } from "next";
import { redirect } from "next/navigation";
import { requireStaff } from "@/app/_edge/ctx";
import { Empty } from "@/components/ui/empty";
import { Tag } from "@/components/ui/tag";
import { alikeWords } from "@/lib/base/alike";
import { characterWords } from "@/lib/base/serial";
import { find } from "@/lib/tickets/queries";

export const metadata: Metadata = { title: "Found" };

/** Differences as one sentence, told and heard alike. */
function sentence(words: string[]): string {
  const text = words.join("; ");
  return text === "" ? "" : `${text[0]!.toUpperCase()}${text.slice(1)}.`;
}

export default async function Find({
  searchParams,
}: {
  searchParams: Promise<Record<string, string | string[] | undefined>>;
}) {
  const ctx = await requireStaff();
  const query = await searchParams;
  const found = await find(ctx, typeof query.q === "string" ? query.q : "");
  if (found.exact) redirect(found.exact);
  const letters = [...found.text].slice(0, 30);
  return (
    <main className="desk found" id="main">
      {found.text === "" ? (
        <Empty title="Nothing was looked for.">
          Scan or type a serial, RMA, ticket, order or e-mail above.
        </Empty>
      ) : null}
      {found.hits.length > 0 ? (
        <>
          <h1>
            {found.hits.length} things answer to <span className="m">{found.text}</span>
          </h1>
          <ul className="foundlist">
            {found.hits.map((h) => (
              <li key={h.href}>
                {h.kind === "unit" ? <Tag serial={h.label} href={h.href} /> : <a href={h.href}>{h.label}</a>}
                <span className="q">{h.detail}</span>
              </li>
            ))}
          </ul>
        </>
      ) : found.text !== "" ? (
        <>
          <h1>Nothing answers to it.</h1>
          <p>This is what was looked for, character by character:</p>
          <p className="spelled m" aria-label={letters.map((c) => characterWords(c)).join(", ")}>
            {letters.map((c, i) => (
              <span key={i} title={characterWords(c)}>
                {c}
              </span>
            ))}
          </p>
          {found.alike.length > 0 ? (
            <>
              <h2>It looks like</h2>
              <ul className="foundlist">
                {found.alike.map((u) => (
                  <li key={u.unitId}>
                    <Tag serial={u.serial} href={`/ledger/${encodeURIComponent(u.serial)}`} />
                    <span className="q">
                      {u.modelName}
                      {u.accountName ? `, ${u.accountName}` : ""}
                    </span>
                    <span className="differs">{sentence(alikeWords(found.text, u.serial))}</span>
                  </li>
                ))}
              </ul>
            </>
          ) : (
            <p className="q">
              Blanks, dashes and capitals do not matter. O and zero do, and so do I and one.
            </p>
          )}
        </>
      ) : null}
    </main>
  );
}
