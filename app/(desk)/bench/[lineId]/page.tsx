import type { Metadata } from "next";
import { notFound } from "next/navigation";
import { requireStaff } from "@/app/_edge/ctx";
import { DueClock } from "@/components/tickets/due";
import { CautionStrip, type CautionItem } from "@/components/ui/caution-strip";
import { Tag } from "@/components/ui/tag";
import { showDay, showInstant } from "@/lib/base/show";
import { benchLine, photosOf } from "@/lib/dock/queries";
import { DISPOSITIONS_FOR } from "@/lib/dock/rules";
import { TEST_OUTCOME_WORDS } from "@/lib/dock/schema";
import { limitWords, sheetFor } from "@/lib/dock/sheets";
import { fit } from "@/lib/dock/fit";
import { defaultSite, stockOf } from "@/lib/ledger/queries";
import { clockView } from "@/lib/tickets/show";
import { ticketByNumber } from "@/lib/tickets/queries";
import { may } from "@/lib/auth/rules";
import { CloseForm, ScanInForm } from "./close-form";
import { GoesOut } from "./goes-out";
import { Steps } from "./steps";

export const metadata: Metadata = { title: "Bench test" };
const UUID = /^[0-9a-f]{8}(-[0-9a-f]{4}){3}-[0-9a-f]{12}$/;

function cautions(family: string, weightKg: number | null): CautionItem[] {
  const out: CautionItem[] = [
    {
      drawing: "mains",
      title: "Power off and unplug every lead",
      detail: "Wait 30 s, until the standby lamp is out.",
    },
    {
      drawing: "esd",
      title: "Wear the wrist strap",
      detail: "Clipped to the chassis, checked today. Mind sharp edges.",
    },
  ];
  if (family === "power_supply")
    out.push({
      drawing: "mains",
      title: "Never open a power supply",
      detail: "Burnt or wet: it gets no power at all.",
    });
  else if (weightKg !== null && weightKg >= 23)
    out.push({
      drawing: "lift",
      title: `Two-person lift, ${weightKg} kg`,
      detail: "Use the table lift if alone.",
    });
  else if (["processor", "board", "system"].includes(family))
    out.push({
      drawing: "heat",
      title: "Heat sink stays hot ten minutes",
      detail: "Captive screws by hand driver. Corner mark aligned, socket cover on.",
    });
  else
    out.push({
      drawing: "heat",
      title: "Heat sinks stay hot ten minutes",
      detail: "Touch nothing that was just under load.",
    });
  return out;
}

export default async function BenchTest({
  params,
  searchParams,
}: {
  params: Promise<{ lineId: string }>;
  searchParams: Promise<{ at?: string; done?: string }>;
}) {
  const ctx = await requireStaff("warehouse", "agent", "manager");
  const { lineId } = await params;
  const line = UUID.test(lineId) ? await benchLine(ctx, lineId) : null;
  if (!line) notFound();
  const query = await searchParams;
  const site = await defaultSite(ctx);
  const sheet = sheetFor(line.family);
  const photos = line.test
    ? ((await photosOf(ctx, "bench_test", [line.test.id])).get(line.test.id) ?? [])
    : [];
  const ticket = await ticketByNumber(ctx, line.ticketNumber);
  const clock = clockView(
    { dueAt: line.dueAt, clockStartedAt: line.clockStartedAt, chaseOn: null, waitingOn: "bench" },
    ctx.now,
    site,
  );
  const mayTest = may(ctx, "bench.test") || may(ctx, "bench.restock_second_nff");
  const closed = line.test?.closedAt != null;
  const ahead =
    line.remedy === "advance_replacement" &&
    !line.replacement &&
    (line.lineState === "open" || line.lineState === "received");
  const goesOut = (closed && line.lineState === "tested") || ahead;
  const firstOpen =
    sheet.steps.find((s) => !line.readings.some((r) => r.step === s.step))?.step ?? sheet.steps.length;
  const at = Math.min(sheet.steps.length, Math.max(1, Number(query.at) || firstOpen));
  const wanted = { modelCode: line.modelCode, family: line.family, facts: line.facts };
  const candidates = goesOut
    ? (await stockOf(ctx, line.family)).map((u) => ({
        serial: u.serial,
        modelName: u.modelName,
        place: u.place,
        condition: u.condition,
        ...fit(wanted, { modelCode: u.modelCode, family: u.family, facts: u.facts }),
      }))
    : [];
  const nff = line.earlier.filter((e) => e.outcome === "no_fault_found").length;
  return (
    <main className="bench" id="main">
      <h1 className="vh">Bench test of {line.serial}</h1>
      <div className="thead">
        <div>
          <div className="id">
            <Tag serial={line.serial} big string />
            <span>
              Bay <span className="m">{line.place ?? "none"}</span>,{" "}
              <span className="m">{line.rmaNumber}</span>, {line.accountName}
              <br />“{line.faultWords}”
            </span>
          </div>
        </div>
        <div className="clock">
          {line.lineState === "settled" ? "Settled" : closed ? "Tested" : "Bench result due"}
          {/* Nothing is due any more once the line is settled. */}
          {line.lineState === "settled" ? null : (
            <>
              <br />
              <span className="clockline">
                <DueClock state={clock.state} share={clock.share} words={clock.words} late={clock.late} />
              </span>
            </>
          )}
        </div>
      </div>
      <CautionStrip items={cautions(line.family, line.weightKg)} />
      {line.earlier.length > 0 ? (
        <p className="earlier notch">
          <b>Seen before.</b>{" "}
          {line.earlier
            .map(
              (e) =>
                `${e.rmaNumber}: ${e.outcome ? TEST_OUTCOME_WORDS[e.outcome] : ""}${e.finding ? `, ${e.finding}` : ""}`,
            )
            .join("; ")}
          .{nff > 0 ? " A second no fault found needs a manager before it goes back to stock." : ""}
        </p>
      ) : null}
      <div className="bgrid">
        <section aria-label="Test record">
          <div className="sec">
            <h2>Test record</h2>
            <span className="q">
              sheet “{sheet.title}”, issue {sheet.issue}
            </span>
            <span className="r q">
              {line.readings.length} of {sheet.steps.length} run, every reading is kept
            </span>
          </div>
          {line.lineState === "open" ? (
            <p className="q">It is not here yet: the dock takes it in first.</p>
          ) : !line.test ? (
            mayTest ? (
              <ScanInForm lineId={line.lineId} serial={line.serial} />
            ) : (
              <p className="q">The test has not begun.</p>
            )
          ) : (
            <Steps
              lineId={line.lineId}
              testId={line.test.id}
              at={closed || !mayTest ? 0 : at}
              photos={photos.length}
              steps={sheet.steps.map((s) => {
                const r = line.readings.find((x) => x.step === s.step);
                return {
                  step: s.step,
                  title: s.title,
                  detail: s.detail,
                  measure: s.measure?.name ?? null,
                  unit: s.measure?.unit ?? "",
                  limits: s.serial ? "the unit's own" : limitWords(s),
                  judged: Boolean(s.serial) || s.measure?.min !== undefined || s.measure?.max !== undefined,
                  photo: Boolean(s.photo),
                  reading: r
                    ? {
                        value: r.value,
                        verdict: r.verdict,
                        note: r.note,
                        by: `${r.byName}, ${showInstant(r.at, site.zone)}`,
                      }
                    : null,
                };
              })}
            />
          )}
        </section>
        <section aria-label="Outcome">
          {line.test && !closed && mayTest ? (
            <CloseForm
              lineId={line.lineId}
              testId={line.test.id}
              serial={line.serial}
              dataBearing={line.dataBearing}
              open={sheet.steps.length - line.readings.length}
              dispositions={DISPOSITIONS_FOR}
              suggested={
                line.readings.some((r) => r.verdict === "fail")
                  ? "fault_confirmed"
                  : line.readings.length >= sheet.steps.length
                    ? "no_fault_found"
                    : null
              }
            />
          ) : null}
          {closed && line.test ? (
            <div className="closedtest">
              <div className="sec">
                <h2>Outcome</h2>
              </div>
              <p className="verdict">
                <span className="v">
                  {line.test.outcome
                    ? TEST_OUTCOME_WORDS[line.test.outcome].charAt(0).toUpperCase() +
                      TEST_OUTCOME_WORDS[line.test.outcome].slice(1)
                    : ""}
                  .
                </span>
              </p>
              <p>{line.test.finding}</p>
              <p className="q">
                Disposition: {line.test.disposition?.replace(/_/g, " ")}. Closed by {line.test.closedByName}
                {line.test.closedAt ? `, ${showInstant(line.test.closedAt, site.zone)}` : ""}
                {line.test.secondPersonName ? `; also looked: ${line.test.secondPersonName}` : ""}.
              </p>
            </div>
          ) : null}
          {goesOut && may(ctx, "dock.ship") ? (
            <GoesOut
              lineId={line.lineId}
              remedy={line.remedy}
              disposition={line.test?.disposition ?? ""}
              outcome={line.test?.outcome ?? ""}
              candidates={candidates}
            />
          ) : null}
          {line.replacement ? (
            <div className="good out" role="status">
              <svg viewBox="0 0 76 76" aria-hidden="true">
                <path d="M10 40 30 60 67 17" />
              </svg>
              <div>
                <div className="t">{line.replacement.serialOut} went out.</div>
                <div className="d">
                  {line.replacement.lastCoveredOn
                    ? `Covered to ${showDay(line.replacement.lastCoveredOn)}. `
                    : ""}
                  {ticket?.closedAt
                    ? "The RMA is settled and the customer is told."
                    : "Other lines are still open."}
                </div>
              </div>
            </div>
          ) : line.lineState === "settled" ? (
            <p className="ok" role="status">
              This line is settled{ticket?.closedAt ? ", and so is its RMA. The customer is told" : ""}.
            </p>
          ) : null}
        </section>
      </div>
    </main>
  );
}
