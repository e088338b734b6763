import type { ReactNode } from "react";
import { Hazard, type HazardDrawing } from "./drawings";

export type CautionItem = { drawing: HazardDrawing; title: ReactNode; detail?: ReactNode };

/**
 * Cautions, read every time and so not shouted: drawing, order in bold, detail. It stands before
 * hands go in, never after. Narrow pages stack it with `column`.
 */
export function CautionStrip({
  items,
  column,
  label = "Cautions",
}: {
  items: readonly CautionItem[];
  column?: boolean;
  label?: string;
}) {
  return (
    <ul className={column ? "caution col" : "caution"} aria-label={label}>
      {items.map((item, i) => (
        <li key={i}>
          <Hazard drawing={item.drawing} />
          <div>
            <b>{item.title}</b>
            {item.detail ? <span className="s">{item.detail}</span> : null}
          </div>
        </li>
      ))}
    </ul>
  );
}
