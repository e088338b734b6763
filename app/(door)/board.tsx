const SOCKETS = [
  { x: 70, y: 90, name: "S1" },
  { x: 1090, y: 90, name: "S2" },
  { x: 70, y: 520, name: "S3" },
  { x: 1090, y: 520, name: "S4" },
];
const COMBS = [90, 245, 520, 675].flatMap((y) => [380, 978].map((x) => ({ x, y })));

/** A four-socket board in silkscreen lines: sockets with their corner mark, memory slots, a bus. */
export function Board() {
  return (
    <svg className="silk" viewBox="0 0 1440 900" preserveAspectRatio="xMidYMid slice" aria-hidden="true">
      {SOCKETS.map((s) => (
        <g key={s.name}>
          <path d={`M${s.x} ${s.y}h280v290h-280z M${s.x + 18} ${s.y + 18}h244v254h-244z`} />
          <path d={`M${s.x} ${s.y}h22l-22 22z`} fill="currentColor" stroke="none" className="silk-fill" />
          {Array.from({ length: 16 }, (_, i) => (
            <path key={i} d={`M${s.x + 28} ${s.y + 32 + i * 14}h224`} strokeDasharray="5 9" strokeWidth="1" />
          ))}
          <text x={s.x} y={s.y - 12} fontSize="14" stroke="none" className="silk-fill" letterSpacing="0.5">
            {s.name}
          </text>
        </g>
      ))}
      {COMBS.map((c, i) => (
        <path
          key={i}
          strokeWidth="4"
          d={Array.from({ length: 6 }, (_, n) => `M${c.x + 2 + n * 15.4} ${c.y}v136`).join("")}
        />
      ))}
      <path d={Array.from({ length: 8 }, (_, n) => `M350 ${410 + n * 10}h740`).join("")} />
      {[90, 1110].map((x) =>
        Array.from({ length: 14 }, (_, n) => <circle key={`${x}-${n}`} cx={x + n * 19} cy={450} r="4" />),
      )}
      <path strokeWidth="6" d={Array.from({ length: 52 }, (_, n) => `M${470 + n * 10} 868v40`).join("")} />
    </svg>
  );
}
