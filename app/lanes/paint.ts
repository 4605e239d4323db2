/** The page's colours, read for what is drawn on a canvas, where style sheets do not reach. */

/** The signals that have a colour of their own. */
export type Colour = 'bridge' | 'primary' | 'flux' | 'winding' | 'output' | 'ripple';

const PAINTS = {
  bridge: '--sig-bridge',
  primary: '--sig-primary',
  flux: '--sig-flux',
  winding: '--sig-winding',
  output: '--sig-output',
  ripple: '--sig-ripple',
  paper: '--paper',
  ink: '--ink',
  secondInk: '--ink-2',
  thirdInk: '--ink-3',
  rule: '--rule',
  grid: '--grid',
} as const;

/** Every colour a canvas uses, and the typeface of its figures. */
export type Paint = Readonly<Record<keyof typeof PAINTS, string>> & { readonly font: string };

/** The colours in force now. */
export function readPaint(): Paint {
  const style = getComputedStyle(document.documentElement);
  const read = (token: string) => style.getPropertyValue(token).trim();
  const colours = Object.fromEntries(
    Object.entries(PAINTS).map(([name, token]) => [name, read(token)]),
  ) as Record<keyof typeof PAINTS, string>;
  return { ...colours, font: `12px ${read('--sans')}` };
}

/** Be told when the theme changes; returns the call that ends it. */
export function onThemeChange(listener: () => void): () => void {
  const observer = new MutationObserver(listener);
  observer.observe(document.documentElement, { attributeFilter: ['data-theme'] });
  return () => observer.disconnect();
}
