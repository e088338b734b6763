"use client";
import { usePathname } from "next/navigation";
import { useEffect, useRef } from "react";
import { chooseTheme, leave } from "@/app/(door)/actions";
import { Button } from "@/components/ui/button";

const THEMES = [
  { value: "system", word: "As the system" },
  { value: "light", word: "Light" },
  { value: "dark", word: "Dark" },
] as const;

/** Name and post; behind them the theme and the way out. Plain forms: it works before any script. */
export function PersonMenu({
  name,
  post,
  theme,
}: {
  name: string;
  post: string;
  theme: (typeof THEMES)[number]["value"];
}) {
  const box = useRef<HTMLDetailsElement>(null);
  const path = usePathname();
  useEffect(() => {
    const shut = (event: Event) => {
      const details = box.current;
      if (!details?.open) return;
      if (event instanceof KeyboardEvent) {
        if (event.key !== "Escape") return;
        details.open = false;
        details.querySelector("summary")?.focus();
      } else if (event.target instanceof Node && !details.contains(event.target)) {
        details.open = false;
      }
    };
    document.addEventListener("keydown", shut);
    document.addEventListener("pointerdown", shut);
    return () => {
      document.removeEventListener("keydown", shut);
      document.removeEventListener("pointerdown", shut);
    };
  }, []);

  return (
    <details className="who" ref={box}>
      <summary>
        {name}
        <br />
        <span>{post}</span>
      </summary>
      <div className="whomenu notch">
        <form action={chooseTheme}>
          <input type="hidden" name="back" value={path} />
          <p className="lab" id="theme-choice">
            Light or dark
          </p>
          <div className="tri" role="group" aria-labelledby="theme-choice">
            {THEMES.map((t) => (
              <button
                key={t.value}
                type="submit"
                name="theme"
                value={t.value}
                aria-pressed={t.value === theme}
              >
                {t.word}
              </button>
            ))}
          </div>
        </form>
        <form action={leave} className="mt-3">
          <Button kind="line" className="w-full">
            Sign out
          </Button>
        </form>
      </div>
    </details>
  );
}
