import Link from "next/link";
import { Pin } from "./pin";

export type TagProps = {
  serial: string;
  /** A part's tag has a faint edge, a unit's a firm one. */
  part?: boolean;
  big?: boolean;
  /** Gold fills the notch: this one, now. */
  current?: boolean;
  href?: string;
  /** Ties a big tag to the bar above it. */
  string?: boolean;
};

/** The bench tag: notch, eyelet, serial. A unit or part is never shown without it. */
export function Tag({ serial, part, big, current, href, string }: TagProps) {
  const className = ["tag notch", part && "part", big && "big"].filter(Boolean).join(" ");
  const inside = (
    <>
      {current ? <Pin /> : null}
      <i className="eye" aria-hidden="true" />
      {serial}
    </>
  );
  const tag = href ? (
    <Link className={className} href={href} aria-current={current ? "true" : undefined}>
      {inside}
    </Link>
  ) : (
    <span className={className} aria-current={current ? "true" : undefined}>
      {inside}
    </span>
  );
  if (!string) return tag;
  return (
    <span className="relative">
      <svg className="string" viewBox="0 0 20 37" aria-hidden="true">
        <path d="M0 37C-3 22 2 12 5 0M0 37C3 24 9 14 8 0" />
      </svg>
      {tag}
    </span>
  );
}
