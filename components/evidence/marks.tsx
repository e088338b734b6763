/** Evidence asked for and come in: one mark each, and the count in figures. */
export function EvidenceMarks({ came, wanted }: { came: number; wanted: number }) {
  const total = Math.max(came, wanted);
  if (total === 0) return <span className="q">–</span>;
  return (
    <span className="ev">
      {Array.from({ length: Math.min(total, 6) }, (_, i) => (
        <i key={i} className={i < came ? "y" : undefined} aria-hidden="true" />
      ))}
      <span>
        {came}/{total}
        <span className="vh"> of the evidence asked for</span>
      </span>
    </span>
  );
}
