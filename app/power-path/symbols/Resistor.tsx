/** Resistor (IEC 60617: rectangle), centred at x, y. */
export function Resistor({
  x,
  y,
  length = 24,
  breadth = 8,
  upright = false,
}: {
  x: number;
  y: number;
  length?: number;
  breadth?: number;
  upright?: boolean;
}) {
  const [w, h] = upright ? [breadth, length] : [length, breadth];
  return <rect className="body" x={x - w / 2} y={y - h / 2} width={w} height={h} />;
}
