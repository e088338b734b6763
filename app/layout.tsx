import type { Metadata, Viewport } from "next";
import { cookies } from "next/headers";
import type { ReactNode } from "react";
import { faces } from "./fonts";
import "./globals.css";

// Every page carries a nonce and is for one person: nothing may be prerendered.
export const dynamic = "force-dynamic";

export const metadata: Metadata = {
  title: { default: "Mendbay", template: "%s · Mendbay" },
  description: "The warranty and RMA support desk",
  robots: { index: false, follow: false },
};

export const viewport: Viewport = {
  width: "device-width",
  initialScale: 1,
  colorScheme: "light dark",
  themeColor: [
    { media: "(prefers-color-scheme: light)", color: "#0c3a2c" },
    { media: "(prefers-color-scheme: dark)", color: "#0a0d0b" },
  ],
};

/** Light, dark, or as the system says: what the person chose, kept in a cookie so that the first paint is right. */
async function theme(): Promise<"light" | "dark" | undefined> {
  const kept = (await cookies()).get("theme")?.value;
  return kept === "light" || kept === "dark" ? kept : undefined;
}

export default async function Root({ children }: { children: ReactNode }) {
  return (
    <html lang="en-US" className={faces} data-theme={await theme()}>
      <body>
        <a className="skip" href="#main">
          Skip to the content
        </a>
        {children}
      </body>
    </html>
  );
}
