/** What went wrong, as data: no failure of a design or of the engine is ever thrown. */

/** A failure with its place. */
export interface Problem {
  /**
   * Where: a path of the design document ("bridge.deadTime", "overrides.3.ratio"),
   * or '' when it concerns the design as a whole.
   */
  readonly place: string;
  /** One or more whole sentences that name the value, its limit and why. */
  readonly message: string;
}

/** A result, or the problem that prevents it. */
export type Outcome<T> =
  | { readonly ok: true; readonly value: T }
  | { readonly ok: false; readonly problem: Problem };
