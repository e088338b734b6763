import type { Metadata, Viewport } from "next";
import type { ReactNode } from "react";
import { person } from "./_look/person";
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

export default async function Root({ children }: { children: ReactNode }) {
  const { theme } = await person();
  return (
    <html lang="en-US" className={faces} data-theme={theme === "system" ? undefined : theme}>
      <body>
        <a className="skip" href="#main">
          Skip to the content
        </a>
        {children}
      </body>
    </html>
  );
}
