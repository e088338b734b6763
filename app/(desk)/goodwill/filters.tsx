import { Button } from "@/components/ui/button";
import { showMonth } from "@/lib/base/show";
import type { GoodwillFilter } from "@/lib/coverage/goodwill";

/** The filters as a sentence. A plain form: what is shown stands in the address and can be sent on. */
export function Filters({ filter, months }: { filter: GoodwillFilter; months: readonly string[] }) {
  const listed = filter.month && !months.includes(filter.month) ? [filter.month, ...months] : months;
  return (
    <form method="get" action="/goodwill" className="sentence" aria-label="What the list shows">
      Show{" "}
      <select className="pick" name="state" aria-label="Which asks" defaultValue={filter.state ?? ""}>
        <option value="">every answer</option>
        <option value="granted">what was granted</option>
        <option value="declined">what was declined</option>
        <option value="asked">what is not answered yet</option>
      </select>
      , asked in{" "}
      <select className="pick" name="month" aria-label="Asked in" defaultValue={filter.month ?? ""}>
        <option value="">any month</option>
        {listed.map((m) => (
          <option key={m} value={m}>
            {showMonth(`${m}-01`)}
          </option>
        ))}
      </select>
      . <Button kind="quiet">Show these</Button>
    </form>
  );
}
