/** What is drawn outside React: once per frame at most, and only what differs. */
import { type RefObject, useEffect, useRef } from 'react';
import { subscribe } from './columns.ts';
import { onThemeChange } from './paint.ts';

/** Why a frame is drawn, besides new samples: both may hold at once. */
export interface Change {
  readonly sized: boolean;
  readonly themed: boolean;
}

/**
 * Call `draw` in the next animation frame after the columns change, `host` changes its size or the
 * theme changes; however many changes come, once. The first frame counts as sized and themed.
 * @returns a call that asks for a frame for another reason
 */
export function useFrame(
  host: RefObject<HTMLElement | null>,
  draw: (change: Change) => void,
): () => void {
  const latest = useRef(draw);
  const request = useRef<() => void>(() => {});
  useEffect(() => {
    latest.current = draw;
  });
  useEffect(() => {
    let frame = 0;
    let sized = true;
    let themed = true;
    const commit = () => {
      frame = 0;
      const change = { sized, themed };
      sized = false;
      themed = false;
      latest.current(change);
    };
    const ask = () => {
      if (frame === 0) frame = requestAnimationFrame(commit);
    };
    request.current = ask;
    const observer = new ResizeObserver(() => {
      sized = true;
      ask();
    });
    if (host.current) observer.observe(host.current);
    const stopTheme = onThemeChange(() => {
      themed = true;
      ask();
    });
    const stopColumns = subscribe(ask);
    // The pixel ratio changes when the window moves to another screen or the page is zoomed.
    const zoom = () => {
      sized = true;
      ask();
    };
    addEventListener('resize', zoom);
    // The first at once: the plots get their heights before what lies below them is seen.
    commit();
    return () => {
      cancelAnimationFrame(frame);
      observer.disconnect();
      stopTheme();
      stopColumns();
      removeEventListener('resize', zoom);
      request.current = () => {};
    };
  }, [host]);
  return useRef(() => request.current()).current;
}

/** Set an element's text if it differs: the same text again would still cost a layout. */
export function writeText(element: HTMLElement | null | undefined, text: string): void {
  if (element && element.textContent !== text) element.textContent = text;
}
