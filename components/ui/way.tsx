import { Pin } from "./pin";

/** The question rule: as many marks as questions, pin 1 on this one. `at` counts from 1. */
export function Way({ total, at, label }: { total: number; at: number; label: string }) {
  return (
    <>
      <div className="way" aria-hidden="true">
        {Array.from({ length: total }, (_, i) => {
          const n = i + 1;
          return (
            <i key={n} className={n < at ? "d" : n === at ? "c" : undefined}>
              {n === at ? <Pin /> : null}
            </i>
          );
        })}
      </div>
      <p className="wcap">
        {label}, question {at} of {total}
      </p>
    </>
  );
}
