/** Conductors and what is put on them: wires, joints, terminals, arrowheads. */

/** A conductor along an SVG path. */
export function Wire({ d }: { d: string }) {
  return <path className="wire" d={d} />;
}

/** A joint where wires could be misread (IEC 60617: connection). */
export function Joint({ x, y }: { x: number; y: number }) {
  return <circle className="solid" cx={x} cy={y} r={2.25} />;
}

/** A terminal. */
export function Terminal({ x, y }: { x: number; y: number }) {
  return <circle className="body" cx={x} cy={y} r={3} />;
}

/** A static arrowhead to the right, on a wire: the direction in which energy flows. */
export function Arrow({ x, y }: { x: number; y: number }) {
  return <path className="solid" d={`M${x} ${y}l-7 -3v6z`} />;
}
