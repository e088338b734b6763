"use client";
import { createContext, useCallback, useContext, useEffect, useMemo, useState, type ReactNode } from "react";

type Offer = { label: string; run: () => void };
type Toast = { id: number; words: ReactNode; offer?: Offer; seconds: number };
type Say = (words: ReactNode, offer?: Offer) => void;

const STAYS = 20;
const Speak = createContext<Say | null>(null);

/** Says what was done, and may offer to take it back, for twenty seconds or until it is put away. */
export function useToast(): Say {
  const say = useContext(Speak);
  if (!say) throw new Error("useToast needs a ToastProvider above it.");
  return say;
}

export function ToastProvider({ children }: { children: ReactNode }) {
  const [toasts, setToasts] = useState<Toast[]>([]);
  const say = useCallback<Say>((words, offer) => {
    setToasts((now) => {
      const id = now.reduce((most, t) => Math.max(most, t.id), 0) + 1;
      return [...now.slice(-2), { id, words, offer, seconds: STAYS }];
    });
  }, []);
  const drop = (id: number) => setToasts((now) => now.filter((t) => t.id !== id));

  const some = toasts.length > 0;
  useEffect(() => {
    if (!some) return;
    const tick = setInterval(() => {
      setToasts((now) => now.map((t) => ({ ...t, seconds: t.seconds - 1 })).filter((t) => t.seconds > 0));
    }, 1000);
    return () => clearInterval(tick);
  }, [some]);

  const value = useMemo(() => say, [say]);
  return (
    <Speak.Provider value={value}>
      {children}
      <div className="toasts" role="status">
        {toasts.map((t) => (
          <div className="toast" key={t.id}>
            <span>{t.words}</span>
            {t.offer ? (
              <button
                type="button"
                onClick={() => {
                  t.offer?.run();
                  drop(t.id);
                }}
              >
                {t.offer.label}
                {/* The count is for the eye; a reader hears the words once, not every second. */}
                <span aria-hidden="true">, {t.seconds} s</span>
              </button>
            ) : null}
            <button type="button" onClick={() => drop(t.id)}>
              Put away
            </button>
          </div>
        ))}
      </div>
    </Speak.Provider>
  );
}
