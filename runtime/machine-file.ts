/**
 * The machine file: what `tocsin emit --as json` writes and every detector reads. `format.md` describes it field by field,
 * `machine.schema.json` is the same for validators. Written by the compiler, trusted by nobody: `open.ts` checks every
 * index and number before a detector uses them.
 */

export const MACHINE_FORMAT = "tocsin-machine";
export const MACHINE_VERSION = 1;
/** A machine raises at most this many signals: signal j is bit j of a 32-bit set, and the top bit says "refused". */
export const MOST_SIGNALS = 31;
/** Most combinations of letters, so that a symbol fits 16 bits. */
export const MOST_SYMBOLS = 65536;

export type CutInFile = {
  /** The exact cut rounded once to the nearest double. */
  readonly at: number;
  /** The exact cut, as a ratio of whole numbers in decimal. */
  readonly exact: string;
  /** Which neighbouring letter has a value equal to the cut. */
  readonly owner: "below" | "above";
};

export type StatisticInFile =
  | {
      readonly name: string;
      readonly kind: "zones";
      readonly letters: readonly string[];
      readonly cuts: readonly CutInFile[];
      /** Index of the letter that stands for a missing value, or null. */
      readonly missing: number | null;
    }
  | {
      readonly name: string;
      readonly kind: "letters";
      readonly letters: readonly string[];
      /** By letter: what the data may say instead of the name, or null. */
      readonly texts: readonly (string | null)[];
      readonly missing: number | null;
    };

export type TablesInFile = {
  readonly states: number;
  readonly columns: number;
  /** By symbol: its column. The first statistic varies slowest. */
  readonly columnOf: readonly number[];
  /** `next[state * columns + column]`; state 0 is the start. */
  readonly next: readonly number[];
  /** Bit set of the signals raised, same index. */
  readonly raises: readonly number[];
  /** By state: where a broken trial leads, under `missing: "break"`, else null. */
  readonly broken: readonly number[] | null;
};

/** A condition's own small machine over the columns of `ReasonsInFile`. */
export type AutomatonInFile = {
  readonly states: number;
  readonly next: readonly number[];
  /** 1 where the transition completes the condition, same index. */
  readonly completes: readonly number[];
};

/** How the conditions of a signal combine: an index into its `conditions`, or an operator over formulas. */
export type FormulaInFile =
  | number
  | { readonly and: readonly FormulaInFile[] }
  | { readonly or: readonly FormulaInFile[] }
  | { readonly not: FormulaInFile };

export type SignalReasonsInFile = {
  /** Rules by name, conditions without a name by their canonical text; each has a memory of its own. */
  readonly conditions: readonly { readonly name: string; readonly automaton: number }[];
  readonly formula: FormulaInFile;
  readonly response: "own" | "restart" | "continue";
  readonly quiet: null | { readonly for: number } | { readonly until: number };
};

/** What a detector needs to say why a signal was raised: the policy in its parts, each a small machine. */
export type ReasonsInFile = {
  readonly columns: number;
  /** By symbol; finer than the columns of the tables where a condition tells letters apart that the whole does not. */
  readonly columnOf: readonly number[];
  readonly automata: readonly AutomatonInFile[];
  readonly signals: readonly SignalReasonsInFile[];
  /** By column: 1 where memory clears before the trial is read. */
  readonly clearBefore: readonly number[];
  /** Automata whose completion clears everything after the trial. */
  readonly clearAfter: readonly number[];
  /** Trials in a batch, or null. */
  readonly block: number | null;
};

export type MachineFile = {
  readonly format: typeof MACHINE_FORMAT;
  readonly version: typeof MACHINE_VERSION;
  readonly policy: {
    readonly name: string;
    readonly title: string | null;
    /** SHA-256 of the canonical text of the policy and its libraries, in hexadecimal. */
    readonly source: string;
  };
  /** SHA-256 of everything below, in hexadecimal: snapshots carry it. */
  readonly id: string;
  readonly statistics: readonly StatisticInFile[];
  readonly missing: "refuse" | "skip" | "break";
  readonly signals: readonly string[];
  readonly tables: TablesInFile;
  readonly reasons: ReasonsInFile;
};
