/**
 * The syntax tree: what was written, with its place, and no meaning. One declaration type for each keyword of
 * `grammar/README.md`, readonly tagged unions throughout; every node carries the span of its text.
 *
 * Words that are known by their place (functions, models, measures, units) are plain names here; whether they exist is
 * for the check. A lone name in a condition is a `named` SET: whether it is a rule or a SET is for the check too.
 */
import type { Source } from "./source.ts";
import type { Span } from "./span.ts";

export type Name = { readonly text: string; readonly span: Span };
/** A quoted string, without its quotes and with its escapes resolved. */
export type Quoted = { readonly value: string; readonly span: Span };
/** A number as written: `text` without the percent sign, which is told apart. */
export type NumberLiteral = {
  readonly kind: "number";
  readonly text: string;
  readonly percent: boolean;
  readonly span: Span;
};

export type Expression =
  | NumberLiteral
  | { readonly kind: "reference"; readonly name: Name; readonly span: Span }
  | {
      readonly kind: "call";
      readonly name: Name;
      readonly operands: readonly Expression[];
      readonly span: Span;
    }
  | { readonly kind: "negate"; readonly operand: Expression; readonly span: Span }
  | {
      readonly kind: "binary";
      readonly operator: "+" | "-" | "*" | "/" | "^";
      readonly left: Expression;
      readonly right: Expression;
      readonly span: Span;
    };

/** A count is a whole number as written (its digits) or the name of a `let`. */
export type Count =
  | { readonly kind: "literal"; readonly text: string; readonly span: Span }
  | { readonly kind: "named"; readonly name: Name; readonly span: Span };

export type SetTree =
  | { readonly kind: "any"; readonly span: Span }
  | { readonly kind: "named"; readonly name: Name; readonly span: Span }
  | { readonly kind: "union"; readonly members: readonly SetTree[]; readonly span: Span }
  | { readonly kind: "meet"; readonly left: SetTree; readonly right: SetTree; readonly span: Span }
  | { readonly kind: "except"; readonly left: SetTree; readonly right: SetTree; readonly span: Span };

export type ConditionTree =
  | { readonly kind: "set"; readonly set: SetTree; readonly span: Span }
  | { readonly kind: "run"; readonly count: Count; readonly set: SetTree; readonly span: Span }
  | {
      readonly kind: "weakRun";
      readonly count: Count;
      readonly set: SetTree;
      readonly gap: Count;
      /** Named failures; absent where the assignment tells them. */
      readonly failures?: SetTree;
      readonly span: Span;
    }
  | {
      readonly kind: "scan";
      readonly count: Count;
      readonly window: Count;
      readonly set: SetTree;
      readonly span: Span;
    }
  | { readonly kind: "pattern"; readonly pattern: PatternTree; readonly span: Span }
  | {
      readonly kind: "separate" | "overlapping";
      readonly count: Count;
      readonly operand: ConditionTree;
      readonly span: Span;
    }
  | {
      readonly kind: "then";
      readonly left: ConditionTree;
      readonly right: ConditionTree;
      readonly within?: Count;
      readonly span: Span;
    }
  | {
      readonly kind: "unless";
      readonly left: ConditionTree;
      readonly right: ConditionTree;
      readonly within: Count;
      readonly span: Span;
    }
  | {
      readonly kind: "and" | "or";
      readonly left: ConditionTree;
      readonly right: ConditionTree;
      readonly span: Span;
    }
  | { readonly kind: "not"; readonly operand: ConditionTree; readonly span: Span };

export type PatternTree =
  | { readonly kind: "choice"; readonly options: readonly PatternTree[]; readonly span: Span }
  | { readonly kind: "sequence"; readonly items: readonly PatternTree[]; readonly span: Span }
  | { readonly kind: "letters"; readonly set: SetTree; readonly span: Span }
  | {
      readonly kind: "repeat";
      /** Digits as written. */
      readonly least: string;
      /** Digits as written, or null where there is no upper limit (`1..`); equal to `least` for a plain count. */
      readonly most: string | null;
      readonly operand: PatternTree;
      readonly span: Span;
    };

/** `<` or `<=` on either side of a cut: exactly one of the two is `<=`, and that letter owns the cut; the check tells. */
export type CutTree = {
  readonly below: "<" | "<=";
  readonly expression: Expression;
  readonly above: "<" | "<=";
  readonly span: Span;
};

export type Sweep = {
  readonly name: Name;
  readonly from: Expression;
  readonly to: Expression;
  readonly by: Expression;
  readonly span: Span;
};

export type MassTree = {
  readonly entries: readonly { readonly letter: Name; readonly probability?: Expression }[];
  readonly span: Span;
};

export type ModelTree =
  | { readonly kind: "mass"; readonly mass: MassTree; readonly span: Span }
  | {
      readonly kind: "markov";
      readonly rows: readonly { readonly letter: Name; readonly mass: MassTree }[];
      readonly span: Span;
    }
  | {
      readonly kind: "distribution";
      readonly name: Name;
      readonly operands: readonly Expression[];
      readonly ar?: Expression;
      readonly estimated?: {
        readonly subgroups: Count;
        readonly size: Count;
        readonly under?: ProcessAt;
        readonly span: Span;
      };
      readonly span: Span;
    };

export type Law = {
  readonly statistic: Name;
  readonly model: ModelTree;
  readonly with?: { readonly letter: Name; readonly probability: Expression };
  readonly span: Span;
};

export type ProcessAt = {
  readonly name: Name;
  readonly operands: readonly Expression[];
  readonly span: Span;
};

export type ProcessReference = { readonly at: ProcessAt; readonly after?: ProcessAt; readonly span: Span };

/** `any` is the name `any`. */
export type MeasureTree = {
  readonly name: Name;
  /** Absent for a measure without parentheses (`states`). */
  readonly of?: {
    readonly signal: Name;
    readonly process: ProcessReference;
    readonly argument?: Expression;
  };
  readonly span: Span;
};

export type Requirement =
  | { readonly kind: "bound"; readonly comparison: ">=" | "<=" | ">" | "<"; readonly value: Expression }
  | { readonly kind: "near"; readonly value: Expression; readonly within: Expression };

export type TrialTree = {
  /** Digits of a repeat count as written; absent for one. */
  readonly count?: { readonly text: string; readonly span: Span };
  /** One entry for each alphabet when written in parentheses, else one; null stands for `?`. */
  readonly letters: readonly (Name | null)[];
  readonly tuple: boolean;
  /** The signals of `-> NAME` or `-> {NAME, …}`; absent when none is written. */
  readonly raises?: readonly Name[];
  readonly span: Span;
};

export type Declaration = { readonly span: Span } & (
  | { readonly kind: "policy"; readonly name: Name; readonly title?: Quoted }
  | { readonly kind: "use"; readonly path: Quoted }
  | { readonly kind: "let"; readonly name: Name; readonly value: Expression }
  | {
      readonly kind: "zones";
      readonly name: Name;
      readonly letters: readonly Name[];
      readonly cuts: readonly CutTree[];
    }
  | {
      readonly kind: "letters";
      readonly name: Name;
      readonly letters: readonly { readonly name: Name; readonly text?: Quoted }[];
    }
  | { readonly kind: "group"; readonly name: Name; readonly set: SetTree }
  | {
      readonly kind: "assign";
      readonly pairs: readonly {
        readonly success: SetTree;
        readonly failure: SetTree;
        readonly span: Span;
      }[];
    }
  | { readonly kind: "rule"; readonly name: Name; readonly condition: ConditionTree }
  | {
      readonly kind: "signal";
      readonly name: Name;
      readonly condition: ConditionTree;
      readonly response?: "restart" | "continue";
      readonly quiet?:
        | { readonly kind: "for"; readonly count: Count }
        | { readonly kind: "until"; readonly condition: ConditionTree };
    }
  | { readonly kind: "clearBefore"; readonly set: SetTree }
  | { readonly kind: "clearAfter"; readonly condition: ConditionTree }
  | { readonly kind: "missing"; readonly response: "refuse" | "skip" | "break" }
  | { readonly kind: "missingAs"; readonly statistic: Name; readonly letter: Name }
  | { readonly kind: "blocks"; readonly count: Count }
  | { readonly kind: "cadence"; readonly amount: NumberLiteral; readonly unit: Name }
  | {
      readonly kind: "process";
      readonly name: Name;
      readonly sweeps: readonly Sweep[];
      readonly laws: readonly Law[];
    }
  | { readonly kind: "require"; readonly measure: MeasureTree; readonly requirement: Requirement }
  | {
      readonly kind: "expect";
      /** What is expected: nothing raised, one signal (or `any`), or exactly the raises written. */
      readonly expectation:
        | { readonly kind: "quiet" | "all" }
        | { readonly kind: "signal"; readonly name: Name };
      readonly trials: readonly TrialTree[];
    }
  | { readonly kind: "allow"; readonly code: Name; readonly reason: Quoted }
);

/** A comment, from its `#` to the end of its line, the line break left out. */
export type Comment = { readonly text: string; readonly span: Span };

export type FileTree = {
  readonly source: Source;
  readonly declarations: readonly Declaration[];
  readonly comments: readonly Comment[];
};
