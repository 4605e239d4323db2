/**
 * Inductor or winding (IEC 60617: equal half circles), from x, y to the right, or downwards
 * when `upright`; `turns` half circles of radius `r`.
 */
export function Coil({
  x,
  y,
  turns,
  r,
  upright = false,
}: {
  x: number;
  y: number;
  turns: number;
  r: number;
  upright?: boolean;
}) {
  const arc = upright ? `a${r} ${r} 0 0 1 0 ${2 * r}` : `a${r} ${r} 0 0 1 ${2 * r} 0`;
  return <path className="symbol" d={`M${x} ${y}${arc.repeat(turns)}`} />;
}

/** The dot at the end of a winding that is positive when the primary's dotted end is. */
export function PolarityDot({ x, y }: { x: number; y: number }) {
  return <circle className="solid" cx={x} cy={y} r={1.75} />;
}
