import { afterEach, beforeEach, describe, expect, test, vi } from 'vitest';
import { setTitle, setValue } from '../../../app/document/actions.ts';
import { applyEdit, useDocument } from '../../../app/document/store.ts';
import { defaultDesign } from '../../../sim-core/design/check.ts';
import { EXAMPLES } from '../../../sim-core/design/examples.ts';

const state = () => useDocument.getState();
const turn = (frequency: number) =>
  applyEdit(setValue(state().design, 'bridge', 'frequency', frequency));
const raise = (voltage: number) =>
  applyEdit(setValue(state().design, 'supply', 'voltage', voltage));
const frequency = () => state().design.bridge.frequency;

test('the page opens with the demo', () => {
  expect(state().design).toBe(EXAMPLES[0].design);
});

describe('undo', () => {
  beforeEach(() => {
    vi.useFakeTimers();
    state().begin(defaultDesign());
  });
  afterEach(() => {
    vi.useRealTimers();
  });

  test('walks back through every step and forth again', () => {
    for (const value of [23e3, 24e3, 25e3]) {
      turn(value);
      vi.advanceTimersByTime(1000);
    }
    const seen = [frequency()];
    for (let step = 0; step < 4; step++) {
      state().undo();
      seen.push(frequency());
    }
    expect(seen).toEqual([25e3, 24e3, 23e3, 22e3, 22e3]);
    for (let step = 0; step < 4; step++) state().redo();
    expect(frequency()).toBe(25e3);
  });

  test('takes rapid turns of one value as one step', () => {
    for (let value = 23e3; value <= 30e3; value += 1e3) {
      turn(value);
      vi.advanceTimersByTime(599);
    }
    vi.advanceTimersByTime(1);
    turn(31e3);
    state().undo();
    expect(frequency()).toBe(30e3);
    state().undo();
    expect(frequency()).toBe(22e3);
    expect(state().past).toEqual([]);
  });

  test('keeps two values apart, however rapid', () => {
    turn(23e3);
    raise(300);
    turn(24e3);
    expect(state().past).toHaveLength(3);
  });

  test('begins a new step after undo', () => {
    turn(23e3);
    state().undo();
    turn(24e3);
    state().undo();
    expect(frequency()).toBe(22e3);
  });

  test('forgets what was undone once something else is done', () => {
    turn(23e3);
    state().undo();
    raise(300);
    state().redo();
    expect(frequency()).toBe(22e3);
  });

  test('brings back the design that another replaced', () => {
    turn(23e3);
    const before = state().design;
    state().edit(EXAMPLES[2].design);
    state().undo();
    expect(state().design).toBe(before);
  });

  test('is bounded, and the oldest steps go first', () => {
    for (let step = 1; step <= 500; step++) {
      turn(22e3 + step);
      vi.advanceTimersByTime(1000);
    }
    expect(state().past).toHaveLength(200);
    while (state().past.length > 0) state().undo();
    expect(frequency()).toBe(22e3 + 300);
  });

  test('has nothing to do with an edit that changes nothing or is refused', () => {
    turn(22e3);
    expect(turn(-1)).toMatch(/Drive frequency/);
    expect(applyEdit(setTitle(state().design, 'name', 7))).toMatch(/Name must be text/);
    expect(state().past).toEqual([]);
    expect(state().design).toEqual(defaultDesign());
  });
});
