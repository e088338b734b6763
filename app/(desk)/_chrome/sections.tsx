"use client";
import Link from "next/link";
import { usePathname } from "next/navigation";
import { Pin } from "@/components/ui/pin";

export type Section = { href: string; word: string; also?: string[] };

const within = (path: string, root: string) => path === root || path.startsWith(`${root}/`);

/** Links to the sections a person works in; the one they are in is cut out of the bar, with pin 1. */
export function Sections({ sections }: { sections: readonly Section[] }) {
  const path = usePathname();
  return (
    <nav aria-label="Sections">
      {sections.map((s) => {
        const current = [s.href, ...(s.also ?? [])].some((root) => within(path, root));
        return (
          <Link key={s.href} href={s.href} aria-current={current ? "page" : undefined}>
            {current ? <Pin /> : null}
            {s.word}
          </Link>
        );
      })}
    </nav>
  );
}
