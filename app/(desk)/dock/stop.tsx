"use client";
import { useEffect, useRef, type CSSProperties } from "react";
import { Button } from "@/components/ui/button";
import { characterWords, cleanScan } from "@/lib/base/serial";
import type { ScanAnswer } from "@/lib/dock/queries";

type Props = {
  wrong: Extract<ScanAnswer, { kind: "wrong" }>;
  again: () => void;
  byHand: () => void;
  aside: () => void;
  busy: boolean;
};

function Serial({ text, at, mark }: { text: string; at: Set<number>; mark: "x" | "y" }) {
  return (
    <div className="ser" aria-label={[...text].join(" ")} role="img">
      {[...text].map((c, i) => (
        <span key={i} className={at.has(i) ? mark : undefined} aria-hidden="true">
          {c}
        </span>
      ))}
    </div>
  );
}

/** The page is replaced: nothing goes on until a button is pressed, and nothing has been booked. */
export function Stop({ wrong, again, byHand, aside, busy }: Props) {
  const box = useRef<HTMLDivElement>(null);
  useEffect(() => {
    box.current?.focus();
  }, []);
  const scanned = cleanScan(wrong.scanned).toUpperCase();
  const expected = wrong.verdict.expected.toUpperCase();
  const few = wrong.verdict.differences.length <= 3;
  const at = new Set(few ? wrong.verdict.differences.map((d) => d.at) : []);
  const firstDiff = wrong.verdict.differences[0];
  return (
    <main id="main">
      <div
        className="stopwrap"
        role="alertdialog"
        aria-modal="true"
        aria-labelledby="stop-h"
        aria-describedby="stop-d"
        tabIndex={-1}
        ref={box}
      >
        <div>
          <h1 id="stop-h">Stop. This is not the unit we expect.</h1>
          <p className="lead" id="stop-d">
            {wrong.verdict.headline} <span className="m">{wrong.rma.number}</span> names{" "}
            <span className="m">{wrong.verdict.expected}</span>. Look at the label itself.
          </p>
        </div>
        <div className="cmp" style={{ "--len": Math.max(scanned.length, expected.length) } as CSSProperties}>
          <span className="l">Scanned</span>
          <Serial text={scanned} at={at} mark="x" />
          <span className="say">{few && firstDiff ? characterWords(firstDiff.scanned) : ""}</span>
          <span className="l">Expected</span>
          <Serial text={expected} at={at} mark="y" />
          <span className="say">{few && firstDiff ? characterWords(firstDiff.expected) : ""}</span>
        </div>
        <p className="stopknown">
          <b className="m">{scanned}</b>{" "}
          {wrong.known
            ? `is known to us: ${wrong.known.modelName}${wrong.known.accountName ? `, sold to ${wrong.known.accountName}` : ""}${wrong.knownRma ? `, on ${wrong.knownRma}` : ", with no RMA open"}.`
            : "is not in our ledger."}{" "}
          Nothing has been booked in, and no photo has been kept.
        </p>
        <div className="acts">
          <Button huge kind="ink" type="button" onClick={again} className="grow">
            Scan the label again
          </Button>
          <Button huge kind="line" type="button" onClick={aside} aria-disabled={busy} className="grow">
            Set aside in Q-2 and tell the desk
          </Button>
          <Button huge kind="line" type="button" onClick={byHand}>
            Type it by hand
          </Button>
        </div>
      </div>
    </main>
  );
}
