"use client";
import Link from "next/link";
import { useQuery } from "@tanstack/react-query";
import { useRouter } from "next/navigation";
import { useEffect, useEffectEvent, useState } from "react";
import { CoverGlyph } from "@/components/coverage/glyph";
import { Ruler } from "@/components/coverage/ruler";
import { EvidenceMarks } from "@/components/evidence/marks";
import { DueClock } from "@/components/tickets/due";
import { Empty } from "@/components/ui/empty";
import { Kbd } from "@/components/ui/kbd";
import { Pin } from "@/components/ui/pin";
import { Tag } from "@/components/ui/tag";
import type { DeskRowView, DeskView } from "@/lib/tickets/schema";
import { Live } from "./query";

type Held = { id: string; subject: string; fromEmail: string; reason: string };
type Props = {
  first: DeskView;
  q: string;
  when: string;
  held: Held[];
  heldCount: number;
  /** "Two asks for goodwill wait for you", for who answers them. */
  goodwill: string | null;
};

/** Typing belongs to the field it is typed in. */
const inField = (t: EventTarget | null) =>
  t instanceof HTMLElement && (t.isContentEditable || /^(INPUT|TEXTAREA|SELECT)$/.test(t.tagName));

export function DeskBoard(props: Props) {
  return (
    <Live>
      <Board {...props} />
    </Live>
  );
}

function Board({ first, q, when, held, heldCount, goodwill }: Props) {
  const router = useRouter();
  const { data, isError } = useQuery({
    queryKey: ["tickets", q],
    queryFn: async (): Promise<DeskView> => {
      const response = await fetch(`/api/v1/tickets?${new URLSearchParams(q ? { q } : {})}`);
      if (!response.ok) throw new Error(String(response.status));
      return (await response.json()) as DeskView;
    },
    initialData: first,
    initialDataUpdatedAt: new Date(first.asOf).getTime(),
    staleTime: 10_000,
    refetchInterval: 20_000,
  });
  const rows = data.groups.flatMap((g) => g.rows);
  const [chosen, setChosen] = useState<string | null>(null);
  const current = rows.find((r) => r.id === chosen) ?? rows[0];

  const move = (by: number) => {
    const at = rows.findIndex((r) => r.id === current?.id);
    const next = rows[Math.min(rows.length - 1, Math.max(0, at + by))];
    if (!next) return;
    setChosen(next.id);
    document.getElementById(`row-${next.id}`)?.scrollIntoView({ block: "nearest" });
  };

  const onKey = useEffectEvent((e: KeyboardEvent) => {
    if (inField(e.target) || e.metaKey || e.ctrlKey || e.altKey) return;
    if (e.key === "j") move(1);
    else if (e.key === "k") move(-1);
    else if (
      e.key === "Enter" &&
      current &&
      !(e.target instanceof HTMLAnchorElement) &&
      !(e.target instanceof HTMLButtonElement)
    )
      router.push(`/desk/${current.number}`);
    else return;
    e.preventDefault();
  });
  useEffect(() => {
    const listen = (e: KeyboardEvent) => onKey(e);
    window.addEventListener("keydown", listen);
    return () => window.removeEventListener("keydown", listen);
  }, []);

  return (
    <>
      <div className="deskhead">
        <div>
          <h1>{data.sentence}</h1>
          <p>
            {data.second} {when}
            {goodwill ? (
              <>
                {" "}
                <Link href="/goodwill">{goodwill}</Link>
              </>
            ) : null}
            {isError ? " The line to the server is down; what you see may be old." : ""}
          </p>
        </div>
        <nav className="tally" aria-label="Jump to who we wait on">
          {data.groups.map((g) => (
            <a key={g.on} href={`#on-${g.on}`}>
              <span className="marks" aria-hidden="true">
                {g.rows.slice(0, 24).map((r) => (
                  <i
                    key={r.id}
                    className={r.clock.state === "over" ? "o" : r.clock.state === "running" ? "t" : undefined}
                  />
                ))}
              </span>
              {g.on} <b>{g.rows.length}</b>
            </a>
          ))}
        </nav>
      </div>
      <form className="deskfind" role="search" method="get" action="/desk">
        <label htmlFor="desk-q">Show tickets about</label>
        <input
          id="desk-q"
          name="q"
          className="in"
          defaultValue={q}
          placeholder="anything"
          autoComplete="off"
        />
        {q ? <Link href="/desk">show all</Link> : null}
      </form>
      {rows.length === 0 ? (
        <Empty title={q ? `Nothing open is about “${q}”.` : "Nothing is open."}>
          {q
            ? "The scan line above also finds closed tickets and units."
            : "The next ticket opens when somebody writes or reports a fault."}
        </Empty>
      ) : null}
      <div className="q-grid">
        {rows.length > 0 ? (
          <div className="q-head" aria-hidden="true">
            <span>Due</span>
            <span>Unit</span>
            <span>Fault, in the customer’s words</span>
            <span>Customer</span>
            <span>Cover</span>
            <span>RMA</span>
            <span>Evidence</span>
            <span>Last entry</span>
          </div>
        ) : null}
        {data.groups.map((g) => (
          <section className="q-group" id={`on-${g.on}`} key={g.on} aria-labelledby={`h-${g.on}`}>
            <h2 id={`h-${g.on}`}>
              <small>Waiting on</small>
              {g.on}
              <span className="m">{g.rows.length}</span>
              {g.note ? <small>{g.note}</small> : null}
            </h2>
            <ol>
              {g.rows.map((r) => (
                <Row
                  key={r.id}
                  row={r}
                  on={r.id === current?.id}
                  today={data.today}
                  choose={() => setChosen(r.id)}
                />
              ))}
            </ol>
          </section>
        ))}
        {heldCount > 0 ? (
          <section className="q-group" aria-labelledby="h-held">
            <h2 id="h-held">
              <small>Held</small>
              mail
              <span className="m">{heldCount}</span>
            </h2>
            <ol>
              {held.map((h) => (
                <li className="q-row" key={h.id}>
                  <span className="m s q">no clock</span>
                  <span className="q s">no unit found</span>
                  <a className="fault" href="/held">
                    “{h.subject || "no subject"}”
                  </a>
                  <span className="cust">{h.fromEmail}</span>
                  <span className="last held-why">{h.reason}</span>
                </li>
              ))}
            </ol>
          </section>
        ) : null}
      </div>
      {data.more ? (
        <p className="hint">
          Only the first four hundred are shown. Narrow them by words, or use the scan line.
        </p>
      ) : null}
    </>
  );
}

function Row({
  row,
  on,
  today,
  choose,
}: {
  row: DeskRowView;
  on: boolean;
  today: string;
  choose: () => void;
}) {
  return (
    <li
      className={on ? "q-row on" : "q-row"}
      id={`row-${row.id}`}
      onClick={choose}
      // By keyboard only: a row that opened under the mouse would move its link away before the click ends.
      onFocus={(e) => {
        if (e.target.matches(":focus-visible")) choose();
      }}
      aria-current={on ? "true" : undefined}
    >
      {on ? <Pin size={13} /> : null}
      <span>
        <DueClock
          state={row.clock.state}
          share={row.clock.share}
          words={row.clock.words}
          late={row.clock.late}
        />
      </span>
      <span className="tagcell">
        {row.serial ? (
          <Tag serial={row.serial} part={row.isPart} />
        ) : (
          <span className="q s">no unit yet</span>
        )}
      </span>
      <a className="fault" href={`/desk/${row.number}`}>
        {row.fault}
      </a>
      <span className="cust">{row.customer}</span>
      <span>
        <CoverGlyph state={row.cover.state} words={row.cover.words} />
      </span>
      <span className="m s">{row.rmaNumber ?? "–"}</span>
      <span>
        <EvidenceMarks came={row.evidenceCame} wanted={row.evidenceWanted} />
      </span>
      <span className="last">
        {row.lastLine}, {row.lastAgo}
      </span>
      {on ? (
        <div className="peek">
          {row.window ? (
            <Ruler
              mini
              caption="Cover of the unit claimed"
              shippedOn={row.window.firstOn}
              todayOn={today}
              rows={[
                {
                  clause: row.window.clause,
                  label: row.serial ?? "",
                  kind:
                    row.window.lastOn < today ? "ended" : row.cover.state === "person" ? "person" : "covered",
                  from: row.window.firstOn,
                  to: row.window.lastOn,
                  words: row.window.words,
                  claimed: true,
                },
              ]}
            />
          ) : (
            <p className="q s">No ruler yet: tie a unit to this ticket first.</p>
          )}
          <div className="say">
            <span>
              {row.lastLine}. Next: {row.waitingFor}
              {row.clock.by ? `, ${row.clock.by}` : ""}.
            </span>
            <span className="keys">
              <span>
                <Kbd>Enter</Kbd> open
              </span>
              <span>
                <Kbd>J</Kbd>
                <Kbd>K</Kbd> move
              </span>
            </span>
          </div>
        </div>
      ) : null}
    </li>
  );
}
