/** Distance between the plates of a drawn capacitor; the wires end at them. */
export const PLATE_GAP = 4;

/** Capacitor (IEC 60617: two plates), centred at x, y; `upright` stands in a vertical wire. */
export function Capacitor({
  x,
  y,
  plate = 16,
  upright = false,
}: {
  x: number;
  y: number;
  plate?: number;
  upright?: boolean;
}) {
  const g = PLATE_GAP / 2;
  const d = upright
    ? `M${x - plate / 2} ${y - g}h${plate}M${x - plate / 2} ${y + g}h${plate}`
    : `M${x - g} ${y - plate / 2}v${plate}M${x + g} ${y - plate / 2}v${plate}`;
  return <path className="plate" d={d} />;
}
