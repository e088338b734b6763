import type { CSSProperties } from "react";

export type DueState = "running" | "over" | "rest";

/**
 * The due clock: a fuse that shortens to the left and the time in words. It runs only while the move
 * is ours; at rest there is no fuse, only the day to chase. `share` is what is left, 0 to 1.
 */
export function DueClock({
  state,
  share = 0,
  words,
  late,
}: {
  state: DueState;
  share?: number;
  words: string;
  /** At rest, yet past the day to chase. */
  late?: boolean;
}) {
  const className = ["due", state === "over" && "over", state === "rest" && "rest", late && "late"]
    .filter(Boolean)
    .join(" ");
  const left = state === "over" ? 1 : Math.min(1, Math.max(0, share));
  return (
    <span className={className} style={{ "--v": `${Math.round(left * 100)}%` } as CSSProperties}>
      <i className="fuse" aria-hidden="true">
        <i />
      </i>
      {words}
    </span>
  );
}
