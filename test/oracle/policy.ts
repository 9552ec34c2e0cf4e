/**
 * A policy as plain data, for the slow twin: what the language reference says can be written, and nothing else.
 * Names stay names; nothing is resolved or checked. Made by hand or by `arbitrary.ts`; read by `meaning.ts` and
 * `twin.ts`, printed by `text.ts`.
 */

/** A whole number, or the name of a `let`. */
export type Count = number | string;

export type SetExpr =
  | { readonly kind: "letter" | "group"; readonly name: string }
  | { readonly kind: "any" }
  | { readonly kind: "union"; readonly members: readonly SetExpr[] }
  | { readonly kind: "meet" | "except"; readonly left: SetExpr; readonly right: SetExpr };

export type Pattern =
  | { readonly kind: "letters"; readonly set: SetExpr }
  | { readonly kind: "sequence"; readonly items: readonly Pattern[] }
  | { readonly kind: "choice"; readonly options: readonly Pattern[] }
  /** `most` null: no upper limit. */
  | { readonly kind: "repeat"; readonly least: number; readonly most: number | null; readonly item: Pattern };

export type Condition =
  | { readonly kind: "set"; readonly set: SetExpr }
  | { readonly kind: "run"; readonly count: Count; readonly set: SetExpr }
  /** `failures` null: those the assigns give. */
  | {
      readonly kind: "weakRun";
      readonly count: Count;
      readonly set: SetExpr;
      readonly gap: Count;
      readonly failures: SetExpr | null;
    }
  | { readonly kind: "scan"; readonly count: Count; readonly window: Count; readonly set: SetExpr }
  | { readonly kind: "pattern"; readonly pattern: Pattern }
  | { readonly kind: "rule"; readonly name: string }
  | { readonly kind: "separate" | "overlapping"; readonly count: Count; readonly operand: Condition }
  | {
      readonly kind: "then";
      readonly left: Condition;
      readonly right: Condition;
      readonly within: Count | null;
    }
  | { readonly kind: "unless"; readonly left: Condition; readonly right: Condition; readonly within: Count }
  | { readonly kind: "and" | "or"; readonly left: Condition; readonly right: Condition }
  | { readonly kind: "not"; readonly operand: Condition };

export type Alphabet = {
  readonly name: string;
  readonly kind: "zones" | "letters";
  readonly letters: readonly string[];
  /** `missing STAT: as LETTER`; a name not among `letters` is one more letter. */
  readonly missingAs: string | null;
};

export type Signal = {
  readonly name: string;
  readonly condition: Condition;
  readonly response: "own" | "restart" | "continue";
  readonly quiet:
    | { readonly kind: "for"; readonly count: Count }
    | { readonly kind: "until"; readonly condition: Condition }
    | null;
};

export type Policy = {
  readonly lets: readonly { readonly name: string; readonly value: number }[];
  /** The first varies slowest. */
  readonly alphabets: readonly Alphabet[];
  readonly groups: readonly { readonly name: string; readonly set: SetExpr }[];
  readonly assigns: readonly { readonly from: SetExpr; readonly to: SetExpr }[];
  readonly rules: readonly { readonly name: string; readonly condition: Condition }[];
  readonly signals: readonly Signal[];
  readonly clearBefore: readonly SetExpr[];
  readonly clearAfter: readonly Condition[];
  readonly missing: "refuse" | "skip" | "break";
  readonly blocks: Count | null;
};

/** One letter of each alphabet, in the order of declaration. */
export type Letters = readonly string[];

/** What comes in: a letter for each alphabet, null where the value is missing. */
export type Row = readonly (string | null)[];

/** The letters of an alphabet, the one that only stands for missing included. */
export function lettersOf(alphabet: Alphabet): readonly string[] {
  const { letters, missingAs } = alphabet;
  return missingAs === null || letters.includes(missingAs) ? letters : [...letters, missingAs];
}

/** Every combination of letters, the first alphabet slowest. */
export function everyTrial(policy: Policy): readonly Letters[] {
  let combinations: readonly Letters[] = [[]];
  for (const alphabet of policy.alphabets)
    combinations = combinations.flatMap((start) => lettersOf(alphabet).map((letter) => [...start, letter]));
  return combinations;
}

/** The number a count stands for. */
export function countOf(policy: Policy, count: Count): number {
  if (typeof count === "number") return count;
  const found = policy.lets.find((declared) => declared.name === count);
  if (found === undefined) throw new Error(`no let is called ${count}`);
  return found.value;
}
