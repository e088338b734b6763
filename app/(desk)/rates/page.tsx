import type { Metadata } from "next";
import Link from "next/link";
import { notFound } from "next/navigation";
import { requireStaff } from "@/app/_edge/ctx";
import { grouped, years } from "@/components/reliability/axes";
import { Empty } from "@/components/ui/empty";
import { countWord, plural, showDay } from "@/lib/base/show";
import { openGoodwills } from "@/lib/coverage/goodwill.queries";
import { defaultSite } from "@/lib/ledger/queries";
import { rates, ratesChoices, survival, triangle } from "@/lib/reliability/queries";
import type { RatesFilter, RatesView } from "@/lib/reliability/schema";
import { percent } from "@/lib/reliability/words";
import { FigureOne, FigureThree, FigureTwo } from "./figures";
import { Filters } from "./filters";
import { Method } from "./method";

export const metadata: Metadata = { title: "Rates" };

export default async function Rates({
  searchParams,
}: {
  searchParams: Promise<Record<string, string | string[] | undefined>>;
}) {
  const ctx = await requireStaff("manager", "admin");
  const query = await searchParams;
  const [view, curve, months, choices] = await Promise.all([
    rates(ctx, query),
    survival(ctx, query),
    triangle(ctx, query),
    ratesChoices(ctx),
  ]);
  if (!view.ok || !curve.ok || !months.ok || !choices.ok) notFound();
  const { zone } = await defaultSite(ctx);
  const { filter } = view.value;
  const goodwill = await openGoodwills(ctx);
  return (
    <main className="rates" id="main">
      <h1>Which parts fail, and how sure we are</h1>
      <Filters filter={filter} choices={choices.value} />
      <p className="abs">{headline(view.value)}</p>
      {view.value.rows.length === 0 ? (
        <NothingYet filter={filter} sold={choices.value.months !== null} />
      ) : (
        <div className="figs">
          <div>
            <FigureOne view={view.value} />
          </div>
          <div>
            <FigureTwo view={curve.value} filter={filter} />
            <FigureThree view={months.value} filter={filter} />
          </div>
        </div>
      )}
      <p>
        What was granted outside the terms stands under <Link href="/goodwill">goodwill</Link>
        {goodwill && goodwill.open > 0
          ? `; ${countWord(goodwill.open)} ${plural(goodwill.open, "ask waits", "asks wait")} for an answer`
          : ""}
        .
      </p>
      <Method zone={zone} />
    </main>
  );
}

/** The figure in a sentence, with everything that qualifies it. */
function headline({ all, asOf }: RatesView): string {
  const failures = `${grouped(all.failures)} ${plural(all.failures, "failure")} confirmed at the bench in ${years(all.unitYears)} unit-years of parts`;
  const open =
    all.open > 0
      ? ` ${grouped(all.open)} ${plural(all.open, "return is", "returns are")} not judged yet.`
      : "";
  const nff =
    all.judged > 0
      ? ` No fault was found in ${grouped(all.noFaultFound)} of ${grouped(all.judged)} judged, ${percent(all.noFaultFound / all.judged)}; those are left out.`
      : "";
  return `${failures}, as of ${showDay(asOf)}.${open}${nff}`;
}

function NothingYet({ filter, sold }: { filter: RatesFilter; sold: boolean }) {
  if (!sold)
    return (
      <Empty title="Nothing has been sold yet.">
        Rates begin with the first shipments in the ledger and the first test closed at the bench.
      </Empty>
    );
  if (filter.from && filter.to && filter.from > filter.to)
    return (
      <Empty title="The first month lies after the last.">Turn the two round to see what was shipped.</Empty>
    );
  return (
    <Empty title="Nothing under cover was shipped that this describes.">
      Widen the months, or choose all systems.
    </Empty>
  );
}
