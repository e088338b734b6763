import localFont from "next/font/local";

// Two faces that tell 0 from O, 1 from l and I, 8 from B. The extended letters have their own files,
// fetched only by pages that show such a letter. next/font reads these calls at build time, so every
// value has to stand here as it is.

const ui = localFont({
  src: "../fonts/atkinson-hyperlegible-next-latin-wght-normal.woff2",
  weight: "200 800",
  display: "swap",
  variable: "--face-ui",
});

const uiExtended = localFont({
  src: "../fonts/atkinson-hyperlegible-next-latin-ext-wght-normal.woff2",
  weight: "200 800",
  display: "swap",
  preload: false,
  adjustFontFallback: false,
  variable: "--face-ui-ext",
  declarations: [
    {
      prop: "unicode-range",
      value:
        "U+0100-02BA, U+02BD-02C5, U+02C7-02CC, U+02CE-02D7, U+02DD-02FF, U+1D00-1DBF, U+1E00-1E9F, U+1EF2-1EFF, U+2020, U+20A0-20AB, U+20AD-20C0, U+2113, U+2C60-2C7F, U+A720-A7FF",
    },
  ],
});

const mono = localFont({
  src: "../fonts/atkinson-hyperlegible-mono-latin-wght-normal.woff2",
  weight: "200 800",
  display: "swap",
  variable: "--face-mono",
  adjustFontFallback: false,
});

const monoExtended = localFont({
  src: "../fonts/atkinson-hyperlegible-mono-latin-ext-wght-normal.woff2",
  weight: "200 800",
  display: "swap",
  preload: false,
  adjustFontFallback: false,
  variable: "--face-mono-ext",
  declarations: [
    { prop: "unicode-range", value: "U+0100-02BA, U+02BD-02C5, U+2020, U+20A0-20AB, U+1E00-1E9F" },
  ],
});

/** Class names that bring the four families' variables to html; tokens.css joins them. */
export const faces = [ui, uiExtended, mono, monoExtended].map((face) => face.variable).join(" ");
