import type { ReactNode } from 'react';

/** A part of the drawing whose words stand on the page as text as well: not read out twice. */
export function Silent({ children }: { children: ReactNode }) {
  // biome-ignore lint/a11y/noAriaHiddenOnFocusable: a group of a drawing takes no focus
  return <g aria-hidden="true">{children}</g>;
}
