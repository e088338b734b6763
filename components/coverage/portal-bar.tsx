import { dayNumber, longDay, monthOf, percentOf } from "../ui/scale";
import { CoverBar } from "./bar";
import type { GlyphState } from "./glyph";

/** The day a tenth of the whole later, so that the end of cover is seen to be an end. */
function padded(from: string, last: string): string {
  const days = dayNumber(last) - dayNumber(from);
  return new Date((dayNumber(last) + Math.ceil(days * 0.08)) * 86_400_000).toISOString().slice(0, 10);
}

/** How the words over the flag hang: to its left near the end, to its right near the start. */
const hang = (at: number) => `-${Math.min(100, Math.max(0, at)).toFixed(1)}%`;

/**
 * Cover for a customer: one bar from shipping to its end with today's flag, months below. With
 * `saidOn` the flag marks the day they wrote instead, as in a decision. The words beside it say all.
 */
export function PortalCoverBar({
  shippedOn,
  endsOn,
  doaUntil,
  todayOn,
  saidOn,
  state,
}: {
  shippedOn: string;
  endsOn: string | null;
  doaUntil?: string | null;
  todayOn: string;
  saidOn?: string | null;
  state: GlyphState;
}) {
  if (!endsOn || state === "none") return null;
  const flagOn = saidOn ?? todayOn;
  const span = { from: shippedOn, to: padded(shippedOn, endsOn > flagOn ? endsOn : flagOn) };
  const show = saidOn ? longDay : monthOf;
  const flagAt = percentOf(flagOn, span);
  const kind = state === "ended" || state === "person" ? state : "covered";
  const end = state === "person" ? "being checked" : `${endsOn < todayOn ? "ended" : "ends"} ${show(endsOn)}`;

  return (
    <>
      <div className={saidOn ? "pcov said" : "pcov"} aria-hidden="true">
        <CoverBar kind={kind} from={shippedOn} to={endsOn} span={span} />
        {doaUntil && kind === "covered" ? (
          <CoverBar kind="doa" from={shippedOn} to={doaUntil} span={span} />
        ) : null}
        <i className="t" style={{ left: `${flagAt}%` }} />
        {saidOn ? (
          <span className="sd" style={{ left: `${flagAt}%`, transform: `translateX(${hang(flagAt)})` }}>
            you wrote to us, {longDay(saidOn)}
          </span>
        ) : null}
      </div>
      <div className="pcap">
        <span>shipped {show(shippedOn)}</span>
        <span>{end}</span>
      </div>
    </>
  );
}
