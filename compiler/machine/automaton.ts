/**
 * The one shape of every automaton in the compiler: complete, deterministic, an output on each transition, flat arrays.
 *
 * Layout: `next[state * columns + column]` is the successor, `output` of the same index what the transition gives out
 * (0 for nothing). State 0 is the start. A column is a class of symbols that nothing tells apart; `columnOf` maps a symbol
 * to its column. In a canonical automaton states are numbered breadth-first in the order of the columns, and columns in
 * the order of their first symbols.
 */
export type Automaton = {
  readonly states: number;
  readonly columns: number;
  readonly next: Int32Array;
  readonly output: Int32Array;
};

/** The minimal machine of a policy; `output` is a bit set of signals, signal j being bit j. */
export type Machine = Automaton & {
  /** By symbol. */
  readonly columnOf: Int32Array;
  /** By state: where a broken trial leads, under `missing break`; else null. */
  readonly broken: Int32Array | null;
};

/**
 * A machine that also tells to which condition each raise is attributed: `output` indexes `attributions`, 0 being the
 * empty one. Larger than the machine, and used for the analysis of first causes only.
 */
export type AttributedMachine = Automaton & {
  readonly columnOf: Int32Array;
  readonly broken: Int32Array | null;
  readonly attributions: readonly (readonly { readonly signal: number; readonly condition: string }[])[];
};
