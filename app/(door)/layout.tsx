import type { ReactNode } from "react";
import { Board } from "./board";

/** The tag hung on a drawn board. */
export default function DoorLayout({ children }: { children: ReactNode }) {
  return (
    <div className="board">
      <Board />
      {children}
    </div>
  );
}
