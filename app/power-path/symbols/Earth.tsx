/** Earth (IEC 60617), hanging from x, y on a wire `drop` long. */
export function Earth({
  x,
  y,
  drop = 8,
  movable = false,
}: {
  x: number;
  y: number;
  drop?: number;
  /** Drawn in the accent, because a hand may move it. */
  movable?: boolean;
}) {
  const t = y + drop;
  return (
    <path
      className={movable ? 'hand-line' : 'wire'}
      d={`M${x} ${y}V${t}M${x - 8} ${t}h16M${x - 5} ${t + 4}h10M${x - 2} ${t + 8}h4`}
    />
  );
}
