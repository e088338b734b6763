import type { ReactNode } from "react";
import { Pin } from "../ui/pin";

const clock = (at: Date, zone: string) =>
  new Intl.DateTimeFormat("en-GB", { hour: "2-digit", minute: "2-digit", timeZone: zone }).format(at);

function day(at: Date, zone: string, year: boolean): string {
  const parts = new Intl.DateTimeFormat("en-US", {
    weekday: "short",
    day: "numeric",
    month: "short",
    year: "numeric",
    timeZone: zone,
  }).formatToParts(at);
  const get = (type: string) => parts.find((p) => p.type === type)?.value ?? "";
  return `${get("weekday")} ${get("day")} ${get("month")}${year ? ` ${get("year")}` : ""}`;
}

/**
 * One line of the record: when, its reference on the spine, what happened. The wait until the next
 * entry stands on the spine below it. A decision's box is solid.
 */
export function RecordEntry({
  refName,
  at,
  zone,
  year = false,
  gap,
  kind,
  title,
  by,
  right,
  now,
  children,
}: {
  refName: string;
  at: Date | string;
  /** IANA name of the zone the clock is shown in. */
  zone: string;
  /** Say the year too: where it differs from the entry before. */
  year?: boolean;
  gap?: string | null;
  kind?: "decision" | "plain" | (string & {});
  title: ReactNode;
  by?: ReactNode;
  right?: ReactNode;
  /** The newest entry, on which the next move rests. */
  now?: boolean;
  children?: ReactNode;
}) {
  const when = typeof at === "string" ? new Date(at) : at;
  const className = ["entry", kind === "decision" && "dec", now && "now"].filter(Boolean).join(" ");
  return (
    <article className={className} id={refName} aria-label={`Entry ${refName}`} tabIndex={-1}>
      <time dateTime={when.toISOString()} title={`${day(when, zone, true)}, ${clock(when, zone)} ${zone}`}>
        <b>{day(when, zone, year)}</b>
        {clock(when, zone)}
      </time>
      <div className="spine">
        <span className="ref">
          {now ? <Pin /> : null}
          {refName}
        </span>
        {gap ? (
          <span className="gap">
            <span className="vh">next entry after </span>
            {gap}
          </span>
        ) : null}
      </div>
      <div className="body">
        <div className="h">
          <b>{title}</b>
          {by ? <span>{by}</span> : null}
          {right ? <span className="r">{right}</span> : null}
        </div>
        {children}
      </div>
    </article>
  );
}

/** Quoted lines and signatures, folded to one line with their count; nothing is removed. */
export function Folded({ words, children }: { words: string; children: ReactNode }) {
  return (
    <details className="foldbox">
      <summary>
        <span className="fold">
          {words} <u>show</u>
        </span>
      </summary>
      <div>{children}</div>
    </details>
  );
}
