import type { Metadata } from "next";
import Link from "next/link";
import { requireStaff } from "@/app/_edge/ctx";
import { Empty } from "@/components/ui/empty";
import { may } from "@/lib/auth/rules";
import { civilDayIn } from "@/lib/base/civil";
import { showDay } from "@/lib/base/show";
import { holidaysOf, defaultSite } from "@/lib/ledger/queries";
import { HolidayForm } from "./form";

export const metadata: Metadata = { title: "Working days" };

const WEEKDAYS = ["Monday", "Tuesday", "Wednesday", "Thursday", "Friday", "Saturday", "Sunday"];

export default async function Calendar({ searchParams }: { searchParams: Promise<{ kept?: string }> }) {
  const ctx = await requireStaff();
  const site = await defaultSite(ctx);
  const today = civilDayIn(ctx.now, site.zone);
  const all = await holidaysOf(ctx, site.id);
  const coming = all.filter((h) => h.day >= today);
  const kept = (await searchParams).kept;
  const list = (of: typeof all) => (
    <ul className="plist">
      {of.map((h) => (
        <li key={h.day}>
          {showDay(h.day)}, {h.name}
        </li>
      ))}
    </ul>
  );
  return (
    <main id="main" className="desk narrow">
      <div className="deskhead">
        <div>
          <h1>Working days of {site.name}</h1>
          <p>
            {site.workdays.map((d) => WEEKDAYS[d - 1]).join(", ")}, {site.opensAt} to {site.closesAt},{" "}
            {site.zone}. Limits to act, such as a notice of dead on arrival, roll over holidays to the next
            working day. Cover itself never rolls.
          </p>
        </div>
        {kept && /^\d{4}(-\d{4})*$/.test(kept) ? (
          <p className="ok r" role="status">
            Set for {kept.split("-").join(", ")}. Limits that end about those days follow.
          </p>
        ) : null}
      </div>
      <section aria-labelledby="coming">
        <div className="sec">
          <h2 id="coming">Holidays to come</h2>
        </div>
        {coming.length === 0 ? (
          <Empty title="No holiday is set from today on.">
            Until one is, every weekday counts as a working day.
          </Empty>
        ) : (
          list(coming)
        )}
        {all.length > coming.length ? (
          <details className="more">
            <summary>Those before</summary>
            {list(all.filter((h) => h.day < today).reverse())}
          </details>
        ) : null}
      </section>
      {may(ctx, "site.write") ? (
        <section aria-labelledby="set">
          <div className="sec">
            <h2 id="set">Set holidays</h2>
          </div>
          <HolidayForm />
        </section>
      ) : null}
      <p>
        <Link href="/terms">All terms</Link>
      </p>
    </main>
  );
}
