import type { CSSProperties, ReactNode } from "react";

/**
 * A share of long work, over ten ticks, with the share and the time left in words below.
 * `stop` is the way to end it.
 */
export function Progress({
  share,
  words,
  label,
  stop,
}: {
  /** 0 to 1. */
  share: number;
  words: ReactNode;
  label?: string;
  stop?: ReactNode;
}) {
  const percent = Math.round(Math.min(1, Math.max(0, share)) * 100);
  return (
    <div>
      <span
        className="prog"
        role="progressbar"
        aria-label={label ?? "Progress"}
        aria-valuenow={percent}
        aria-valuemin={0}
        aria-valuemax={100}
        style={{ "--v": `${percent}%` } as CSSProperties}
      >
        <i />
      </span>
      <p className="s mt-2" aria-live="polite">
        {words} {stop}
      </p>
    </div>
  );
}
