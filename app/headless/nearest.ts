/** Which names a mistyped one may have meant. */

/** Edits that turn one text into the other: Levenshtein, Sov. Phys. Dokl. 10 (1966) 707. */
function edits(a: string, b: string): number {
  let row = Array.from({ length: b.length + 1 }, (_, j) => j);
  for (let i = 1; i <= a.length; i++) {
    const next = [i];
    for (let j = 1; j <= b.length; j++) {
      const replaced = row[j - 1] + (a[i - 1] === b[j - 1] ? 0 : 1);
      next.push(Math.min(replaced, row[j] + 1, next[j - 1] + 1));
    }
    row = next;
  }
  return row[b.length];
}

/** The few names closest to `typed`, the closest first. */
export function nearestNames(typed: string, names: readonly string[]): readonly string[] {
  const bounded = typed.slice(0, 80).toLowerCase();
  return names
    .map((name) => ({ name, distance: edits(bounded, name.toLowerCase()) }))
    .sort((a, b) => a.distance - b.distance)
    .slice(0, 3)
    .map(({ name }) => name);
}
