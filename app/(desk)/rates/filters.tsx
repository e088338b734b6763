import { Button } from "@/components/ui/button";
import { showMonth } from "@/lib/base/show";
import { FAMILY_WORDS } from "@/lib/ledger/schema";
import type { RatesChoices, RatesFilter } from "@/lib/reliability/schema";

function Pick({
  name,
  label,
  value,
  options,
}: {
  name: string;
  label: string;
  value: string;
  options: readonly (readonly [value: string, words: string])[];
}) {
  return (
    <select className="pick" name={name} aria-label={label} defaultValue={value}>
      {options.map(([v, words]) => (
        <option key={v} value={v}>
          {words}
        </option>
      ))}
    </select>
  );
}

/** Every month of the span, newest first. */
function monthsOf({ first, last }: { first: string; last: string }): string[] {
  const found: string[] = [];
  let [y, m] = last.split("-").map(Number) as [number, number];
  for (;;) {
    const month = `${y}-${String(m).padStart(2, "0")}`;
    found.push(month);
    if (month <= first || found.length > 600) return found;
    m -= 1;
    if (m === 0) [y, m] = [y - 1, 12];
  }
}

/** The filters as a sentence. A plain form: what is shown stands in the address and can be sent on. */
export function Filters({ filter, choices }: { filter: RatesFilter; choices: RatesChoices }) {
  const months = choices.months ? monthsOf(choices.months) : [];
  const named = (month: string | null) => (month && !months.includes(month) ? [month, ...months] : months);
  const asOptions = (list: string[]) => list.map((m) => [m, showMonth(`${m}-01`)] as const);
  return (
    <form method="get" className="abs sentence" aria-label="What the figures count">
      Rates by{" "}
      <Pick
        name="by"
        label="Group by"
        value={filter.by}
        options={[
          ["family", "part family"],
          ["model", "model"],
        ]}
      />{" "}
      for{" "}
      <Pick
        name="system"
        label="Systems"
        value={filter.system}
        options={[
          ["", "all systems"],
          ...choices.systems.map((s) => [s.code, `${s.name}, ${s.code}`] as const),
        ]}
      />
      ,{" "}
      <Pick
        name="condition"
        label="Condition"
        value={filter.condition ?? ""}
        options={[
          ["", "new and refurbished"],
          ["new", "new only"],
          ["refurbished", "refurbished only"],
        ]}
      />
      , shipped from{" "}
      <Pick
        name="from"
        label="Shipped from"
        value={filter.from ?? ""}
        options={[["", "the first day"], ...asOptions(named(filter.from))]}
      />{" "}
      to{" "}
      <Pick
        name="to"
        label="Shipped to"
        value={filter.to ?? ""}
        options={[["", "today"], ...asOptions(named(filter.to))]}
      />
      ; Figures 2 and 3 for{" "}
      <Pick
        name="family"
        label="Part family of figures 2 and 3"
        value={filter.family}
        options={(choices.families.includes(filter.family)
          ? choices.families
          : [filter.family, ...choices.families]
        ).map((f) => [f, FAMILY_WORDS[f].toLowerCase()] as const)}
      />
      . <Button kind="quiet">Show these</Button>
    </form>
  );
}
