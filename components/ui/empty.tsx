import type { ReactNode } from "react";

/** Nothing here yet: the outline of a board, and a sentence on what starts the next thing. */
export function Empty({ title, children }: { title: string; children?: ReactNode }) {
  return (
    <div className="empty">
      <svg viewBox="0 0 104 76" aria-hidden="true">
        <path d="M4 4h96v68H4zM14 14h34v48H14zM56 14h34v20H56zM56 42h34v20H56z" strokeDasharray="3 3" />
        <path d="M4 4h12L4 16z" />
      </svg>
      <div>
        <b>{title}</b>
        {children ? <div className="q">{children}</div> : null}
      </div>
    </div>
  );
}
