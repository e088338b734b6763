import type { ReactNode } from "react";
import { Mark } from "@/components/ui/mark";

/** The tag itself, on its string. */
export function Hang({ children, wide = false }: { children: ReactNode; wide?: boolean }) {
  return (
    <main id="main" className={wide ? "hang hang-wide notch" : "hang notch"}>
      <svg className="hang-string" viewBox="0 0 20 260" preserveAspectRatio="none" aria-hidden="true">
        <path d="M10 0C4 90 4 170 8 250M11 0c6 90 4 170 1 250" fill="none" />
      </svg>
      <i className="eyelet" aria-hidden="true" />
      <p className="hang-brand">
        <Mark size={26} />
        Mendbay
      </p>
      {children}
    </main>
  );
}
