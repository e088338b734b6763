import type { Metadata } from "next";
import { notFound, redirect } from "next/navigation";
import { requireCustomer } from "@/app/_edge/ctx";
import { Tag } from "@/components/ui/tag";
import { Way } from "@/components/ui/way";
import { civilDayIn } from "@/lib/base/civil";
import { coverFor } from "@/lib/coverage/queries";
import { EVIDENCE_FOR, FAULT_CLASSES, FAULT_WORDS, type FaultClass } from "@/lib/coverage/schema";
import { evidenceOfReport, report } from "@/lib/evidence/queries";
import { env } from "@/lib/env";
import { equipment } from "@/lib/ledger/queries";
import { CheckPage, EvidencePage, FaultPage, PartPage, SafetyPage, UnitPage, WordsPage } from "./pages";

export const metadata: Metadata = { title: "Report a fault" };
const TOTAL = 7;
const UUID = /^[0-9a-f]{8}(-[0-9a-f]{4}){3}-[0-9a-f]{12}$/;

export default async function Question({
  params,
  searchParams,
}: {
  params: Promise<{ id: string; page: string }>;
  searchParams: Promise<Record<string, string | string[] | undefined>>;
}) {
  const ctx = await requireCustomer();
  const { id, page } = await params;
  const at = Number(page);
  const back = (await searchParams).back === "check" ? "check" : "";
  if (!UUID.test(id) || !Number.isInteger(at) || at < 1 || at > TOTAL) notFound();
  const found = await report(ctx, id);
  if (!found) notFound();
  if (found.ticketId) redirect("/cases");
  const a = found.answers;
  if (at > 1 && !a.unitId) redirect(`/report/${id}/1`);
  const view = a.unitId ? await coverFor(ctx, a.unitId, civilDayIn(ctx.now, env().MENDBAY_ZONE)) : null;
  const part = view?.tree.find((p) => p.unitId === a.partId);
  const common = { reportId: id, page: at, back, answers: a };
  const faultClass = (FAULT_CLASSES as readonly string[]).includes(a.faultClass ?? "")
    ? (a.faultClass as FaultClass)
    : null;
  return (
    <>
      <Way total={TOTAL} at={at} label="Report a fault" />
      {view ? (
        <p className="prow">
          <Tag serial={view.unit.serial} />
          {part ? <Tag serial={part.serial} part /> : null}
        </p>
      ) : null}
      {at === 1 ? (
        <UnitPage
          {...common}
          units={(await equipment(ctx, { limit: 12 })).rows.map((r) => ({
            unitId: r.unitId,
            serial: r.serial,
            name: `${r.modelName}${r.siteNote ? `, ${r.siteNote}` : ""}`,
          }))}
        />
      ) : null}
      {at === 2 ? (
        <PartPage
          {...common}
          parts={(view?.tree ?? []).map((p) => ({
            unitId: p.unitId,
            serial: p.serial,
            slot: p.slot,
            name: p.modelName,
            depth: p.depth,
          }))}
        />
      ) : null}
      {at === 3 ? (
        <FaultPage {...common} choices={FAULT_CLASSES.map((c) => ({ value: c, words: FAULT_WORDS[c] }))} />
      ) : null}
      {at === 4 ? <WordsPage {...common} /> : null}
      {at === 5 ? (
        <EvidencePage
          {...common}
          wanted={faultClass ? EVIDENCE_FOR[faultClass] : EVIDENCE_FOR.other}
          files={(await evidenceOfReport(ctx, id))
            .filter((e) => e.state !== "pending")
            .map((e) => ({ id: e.id, name: e.name, size: e.size, state: e.state, reason: e.reason }))}
        />
      ) : null}
      {at === 6 ? <SafetyPage {...common} /> : null}
      {at === 7 ? (
        <CheckPage
          {...common}
          facts={[
            { page: 1, label: "Unit", value: view ? `${view.unit.serial}, ${view.unit.modelName}` : "" },
            {
              page: 2,
              label: "Part",
              value: part ? `${part.slot}, ${part.serial}` : "the whole unit, or not known",
            },
            { page: 3, label: "Fault", value: faultClass ? FAULT_WORDS[faultClass] : "" },
            {
              page: 4,
              label: "In your words",
              value: `${a.words ?? ""}${a.since ? ` (since ${a.since})` : ""}`,
            },
            {
              page: 5,
              label: "Files",
              value: `${(await evidenceOfReport(ctx, id)).filter((e) => e.state !== "rejected" && e.state !== "pending").length}`,
            },
            {
              page: 6,
              label: "Battery, data",
              value: a.battery
                ? `${{ none: "no battery", inside: "battery inside, unharmed", damaged: "battery swollen, hot or damaged" }[a.battery] ?? ""}, ${a.data === "sanitize" ? "you sanitize the data" : "data cleared by me"}`
                : "",
            },
          ]}
        />
      ) : null}
    </>
  );
}
