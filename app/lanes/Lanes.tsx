/**
 * The lanes: history strip, then plots over one time axis with one cursor. React lays them out
 * once; samples reach the plots frame by frame without it.
 */
import 'uplot/dist/uPlot.min.css';
import './lanes.css';
import { type KeyboardEvent, type PointerEvent, useEffect, useRef, useState } from 'react';
import { formatQuantity } from '../../sim-core/index.ts';
import { useDocument } from '../document/store.ts';
import { figureText } from '../figure.ts';
import { useRun } from '../run/store.ts';
import { axisUnit } from './axis.ts';
import { readDetail, subscribe } from './columns.ts';
import { useFrame, writeText } from './frame.ts';
import { History } from './History.tsx';
import { Lane, type LaneHandle } from './Lane.tsx';
import { readPaint } from './paint.ts';
import { indexAt, LANES, meanOver, nameOf, samplesOf } from './traces.ts';

/** Samples that Shift with an arrow key passes over. */
const COARSE_STEP = 10;

/** Where the cursor stands at first, as a share of the window. */
const FIRST_CURSOR = 0.25;

/** How much taller the plots are on screens at least this wide (CSS pixels), the widest first. */
const STRETCHES = [
  { from: 1600, stretch: 1.5 },
  { from: 900, stretch: 1.25 },
] as const;

/** Quiet time after which the table for screen readers follows the plots, milliseconds. */
const TABLE_DELAY = 500;

/** A length on an element's style, CSS pixels. */
const lengthOf = (style: CSSStyleDeclaration, name: string) =>
  Number.parseFloat(style.getPropertyValue(name));

/** A time with as many decimals as a window of this span calls for, and its unit: "83.900", "ms". */
function stamp(time: number, span: number, end: number): { text: string; unit: string } {
  const { symbol, size } = axisUnit(end > 0 ? end : 1, 's');
  const decimals = Math.ceil(Math.log10(size / (span > 0 ? span : size)) + 1.65);
  return { text: (time / size).toFixed(Math.min(Math.max(decimals, 0), 9)), unit: symbol };
}

export function Lanes() {
  const knee = useDocument(({ design }) => design.transformer.kneeFluxLinkage);
  const sections = useDocument(({ design }) => design.sections.count);
  const section = Math.min(
    useRun((run) => run.section),
    sections,
  );
  const root = useRef<HTMLDivElement>(null);
  const handles = useRef<(LaneHandle | null)[]>([]);
  const stretchOfWindow = useRef<HTMLElement>(null);
  const start = useRef<HTMLElement>(null);
  const cursorTime = useRef<HTMLOutputElement>(null);
  const flag = useRef<HTMLDivElement>(null);
  const spoken = useRef<HTMLParagraphElement>(null);
  /** Share of the window, so that the cursor keeps its phase; null while hidden. */
  const cursor = useRef<number | null>(FIRST_CURSOR);

  const eachLane = (act: (lane: LaneHandle) => void) => {
    for (const lane of handles.current) if (lane) act(lane);
  };

  /** The plotting area, the same in every lane: its left edge in the stack and its width. */
  const plotArea = () => {
    const host = root.current?.querySelector<HTMLElement>('.lane-plot');
    if (!host || !root.current) return null;
    const style = getComputedStyle(root.current);
    const leftRoom = lengthOf(style, '--left-room');
    const rightRoom = lengthOf(style, '--right-room');
    const box = host.getBoundingClientRect();
    return {
      left: box.left + leftRoom,
      width: box.width - leftRoom - rightRoom,
      leftRoom,
      rightRoom,
      box,
    };
  };

  /** Put the cursor's line and the values at it where they belong; the values in words. */
  const placeCursor = (): string => {
    const detail = readDetail();
    const at = cursor.current;
    const known = detail !== null && detail.time.length > 1;
    const shown = at !== null && known;
    const place = String(at ?? 0);
    // Setting an inherited property, even to what it was, may restyle everything below.
    if (root.current && root.current.style.getPropertyValue('--cursor') !== place) {
      root.current.style.setProperty('--cursor', place);
    }
    root.current?.classList.toggle('cursor-hidden', !shown);
    if (!shown) {
      writeText(cursorTime.current, '');
      flag.current?.setAttribute('aria-valuenow', '0');
      flag.current?.setAttribute('aria-valuetext', 'hidden');
      eachLane((lane) => lane.readAt(null));
      return '';
    }
    const first = detail.time[0];
    const span = detail.time[detail.time.length - 1] - first;
    const words: string[] = [figureText(at * span, 's', 4)];
    writeText(cursorTime.current, words[0]);
    flag.current?.setAttribute('aria-valuenow', String(Math.round(at * 1000) / 10));
    flag.current?.setAttribute('aria-valuetext', words[0]);
    eachLane((lane) => {
      for (const { name, text } of lane.readAt(first + at * span)) {
        if (text !== '') words.push(`${name} ${text}`);
      }
    });
    return words.join('; ');
  };

  const request = useFrame(root, ({ sized, themed }) => {
    if (themed) {
      const paint = readPaint();
      eachLane((lane) => lane.repaint(paint));
    }
    const area = sized ? plotArea() : null;
    if (area) {
      const frame = {
        width: area.box.width,
        leftRoom: area.leftRoom,
        rightRoom: area.rightRoom,
        stretch: STRETCHES.find(({ from }) => innerWidth >= from)?.stretch ?? 1,
      };
      eachLane((lane) => lane.resize(frame));
    }
    const detail = readDetail();
    eachLane((lane) => lane.draw(detail, section, knee));
    if (detail && detail.time.length > 1) {
      const first = detail.time[0];
      const last = detail.time[detail.time.length - 1];
      const from = stamp(first, last - first, last);
      const to = stamp(last, last - first, last);
      writeText(stretchOfWindow.current, `${from.text} to ${to.text} ${to.unit}`);
      writeText(
        start.current,
        `Time from ${from.text} ${from.unit}, ${axisUnit(last - first, 's').symbol}`,
      );
    } else {
      writeText(stretchOfWindow.current, 'no drive period done yet');
      writeText(start.current, '');
    }
    placeCursor();
  });

  // Another section or knee is drawn at once, even when no samples come any more.
  // biome-ignore lint/correctness/useExhaustiveDependencies: the frame reads both when it draws
  useEffect(request, [request, section, knee]);

  const moveTo = (share: number | null) => {
    cursor.current = share === null ? null : Math.min(Math.max(share, 0), 1);
    return placeCursor();
  };

  const onPointer = (event: PointerEvent<HTMLDivElement>) => {
    const begins = event.type === 'pointerdown';
    const handle = (event.target as Element).closest('.lane-plot, .cursor-flag');
    if (begins ? handle === null || event.button !== 0 : !event.buttons) return;
    if (begins) {
      event.currentTarget.setPointerCapture(event.pointerId);
      flag.current?.focus({ preventScroll: true });
      // Else the press would take the focus away again.
      event.preventDefault();
    } else if (!event.currentTarget.hasPointerCapture(event.pointerId)) return;
    const area = plotArea();
    if (area) moveTo((event.clientX - area.left) / area.width);
  };

  const onKey = (event: KeyboardEvent) => {
    const detail = readDetail();
    if (!detail || detail.time.length < 2) return;
    const { time } = detail;
    const last = time.length - 1;
    const span = time[last] - time[0];
    const wanted = time[0] + (cursor.current ?? 0) * span;
    const before = indexAt(time, wanted);
    const nearest =
      before < last && time[before + 1] - wanted < wanted - time[before] ? before + 1 : before;
    const step = event.shiftKey ? COARSE_STEP : 1;
    const moves: Record<string, number> = {
      ArrowLeft: nearest - step,
      ArrowDown: nearest - step,
      ArrowRight: nearest + step,
      ArrowUp: nearest + step,
      Home: 0,
      End: last,
    };
    if (event.key === 'Escape') {
      moveTo(null);
      writeText(spoken.current, 'Cursor hidden');
    } else if (Object.hasOwn(moves, event.key)) {
      const index = Math.min(Math.max(moves[event.key], 0), last);
      writeText(spoken.current, moveTo((time[index] - time[0]) / span));
    } else return;
    event.preventDefault();
  };

  const notes: Record<string, string | null> = {
    flux: knee === null ? 'linear core' : `saturates at ${formatQuantity(knee, 'Wb')}`,
  };

  return (
    <section
      className="lanes"
      aria-label="Lanes"
      ref={root}
      onPointerDown={onPointer}
      onPointerMove={onPointer}
    >
      <History />
      <div className="lanes-head">
        <div className="lanes-window">
          <b>Detail</b> <span ref={stretchOfWindow} />
        </div>
        <div className="cursor-track">
          <div
            className="cursor-flag"
            role="slider"
            tabIndex={0}
            aria-label="Cursor, share of the window"
            aria-valuemin={0}
            aria-valuemax={100}
            aria-valuenow={FIRST_CURSOR * 100}
            ref={flag}
            onKeyDown={onKey}
          >
            <svg width="18" height="16" aria-hidden="true">
              <path d="M1 1h16v9l-8 5l-8 -5z" />
            </svg>
          </div>
        </div>
        <div className="cursor-time">
          <span>Cursor</span>
          <output aria-live="off" ref={cursorTime} />
        </div>
      </div>
      <div className="lanes-stack">
        {LANES.map((words, i) => (
          <Lane
            key={words.name}
            words={words}
            timed={i === LANES.length - 1}
            section={section}
            ref={(handle) => {
              handles.current[i] = handle;
            }}
            heading={words.ofSection && <SectionChooser section={section} sections={sections} />}
            note={
              (words.note ?? notes[words.name]) && (
                <div className="lane-note">{words.note ?? notes[words.name]}</div>
              )
            }
          />
        ))}
        <div className="cursor-line-track" aria-hidden="true">
          <div className="cursor-line" />
        </div>
      </div>
      <div className="lanes-foot">
        <span ref={start} />
      </div>
      <p className="visually-hidden" aria-live="polite" ref={spoken} />
      <WindowTable section={section} />
    </section>
  );
}

/** Choice of the section whose winding is shown; the session watches it in the run store. */
function SectionChooser({ section, sections }: { section: number; sections: number }) {
  return (
    <label className="section-chooser">
      Section{' '}
      <select
        value={section}
        onChange={(event) => useRun.setState({ section: Number(event.target.value) })}
      >
        {Array.from({ length: sections }, (_, i) => i + 1).map((number) => (
          <option key={number} value={number}>
            {number}
          </option>
        ))}
      </select>{' '}
      winding
    </label>
  );
}

/** The window in figures, for those who cannot see the plots; follows when they are still. */
function WindowTable({ section }: { section: number }) {
  const [detail, setDetail] = useState(readDetail);
  useEffect(() => {
    let timer = 0;
    const later = () => {
      clearTimeout(timer);
      timer = window.setTimeout(() => setDetail(readDetail()), TABLE_DELAY);
    };
    const stop = subscribe(later);
    return () => {
      clearTimeout(timer);
      stop();
    };
  }, []);
  if (!detail) return null;
  return (
    // A table is never narrower than its words, so it is hidden inside something that is.
    <div className="visually-hidden">
      <table>
        <caption>Signals over the window shown in the lanes</caption>
        <thead>
          <tr>
            <th scope="col">Signal</th>
            <th scope="col">Least</th>
            <th scope="col">Mean</th>
            <th scope="col">Greatest</th>
          </tr>
        </thead>
        <tbody>
          {LANES.flatMap((lane) => lane.traces).map((trace) => {
            const samples = samplesOf(detail, trace, section);
            if (samples === null) return null;
            let least = Infinity;
            let greatest = -Infinity;
            for (const value of samples) {
              least = Math.min(least, value);
              greatest = Math.max(greatest, value);
            }
            const name = nameOf(trace, section);
            return (
              <tr key={name}>
                <th scope="row">{name}</th>
                <td>{figureText(least, trace.unit, 4)}</td>
                <td>
                  {trace.meanRemoved
                    ? 'removed'
                    : figureText(meanOver(detail.time, samples), trace.unit, 4)}
                </td>
                <td>{figureText(greatest, trace.unit, 4)}</td>
              </tr>
            );
          })}
        </tbody>
      </table>
    </div>
  );
}
