import type { ReactNode } from "react";

// Silkscreen drawings: ink lines, square ends, no fills. Each stands beside a word, so all are hidden
// from readers.

const HAZARDS = {
  mains: (
    <>
      <path d="M15 4v9M29 4v9M10 13h24v6c0 8-5 12-12 12s-12-4-12-12zM22 31v9" />
      <path d="M5 5 39 39" strokeWidth="2.5" />
    </>
  ),
  esd: (
    <>
      <ellipse cx="17" cy="13" rx="13" ry="7" />
      <path d="M4 13v6c0 4 6 7 13 7s13-3 13-7v-6" />
      <path d="M14 19h6v5h-6z" />
      <path d="M20 22c6 0 3 6 8 5s2 5 6 5v3M27 35h14M30 38.5h8M32.5 42h3" />
    </>
  ),
  heat: (
    <>
      <path d="M6 38h32M10 38V24M17 38V24M24 38V24M31 38V24M35 38V24" />
      <path d="M12 18c-3-4 3-6 0-11M22 18c-3-4 3-6 0-11M32 18c-3-4 3-6 0-11" />
    </>
  ),
  battery: (
    <>
      <path d="M22 4 41 38H3Z" />
      <path d="M15 21h12v13H15zM18.5 21v-3h5v3" />
      <path d="m22.5 23-3 5h5l-3 5" strokeWidth="1.5" />
    </>
  ),
  lift: (
    <>
      <rect x="11" y="16" width="22" height="9" />
      <circle cx="5" cy="10" r="3.4" />
      <circle cx="39" cy="10" r="3.4" />
      <path d="M5 14v13l-3 13M5 27l4 13M5 18l6 5M39 14v13l3 13M39 27l-4 13M39 18l-6 5" />
    </>
  ),
  data: (
    <>
      <rect x="9" y="5" width="26" height="34" />
      <circle cx="22" cy="18" r="8.5" />
      <circle cx="22" cy="18" r="1.8" />
      <path d="m24 20 6 11" />
      <path d="M13 35h8" />
    </>
  ),
  sharp: (
    <>
      <path d="M28 6H5v32h23l5-4-5-4 5-4-5-4 5-4-5-4 5-4z" />
      <circle cx="11" cy="12" r="2" />
      <circle cx="11" cy="32" r="2" />
      <path d="M39 19c-2.5 4-3.5 5.5-3.5 8a3.5 3.5 0 0 0 7 0c0-2.5-1-4-3.5-8z" />
    </>
  ),
  socket: (
    <>
      <path d="M5 13h34v26H5z" />
      <path d="M12 20h20v12H12z" strokeDasharray="2 2.5" />
      <path d="M9 4h26v5H9zM32 9v4" />
      <path d="M5 13h7l-7 7z" />
    </>
  ),
} satisfies Record<string, ReactNode>;

export type HazardDrawing = keyof typeof HAZARDS;
export const HAZARD_DRAWINGS = Object.keys(HAZARDS) as HazardDrawing[];

/** A caution's drawing, 44 by 44. */
export function Hazard({ drawing }: { drawing: HazardDrawing }) {
  return (
    <svg viewBox="0 0 44 44" aria-hidden="true">
      {HAZARDS[drawing]}
    </svg>
  );
}

/** Bars of a code: stands in every scan field. */
export function ScanBars({ big }: { big?: boolean }) {
  return big ? (
    <svg viewBox="0 0 58 44" aria-hidden="true">
      <path d="M0 2h4v40H0zM7 2h2v40H7zM12 2h6v40h-6zM21 2h2v40h-2zM26 2h2v40h-2zM31 2h5v40h-5zM39 2h2v40h-2zM44 2h6v40h-6zM53 2h2v40h-2zM57 2h1v40h-1z" />
    </svg>
  ) : (
    <svg className="i" viewBox="0 0 20 16" aria-hidden="true">
      <path d="M1 2v12M4 2v12M5.5 2v12M9 2v12M12 2v12M13.5 2v12M16 2v12M19 2v12" strokeWidth="1.25" />
    </svg>
  );
}

export function Camera() {
  return (
    <svg className="i" viewBox="0 0 40 32" aria-hidden="true">
      <path d="M2 8h9l3-5h12l3 5h9v21H2z" />
      <circle cx="20" cy="18" r="6.5" />
    </svg>
  );
}

/** The drawn tick of the right-scan plate. */
export function BigTick() {
  return (
    <svg viewBox="0 0 76 76" aria-hidden="true">
      <path d="M10 40 30 60 67 17" />
    </svg>
  );
}

/** Pass: a tick. Fail: a cross. Always beside the word. */
export function VerdictMark({ pass }: { pass: boolean }) {
  return (
    <svg viewBox="0 0 16 16" aria-hidden="true">
      <path d={pass ? "M2 9l4 4 8-10" : "M3 3l10 10M13 3 3 13"} />
    </svg>
  );
}
