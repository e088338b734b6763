"use client";
import { useEffect, useId, useRef, type ReactNode } from "react";

/**
 * A question that stands before everything else. Says what follows; the safe choice takes focus
 * (mark it with `data-safe`, else the last button does). Escape means the safe choice.
 */
export function Dialog({
  open,
  title,
  onClose,
  children,
  actions,
}: {
  open: boolean;
  title: ReactNode;
  onClose: () => void;
  children?: ReactNode;
  actions: ReactNode;
}) {
  const box = useRef<HTMLDialogElement>(null);
  const id = useId();
  useEffect(() => {
    const dialog = box.current;
    if (!dialog) return;
    if (!open) {
      if (dialog.open) dialog.close();
      return;
    }
    if (!dialog.open) dialog.showModal();
    const buttons = dialog.querySelectorAll<HTMLElement>("button, a[href]");
    (dialog.querySelector<HTMLElement>("[data-safe]") ?? buttons[buttons.length - 1])?.focus();
  }, [open]);

  return (
    <dialog ref={box} className="dlg" aria-labelledby={id} onClose={() => open && onClose()}>
      {open ? (
        <div className="dialog notch">
          <h2 id={id}>{title}</h2>
          {children}
          <div className="acts">{actions}</div>
        </div>
      ) : null}
    </dialog>
  );
}
