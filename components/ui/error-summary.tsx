"use client";
import { useEffect, useRef } from "react";
import { fieldIds } from "./field";

export type SummaryItem = { field?: string; message: string };

/**
 * Says how many things stop what, links to each field, and takes focus when it appears or changes.
 * Without items it draws nothing, so that a form may always contain it.
 */
export function ErrorSummary({ title, items }: { title: string; items: readonly SummaryItem[] }) {
  const box = useRef<HTMLDivElement>(null);
  const key = items.map((i) => `${i.field ?? ""}:${i.message}`).join("\n");
  useEffect(() => {
    if (key) box.current?.focus();
  }, [key]);
  if (items.length === 0) return null;

  const toField = (event: React.MouseEvent, field: string) => {
    const { id } = fieldIds(field);
    // A field may carry our id, or be found by its name where a screen draws its own.
    const target = document.getElementById(id) ?? document.getElementsByName(field)[0];
    if (!target) return;
    event.preventDefault();
    target.scrollIntoView({ block: "center" });
    target.focus({ preventScroll: true });
  };

  return (
    <div className="esum notch" role="alert" tabIndex={-1} ref={box}>
      <h2>{title}</h2>
      <ul>
        {items.map((item) => (
          <li key={`${item.field ?? ""}:${item.message}`}>
            {item.field ? (
              <a href={`#${fieldIds(item.field).id}`} onClick={(e) => toField(e, item.field ?? "")}>
                {item.message}
              </a>
            ) : (
              item.message
            )}
          </li>
        ))}
      </ul>
    </div>
  );
}
