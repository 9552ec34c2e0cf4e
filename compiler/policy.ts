/**
 * The checked policy: every name resolved to an index, every number exact, every condition a small algebra; spans kept so
 * that later stages can point into the text. Readonly data; made by `check/`, read by everything after it.
 *
 * Trials are numbered symbols: with alphabets of 3 and 2 letters the symbol of letters (i, j) is 2 i + j, so that the first
 * declared alphabet varies slowest. A set of trials is a byte for each symbol, 1 for a member.
 */
import type Fraction from "fraction.js";
import type { Source } from "../grammar/source.ts";
import type { Span } from "../grammar/span.ts";
import type { Declaration, Expression, ProcessAt, Quoted } from "../grammar/tree.ts";

/** A number: a rational, and how far the true value may lie from it (0 for a number known exactly). */
export type Quantity = { readonly value: Fraction; readonly radius: number };

export type Cut = {
  readonly at: Quantity;
  /** Which of the two neighbouring letters owns the cut itself. */
  readonly owner: "below" | "above";
  readonly span: Span;
};

export type Letter = {
  readonly name: string;
  /** What the data may say instead of the name (`letters STAT: LETTER = "text"`). */
  readonly text: string | null;
  readonly span: Span;
};

export type Alphabet = {
  readonly name: string;
  readonly kind: "zones" | "letters";
  /** From the lowest interval to the highest, or as declared; a letter added by `missing … as` is the last. */
  readonly letters: readonly Letter[];
  /** For zones: one between each two neighbouring intervals, increasing; else empty. */
  readonly cuts: readonly Cut[];
  /** The letter that stands for a missing value, as an index into `letters`. */
  readonly missing: number | null;
  readonly span: Span;
};

/** A byte for each symbol, 1 for a member. */
export type TrialSet = Uint8Array;

export type Pattern =
  | { readonly kind: "choice"; readonly options: readonly Pattern[] }
  | { readonly kind: "sequence"; readonly items: readonly Pattern[] }
  | { readonly kind: "letters"; readonly set: TrialSet }
  | {
      readonly kind: "repeat";
      readonly least: number;
      readonly most: number | null;
      readonly operand: Pattern;
    };

/** When a condition holds at a trial: see the table of forms in `grammar/README.md`. */
export type Condition = { readonly span: Span /** Canonical text. */; readonly text: string } & (
  | { readonly kind: "set"; readonly set: TrialSet }
  | { readonly kind: "run"; readonly count: number; readonly set: TrialSet }
  | {
      readonly kind: "weakRun";
      readonly count: number;
      readonly set: TrialSet;
      readonly gap: number;
      readonly failures: TrialSet;
    }
  | { readonly kind: "scan"; readonly count: number; readonly window: number; readonly set: TrialSet }
  | { readonly kind: "pattern"; readonly pattern: Pattern }
  | { readonly kind: "separate" | "overlapping"; readonly count: number; readonly operand: Condition }
  | {
      readonly kind: "then";
      readonly left: Condition;
      readonly right: Condition;
      /** The largest number of trials after the completion of `left`; null for no limit. */
      readonly within: number | null;
    }
  | { readonly kind: "unless"; readonly left: Condition; readonly right: Condition; readonly within: number }
  | { readonly kind: "and" | "or"; readonly left: Condition; readonly right: Condition }
  | { readonly kind: "not"; readonly operand: Condition }
  /** The mention of a rule: a copy with a memory of its own. */
  | { readonly kind: "rule"; readonly name: string; readonly condition: Condition }
);

export type Rule = { readonly name: string; readonly condition: Condition; readonly span: Span };

export type Signal = {
  readonly name: string;
  readonly condition: Condition;
  /** What is cleared when it is raised: its own memory, that of all signals, or nothing. */
  readonly response: "own" | "restart" | "continue";
  readonly quiet:
    | { readonly kind: "for"; readonly count: number }
    | { readonly kind: "until"; readonly condition: Condition }
    | null;
  readonly span: Span;
};

export type Cadence = {
  /** Seconds from one trial to the next. */
  readonly seconds: number;
  readonly text: string;
};

export type Parameter = { readonly name: string; readonly values: readonly Quantity[]; readonly span: Span };

export type Process = {
  readonly name: string;
  readonly parameters: readonly Parameter[];
  /** The law of each alphabet as written, null where it is left out; numbers come from `check/process-at.ts`. */
  readonly laws: readonly (Extract<Declaration, { kind: "process" }>["laws"][number] | null)[];
  readonly span: Span;
};

/** The law of the letters of one alphabet, with its numbers. */
export type LetterModel =
  | { readonly kind: "mass" /** By letter. */; readonly probabilities: readonly Quantity[] }
  | {
      readonly kind: "distribution";
      /** A name in `chance/families.ts`. */
      readonly family: string;
      /** All of them, defaults filled in. */
      readonly parameters: readonly Quantity[];
      /** Chance of the letter that stands for missing; exactly 0 where there is none. */
      readonly missing: Quantity;
    }
  | {
      readonly kind: "markov" /** By letter, then by next letter. */;
      readonly rows: readonly (readonly Quantity[])[];
    }
  | {
      readonly kind: "autoregressive";
      readonly mean: Quantity;
      readonly sd: Quantity;
      readonly phi: Quantity;
      readonly missing: Quantity;
    }
  | {
      readonly kind: "estimated";
      readonly mean: Quantity;
      readonly sd: Quantity;
      readonly subgroups: number;
      readonly size: number;
      readonly under: ProcessAt | null;
      readonly missing: Quantity;
    };

export type MeasureName =
  | "arl"
  | "sdrl"
  | "mrl"
  | "quantile"
  | "signalled"
  | "count"
  | "rate"
  | "arl_quantile"
  | "states";

/** A process at fixed parameter values, as a measure names it; `operands` null asks for the whole sweep. */
export type ProcessUse = {
  readonly process: number;
  /** One for each parameter, or null for every value of its range. */
  readonly values: readonly Quantity[] | null;
  readonly span: Span;
};

export type Measure = {
  readonly name: MeasureName;
  /** Index of the signal, or "any"; null for `states`. */
  readonly signal: number | "any" | null;
  readonly process: ProcessUse | null;
  readonly after: ProcessUse | null;
  /** The q of a quantile, the n of `signalled` and `count`. */
  readonly argument: Quantity | null;
  readonly text: string;
  readonly span: Span;
};

export type Require = {
  readonly measure: Measure;
  readonly requirement:
    | { readonly kind: "bound"; readonly comparison: ">=" | "<=" | ">" | "<"; readonly value: Quantity }
    | {
        readonly kind: "near";
        readonly value: Quantity /** Relative: 5 % is 1/20. */;
        readonly within: Quantity;
      };
  readonly span: Span;
};

/** One trial of an `expect`: a symbol, or null for a missing one. */
export type ExpectedTrial = {
  readonly symbol: number | null;
  /** Signals written after `->`, as indices. */
  readonly raises: readonly number[];
  readonly span: Span;
};

export type Expect = {
  /** Repeat counts unrolled. */
  readonly trials: readonly ExpectedTrial[];
  readonly expectation:
    | { readonly kind: "quiet" | "all" }
    | { readonly kind: "signal"; readonly signal: number | "any" };
  readonly span: Span;
};

export type Allowance = { readonly code: string; readonly reason: Quoted; readonly span: Span };

export type Policy = {
  readonly name: string;
  readonly title: string | null;
  /** The policy's own file. */
  readonly source: Source;
  /** All files, the policy's own first, then the libraries in the order they were reached. */
  readonly sources: readonly Source[];
  readonly alphabets: readonly Alphabet[];
  /** The number of combinations of letters. */
  readonly symbols: number;
  readonly lets: ReadonlyMap<
    string,
    { readonly value: Quantity; readonly expression: Expression; readonly span: Span }
  >;
  readonly groups: readonly { readonly name: string; readonly set: TrialSet; readonly span: Span }[];
  readonly rules: readonly Rule[];
  readonly signals: readonly Signal[];
  readonly clearBefore: TrialSet | null;
  readonly clearAfter: readonly Condition[];
  readonly missing: "refuse" | "skip" | "break";
  /** Trials in a batch, or null. */
  readonly block: number | null;
  readonly cadence: Cadence | null;
  readonly processes: readonly Process[];
  readonly requires: readonly Require[];
  readonly expects: readonly Expect[];
  readonly allowances: readonly Allowance[];
};
