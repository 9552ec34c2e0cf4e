/**
 * Random valid policies and streams for fast-check. A policy is read off a tape of numbers: each choice takes the next one,
 * an empty tape takes the first option, and the first options are the simplest, so that shrinking the tape simplifies the
 * policy. What would be invalid is repaired where it arises: empty SETs, overlapping failures, a `not` that holds on silence.
 */
import fc from "fast-check";
import { acceptsEmpty, isIn, onSilence } from "./meaning.ts";
import {
  type Alphabet,
  type Condition,
  type Count,
  everyTrial,
  lettersOf,
  type Pattern,
  type Policy,
  type Row,
  type SetExpr,
  type Signal,
} from "./policy.ts";

type Tape = {
  /** A whole number below n, 0 when the tape is at its end. */
  readonly below: (n: number) => number;
  /** True about once in n, never when the tape is at its end. */
  readonly onceIn: (n: number) => boolean;
};

function tapeOf(numbers: readonly number[]): Tape {
  let next = 0;
  const below = (n: number): number => (numbers[next++] ?? 0) % n;
  return { below, onceIn: (n) => below(n) === n - 1 };
}

/** What a condition may be made of so far; `fuel` bounds the number of leaves of the whole policy. */
type Making = { readonly tape: Tape; policy: Policy; fuel: number };

/** Words that are no more than words where the grammar does not expect them. */
const ODD_LETTERS = [
  "when",
  "on",
  "as",
  "from",
  "to",
  "by",
  "ar",
  "after",
  "for",
  "until",
  "before",
  "normal",
];

function makeAlphabets(tape: Tape): readonly Alphabet[] {
  const number = [1, 1, 1, 2, 1, 2, 3][tape.below(7)]!;
  const odd = tape.onceIn(8);
  return Array.from({ length: number }, (_, index) => {
    const most = 4 - number;
    const size = 2 + tape.below(most);
    const letters = Array.from({ length: size }, (_, rank) =>
      odd ? ODD_LETTERS[index * 4 + rank]! : `${"abcd"[rank]}${number === 1 ? "" : index + 1}`,
    );
    const kind = tape.onceIn(3) ? "letters" : "zones";
    const missingAs = tape.onceIn(6) ? (tape.onceIn(2) ? letters[0]! : `lost${index + 1}`) : null;
    return { name: ["x", "y", "z"][index]!, kind, letters, missingAs };
  });
}

function isEmpty(policy: Policy, set: SetExpr): boolean {
  return !everyTrial(policy).some((letters) => isIn(policy, set, letters));
}

function makeLetter({ tape, policy }: Making): SetExpr {
  const alphabet = policy.alphabets[tape.below(policy.alphabets.length)]!;
  const letters = lettersOf(alphabet);
  return { kind: "letter", name: letters[tape.below(letters.length)]! };
}

/** A SET with no empty part. */
function makeSet(making: Making, depth = 2): SetExpr {
  const { tape, policy } = making;
  const letter = makeLetter(making);
  const form = depth === 0 ? 0 : tape.below(12);
  if (form < 4 || form > 8) return letter;
  if (form === 4 && policy.groups.length > 0)
    return { kind: "group", name: policy.groups[tape.below(policy.groups.length)]!.name };
  if (form === 5) return { kind: "any" };
  const right = makeSet(making, depth - 1);
  if (form === 6) return { kind: "union", members: [letter, right] };
  const made: SetExpr = { kind: form === 7 ? "meet" : "except", left: makeSet(making, depth - 1), right };
  return isEmpty(policy, made) ? letter : made;
}

/** SETs of one alphabet's letters, cut in two or three parts; the first part is never all of it. */
function makeAssigns(making: Making): Policy["assigns"] {
  const { tape, policy } = making;
  const assigns: { from: SetExpr; to: SetExpr }[] = [];
  for (const alphabet of policy.alphabets) {
    if (tape.onceIn(3)) continue;
    const named = lettersOf(alphabet).map((name): SetExpr => ({ kind: "letter", name }));
    const cut = 1 + tape.below(named.length - 1);
    const [first, second] = [union(named.slice(0, cut)), union(named.slice(cut))];
    if (!tape.onceIn(4)) assigns.push({ from: first, to: second });
    if (tape.onceIn(2)) assigns.push({ from: second, to: named[tape.below(cut)]! });
  }
  return assigns;
}

function union(members: readonly SetExpr[]): SetExpr {
  return members.length === 1 ? members[0]! : { kind: "union", members };
}

function makeCount({ tape, policy }: Making, most: number, least = 1): Count {
  const value = least + tape.below(most - least + 1);
  const named = policy.lets.find((declared) => declared.value === value);
  return named !== undefined && tape.onceIn(3) ? named.name : value;
}

/** A weak run whose failures are assigned, or named and cut clear of the successes; a run where nothing is left. */
function makeWeakRun(making: Making): Condition {
  const { tape, policy } = making;
  const [count, gap] = [makeCount(making, 3, 2), makeCount(making, 2, 0)];
  const assign = policy.assigns[tape.below(Math.max(1, policy.assigns.length))];
  if (assign !== undefined && !tape.onceIn(3)) {
    const { from } = assign;
    const set =
      from.kind === "union" && tape.onceIn(2) ? from.members[tape.below(from.members.length)]! : from;
    return { kind: "weakRun", count, set, gap, failures: null };
  }
  const set = makeSet(making);
  const wanted = makeSet(making);
  const overlap = everyTrial(policy).some(
    (letters) => isIn(policy, set, letters) && isIn(policy, wanted, letters),
  );
  if (!overlap) return { kind: "weakRun", count, set, gap, failures: wanted };
  for (const left of [wanted, { kind: "any" } as const]) {
    const failures: SetExpr = { kind: "except", left, right: set };
    if (!isEmpty(policy, failures)) return { kind: "weakRun", count, set, gap, failures };
  }
  return { kind: "run", count, set };
}

function makePattern(making: Making, depth = 2): Pattern {
  const { tape } = making;
  const form = depth === 0 ? 0 : tape.below(7);
  if (form < 2) return { kind: "letters", set: makeSet(making, 1) };
  if (form === 2) {
    const options = [makePattern(making, depth - 1), makePattern(making, depth - 1)];
    return { kind: "choice", options };
  }
  if (form < 5) {
    const items = Array.from({ length: 2 + tape.below(2) }, () => makePattern(making, depth - 1));
    return { kind: "sequence", items };
  }
  const least = tape.below(3);
  const most = tape.onceIn(3) ? null : Math.max(1, least + tape.below(3));
  return { kind: "repeat", least, most, item: makePattern(making, depth - 1) };
}

function makePatternCondition(making: Making): Condition {
  const pattern = makePattern(making);
  if (!acceptsEmpty(pattern)) return { kind: "pattern", pattern };
  const letter: Pattern = { kind: "letters", set: makeLetter(making) };
  return { kind: "pattern", pattern: { kind: "sequence", items: [letter, pattern] } };
}

function makeLeaf(making: Making): Condition {
  const { tape } = making;
  making.fuel--;
  switch (tape.below(9)) {
    case 0:
      return { kind: "set", set: makeSet(making) };
    case 1:
      return { kind: "run", count: makeCount(making, 3), set: makeSet(making) };
    case 2:
    case 3:
      return makeWeakRun(making);
    case 4: {
      const window = making.policy.alphabets.length === 1 ? 5 : 4;
      const set = makeSet(making);
      return { kind: "scan", count: makeCount(making, 2), window: makeCount(making, window, 2), set };
    }
    case 5:
    case 6:
      return makePatternCondition(making);
    default:
      return makeMention(making);
  }
}

/** A rule declared so far, or a SET. */
function makeMention(making: Making): Condition {
  const { rules } = making.policy;
  if (rules.length === 0) return { kind: "set", set: makeSet(making) };
  return { kind: "rule", name: rules[making.tape.below(rules.length)]!.name };
}

function makeCondition(making: Making, depth: number): Condition {
  const { tape } = making;
  const form = depth === 0 || making.fuel <= 0 ? 0 : tape.below(14 + depth);
  const inner = (): Condition => makeCondition(making, depth - 1);
  const quietInner = (): Condition => silent(making, inner());
  switch (form) {
    case 5:
      return { kind: "separate", count: makeCount(making, 3), operand: quietInner() };
    case 6:
      return { kind: "overlapping", count: makeCount(making, 3), operand: quietInner() };
    case 7:
      return { kind: "then", left: quietInner(), right: quietInner(), within: null };
    case 8:
      return { kind: "then", left: quietInner(), right: quietInner(), within: makeCount(making, 4) };
    case 9:
      return { kind: "unless", left: quietInner(), right: quietInner(), within: makeCount(making, 3) };
    case 10:
      return { kind: "and", left: inner(), right: inner() };
    case 11:
      return { kind: "or", left: inner(), right: inner() };
    case 12:
      return { kind: "not", operand: inner() };
    case 13:
      return { kind: "and", left: quietInner(), right: { kind: "not", operand: inner() } };
    case 14:
      return { kind: "or", left: quietInner(), right: makeMention(making) };
    case 15:
    case 16:
      return { kind: "then", left: makeMention(making), right: quietInner(), within: makeCount(making, 4) };
    default:
      return makeLeaf(making);
  }
}

/** The condition, held back by a leaf when it would hold on silence. */
function silent(making: Making, condition: Condition): Condition {
  if (!onSilence(making.policy, condition)) return condition;
  return { kind: "and", left: makeLeaf(making), right: condition };
}

function makeSignal(making: Making, name: string): Signal {
  const { tape } = making;
  const condition = silent(making, makeCondition(making, 3));
  const response = (["own", "own", "continue", "restart"] as const)[tape.below(4)]!;
  switch (tape.below(6)) {
    case 4:
      return { name, condition, response, quiet: { kind: "for", count: makeCount(making, 4) } };
    case 5:
      return { name, condition, response, quiet: { kind: "until", condition: makeCondition(making, 1) } };
    default:
      return { name, condition, response, quiet: null };
  }
}

function makePolicy(tape: Tape): Policy {
  const lets = tape.onceIn(4) ? [2, 3].map((value) => ({ name: `n${value}`, value })) : [];
  const making: Making = {
    tape,
    fuel: 12,
    policy: {
      lets,
      alphabets: makeAlphabets(tape),
      groups: [],
      assigns: [],
      rules: [],
      signals: [],
      clearBefore: [],
      clearAfter: [],
      missing: (["refuse", "skip", "break", "break"] as const)[tape.below(4)]!,
      blocks: null,
    },
  };
  const extend = (more: Partial<Policy>): void => {
    making.policy = { ...making.policy, ...more };
  };
  for (let index = tape.below(3); index > 0; index--)
    extend({ groups: [...making.policy.groups, { name: `g${index}`, set: makeSet(making) }] });
  extend({ assigns: makeAssigns(making) });
  for (let index = tape.below(4); index > 0; index--) {
    const condition = silent(making, makeCondition(making, 2));
    extend({ rules: [...making.policy.rules, { name: `r${index}`, condition }] });
  }
  const signals = Array.from({ length: [1, 2, 1, 3][tape.below(4)]! }, (_, index) =>
    makeSignal(making, `s${index + 1}`),
  );
  if (tape.onceIn(5)) extend({ clearBefore: [makeSet(making)] });
  if (tape.onceIn(5)) extend({ clearAfter: [makeCondition(making, 1)] });
  if (tape.onceIn(5)) extend({ blocks: makeCount(making, 6, 1) });
  // Names may be used before they are declared.
  const rules = tape.onceIn(2) ? making.policy.rules : [...making.policy.rules].reverse();
  return { ...making.policy, rules, signals };
}

/** Rows of a stream: mostly what came before again, or what a policy likes to see, at times missing. */
function makeRows(policy: Policy, numbers: readonly number[]): readonly Row[] {
  const trials = everyTrial(policy);
  const rows: Row[] = [];
  for (const number of numbers) {
    const before = rows.at(-1);
    if (number % 8 < 2 && before !== undefined) rows.push(before);
    else if (number % 8 === 7 && number % 3 === 0) {
      const lost = number % policy.alphabets.length;
      rows.push(trials[number % trials.length]!.map((letter, index) => (index === lost ? null : letter)));
    } else rows.push(trials[(number >> 3) % trials.length]!);
  }
  return rows;
}

export type Case = { readonly policy: Policy; readonly strings: readonly (readonly Row[])[] };

/** A valid policy and some streams for it. */
export function randomCase(strings: number, length: number): fc.Arbitrary<Case> {
  const tape = fc.array(fc.nat(255), { minLength: 120, maxLength: 400, size: "max" });
  const streams = fc.array(fc.array(fc.nat(0xffff), { minLength: 1, maxLength: length, size: "max" }), {
    minLength: strings,
    maxLength: strings,
  });
  return fc.tuple(tape, streams).map(([numbers, rows]) => {
    const policy = makePolicy(tapeOf(numbers));
    return { policy, strings: rows.map((row) => makeRows(policy, row)) };
  });
}

/** The seed of a property: `FC_SEED`, a fixed one in CI, else a new one each run. */
export function seed(): number {
  const given = process.env.FC_SEED;
  if (given !== undefined && given !== "") return Number(given);
  return process.env.CI ? 20_260_101 : Date.now() % 0x7fffffff;
}

/**
 * A check that, once it has failed, is asked a limited number of times more and then passes, so that shrinking a failure of
 * a slow check ends in good time.
 */
export function shrinkingLimited<T>(check: (value: T) => void, times = 400): (value: T) => void {
  let left = Number.POSITIVE_INFINITY;
  return (value) => {
    if (left <= 0) return;
    left--;
    try {
      check(value);
    } catch (thrown) {
      left = Math.min(left, times);
      throw thrown;
    }
  };
}
