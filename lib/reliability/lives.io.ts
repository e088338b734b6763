import { sql, type SQL } from "drizzle-orm";
import type { Day } from "../base/civil";
import type { RatesFilter } from "./schema";

/**
 * The lives that the filter asks for, one row each, as common table expressions that end in `life`:
 * a part in its slot or a sold unit, its days under observation, and what the bench found. The rules are
 * exposure.ts's, said to the database; a test holds the two equal.
 *
 * - Age zero is the day it was shipped, or fitted for a part that took another's place.
 * - A fault's day is the day its ticket was first received, once the bench has confirmed it.
 * - Observation ends with the first confirmed fault, the end of cover, removal or end of sale, or the
 *   as-of day. What happens after, as after a repair, counts neither as failure nor as time.
 * - A unit in its second life with us is refurbished, whatever its first label said.
 */
export function lives(filter: RatesFilter, asOf: Day, zone: string): SQL {
  const within = [
    filter.system ? sql`root.code = ${filter.system}` : sql`true`,
    filter.from ? sql`l.start_on >= ${`${filter.from}-01`}::date` : sql`true`,
    filter.to ? sql`l.start_on < (${`${filter.to}-01`}::date + interval '1 month')` : sql`true`,
  ];
  return sql`
    stood as (
      select i.id, i.unit_id, i.sale_line_id, i.from_on as start_on, least(i.to_on, s.ended_on) as end_on,
        s.unit_id as root_id, null::text as sold_as
      from installation i join sale_line s on s.id = i.sale_line_id
      union all
      select s.id, s.unit_id, s.id, greatest(s.shipped_on, took.on_day), s.ended_on, s.unit_id, s.condition::text
      from sale_line s
      -- A unit that took over another's sale carries that sale's ship day; its own life began when it left us.
      left join lateral (
        select max((rp.scanned_out_at at time zone ${zone})::date) as on_day from replacement rp
        where rp.unit_out_id = s.unit_id and rp.installation_id is null
          and (rp.scanned_out_at at time zone ${zone})::date <= coalesce(s.ended_on, ${asOf}::date)
      ) took on true
    ),
    numbered as (
      select stood.*, row_number() over (partition by unit_id order by start_on, id) as turn from stood
    ),
    returned as (
      select distinct on (rl.id) rl.id, l.id as life_id, t.claim_on, b.outcome, b.closed_at is not null as judged
      from rma_line rl
      join rma r on r.id = rl.rma_id and r.state not in ('declined', 'withdrawn', 'expired')
      join ticket t on t.id = r.ticket_id
      join stood l on l.unit_id = rl.unit_id and l.start_on <= t.claim_on
        and t.claim_on <= coalesce(l.end_on, 'infinity')
      left join bench_test b on b.rma_line_id = rl.id
      where rl.state <> 'cancelled' and t.claim_on <= ${asOf}::date
      order by rl.id, l.start_on desc
    ),
    found as (
      select life_id, min(claim_on) filter (where outcome = 'fault_confirmed') as confirmed_on,
        min(claim_on) filter (where not judged) as open_on,
        count(*) filter (where judged) as judged,
        count(*) filter (where outcome = 'no_fault_found') as no_fault_found
      from returned group by life_id
    ),
    known as (
      select l.id, m.family, m.code as model_code, m.name as model_name, u.lot_id, l.start_on,
        (case when u.condition = 'refurbished' or l.sold_as = 'refurbished' or l.turn > 1
          then 'refurbished' else 'new' end)::condition as condition,
        w.last_on as cover_on, doa.last_on as doa_on,
        least(w.last_on, l.end_on, ${asOf}::date) as last_on,
        f.confirmed_on, f.open_on, coalesce(f.judged, 0) as judged, coalesce(f.no_fault_found, 0) as no_fault_found
      from numbered l
      join unit u on u.id = l.unit_id
      join model m on m.id = u.model_id
      join unit ru on ru.id = l.root_id
      join model root on root.id = ru.model_id
      -- A window is of an installation, or of the sold unit itself: either way of the life with that id.
      join cover_window w on w.kind = 'cover' and coalesce(w.installation_id, w.sale_line_id) = l.id
      left join cover_window doa on doa.kind = 'doa' and coalesce(doa.installation_id, doa.sale_line_id) = l.id
      left join found f on f.life_id = l.id
      where l.start_on <= ${asOf}::date and ${sql.join(within, sql` and `)}
    ),
    life as (
      select known.*,
        greatest(0, (case when confirmed_on <= last_on then confirmed_on else last_on end) - start_on) as days,
        coalesce(confirmed_on <= last_on and confirmed_on > start_on, false) as failed,
        coalesce(confirmed_on <= last_on and confirmed_on = start_on, false) as dead_on_arrival
      from known
      where ${filter.condition ? sql`condition = ${filter.condition}` : sql`true`}
    )`;
}
