import Link from "next/link";
import type { ReactNode } from "react";
import { requireStaff } from "@/app/_edge/ctx";
import { person } from "@/app/_look/person";
import { Mark } from "@/components/ui/mark";
import { ToastProvider } from "@/components/ui/toast";
import { may, type Act } from "@/lib/auth/rules";
import type { Role } from "@/lib/ctx";
import { PersonMenu } from "./_chrome/person-menu";
import { ScanLine } from "./_chrome/scan-line";
import { Sections, type Section } from "./_chrome/sections";

const SECTIONS: readonly (Section & { act: Act })[] = [
  { href: "/desk", word: "Desk", act: "ticket.read", also: ["/held"] },
  { href: "/dock", word: "Dock", act: "dock.scan" },
  { href: "/bench", word: "Bench", act: "bench.read" },
  { href: "/rates", word: "Rates", act: "rates.read" },
  { href: "/ledger", word: "Ledger", act: "ledger.read" },
  { href: "/terms", word: "Terms", act: "terms.read" },
];

/** Somebody who only works at dock and bench has those first, and nothing they never open. */
const WAREHOUSE = ["/dock", "/bench", "/desk"];

function sectionsFor(roles: readonly Role[], allowed: (act: Act) => boolean): Section[] {
  const open = SECTIONS.filter((s) => allowed(s.act)).map(({ href, word, also }) => ({ href, word, also }));
  if (roles.some((r) => r !== "warehouse")) return open;
  return WAREHOUSE.flatMap((href) => open.filter((s) => s.href === href));
}

export default async function DeskLayout({ children }: { children: ReactNode }) {
  const ctx = await requireStaff();
  const { name, roles } = ctx.actor;
  const { post, theme } = await person();
  const sections = sectionsFor(roles, (act) => may(ctx, act));
  return (
    <ToastProvider>
      <header className="bar">
        <Link className="brand" href={sections[0]?.href ?? "/desk"}>
          <Mark onBoard />
          Mendbay
        </Link>
        <ScanLine />
        <Sections sections={sections} />
        <PersonMenu name={name} post={post ?? roles.join(", ")} theme={theme} />
      </header>
      {children}
    </ToastProvider>
  );
}
