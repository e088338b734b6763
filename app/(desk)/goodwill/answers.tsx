import Link from "next/link";
import { Table, type Column } from "@/components/ui/table";
import { Tag } from "@/components/ui/tag";
import { civilDayIn } from "@/lib/base/civil";
import { showDayShort } from "@/lib/base/show";
import type { GoodwillView } from "@/lib/coverage/goodwill";
import { REMEDY_WORDS } from "@/lib/coverage/schema";

const columns = (zone: string): Column<GoodwillView>[] => [
  {
    key: "unit",
    head: "Unit",
    cell: (g) => <Tag serial={g.serial} href={`/ledger/${encodeURIComponent(g.serial)}`} />,
  },
  {
    key: "ticket",
    head: "Ticket",
    cell: (g) => (
      <>
        <Link className="m" href={`/desk/${g.ticketNumber}#${g.answerRef ?? g.askRef}`}>
          {g.ticketNumber}
        </Link>
        <span className="q">{g.customer}</span>
      </>
    ),
  },
  {
    key: "asked",
    head: "Asked for, and why",
    cell: (g) => (
      <>
        {REMEDY_WORDS[g.wantedRemedy]}: “{g.reason}”
        <span className="q">
          {g.askedByName}, {showDayShort(civilDayIn(g.askedAt, zone))}
        </span>
      </>
    ),
  },
  {
    key: "answer",
    head: "Answer",
    cell: (g) => (
      <>
        <b>{g.state === "asked" ? "not answered yet" : g.state}</b>
        {g.remedy ? `: ${REMEDY_WORDS[g.remedy]}` : ""}
        {g.answer ? `, “${g.answer}”` : ""}
        {g.answeredAt ? (
          <span className="q">
            {g.answeredByName}, {showDayShort(civilDayIn(g.answeredAt, zone))}
          </span>
        ) : null}
      </>
    ),
  },
  {
    key: "limit",
    head: "Limit, EUR",
    num: true,
    cell: (g) => (g.limitCents === null ? "" : (g.limitCents / 100).toFixed(2)),
  },
];

/** What was asked and answered, newest first. */
export function Answers({ rows, zone }: { rows: readonly GoodwillView[]; zone: string }) {
  return <Table columns={columns(zone)} rows={rows} rowKey={(g) => g.id} caption="Goodwill on record" />;
}
