/** Ideal voltage source (IEC 60617: circle, the wire passing through), in a vertical wire. */
export function VoltageSource({ x, y, r = 13 }: { x: number; y: number; r?: number }) {
  return (
    <>
      <circle className="body" cx={x} cy={y} r={r} />
      <path className="wire" d={`M${x} ${y - r}V${y + r}`} />
    </>
  );
}

/** Ideal current source (IEC 60617: circle, a line across the wire), in a vertical wire. */
export function CurrentSource({ x, y, r = 13 }: { x: number; y: number; r?: number }) {
  return (
    <>
      <circle className="body" cx={x} cy={y} r={r} />
      <path className="wire" d={`M${x - r} ${y}H${x + r}`} />
    </>
  );
}
