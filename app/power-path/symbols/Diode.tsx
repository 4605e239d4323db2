/**
 * Semiconductor diode (IEC 60617: open triangle, bar at its tip, the wire passing through),
 * centred at x, y. It points upwards, or along `angle` degrees clockwise from there.
 */
export function Diode({
  x,
  y,
  size = 9,
  angle = 0,
}: {
  x: number;
  y: number;
  size?: number;
  angle?: number;
}) {
  const h = size / 2;
  return (
    <g transform={angle === 0 ? undefined : `rotate(${angle} ${x} ${y})`}>
      <path
        className="body"
        d={`M${x - h} ${y + h}h${size}l${-h} ${-size}zM${x - h} ${y - h}h${size}`}
      />
      <path className="wire" d={`M${x} ${y + h}v${-size}`} />
    </g>
  );
}
