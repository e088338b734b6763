export type GlyphState = "covered" | "doa" | "part" | "ended" | "person" | "none";

const FILL: Record<GlyphState, string> = {
  covered: "g",
  doa: "g doa",
  part: "g mix",
  ended: "g end",
  person: "g per",
  none: "g na",
};

const WORDS: Record<GlyphState, string> = {
  covered: "covered",
  doa: "DOA window",
  part: "part covered",
  ended: "cover ended",
  person: "needs a person",
  none: "no unit yet",
};

/** Cover as a fill and a word. `words` may say it shorter or closer; there is no glyph without words. */
export function CoverGlyph({ state, words }: { state: GlyphState; words?: string }) {
  return (
    <span className="cov">
      <i className={FILL[state]} aria-hidden="true" />
      {words ?? WORDS[state]}
    </span>
  );
}

/** What the fills mean, for the foot of a ruler or tree. */
export function CoverLegend({ states }: { states: readonly GlyphState[] }) {
  return (
    <div className="legend">
      {states.map((s) => (
        <CoverGlyph key={s} state={s} />
      ))}
    </div>
  );
}
