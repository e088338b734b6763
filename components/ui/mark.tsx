/** The mark: a bay with two rails, open at its notched corner, gold in the notch. */
export function Mark({ size = 22, onBoard }: { size?: number; onBoard?: boolean }) {
  const line = onBoard ? "var(--silk)" : "var(--ink)";
  return (
    <svg viewBox="0 0 22 22" width={size} height={size} aria-hidden="true">
      <path d="M7.5 1.5H20.5V20.5H1.5V7.5" fill="none" stroke={line} strokeWidth="1.75" />
      <path d="M1 1H6L1 6Z" fill={onBoard ? "var(--gold-board)" : "var(--gold)"} />
      <path d="M7 8.5h13M7 13.5h13" stroke={line} strokeWidth="1.5" />
    </svg>
  );
}
