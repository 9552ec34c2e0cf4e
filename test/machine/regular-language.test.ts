/**
 * The machine against an outside reference: the general-purpose regular-language library refa. A machine with one signal,
 * read as an acceptor that stays signalled, must have the language of refa's minimal automaton, and as many states.
 */
import { describe, expect, it } from "vitest";
import {
  acceptorOf,
  minimalAutomaton,
  parsedExpression,
  type Strings,
  scanStrings,
} from "../oracle/regular-language.ts";
import { compiled, policyOf, ZONE_TESTS } from "./compiled.ts";

const A = [0];
const B = [1];
const ANY = [0, 1];
const times = (count: number, set: readonly number[]) => Array.from({ length: count }, () => set);

/** Weak runs: k successes, up to r failures between two of them. */
function weakRunStrings(count: number, gap: number): Strings {
  if (count === 1) return [[A]];
  return weakRunStrings(count - 1, gap).flatMap((string) =>
    [...Array(gap + 1).keys()].map((failures) => [...string, ...times(failures, B), A]),
  );
}

const cases: readonly { condition: string; letters: number; strings: Strings; more?: string }[] = [
  { condition: "a", letters: 2, strings: [[A]] },
  { condition: "5 a", letters: 3, strings: [times(5, A)] },
  { condition: "3 a gap 2", letters: 3, strings: weakRunStrings(3, 2), more: "assign a -> b" },
  { condition: "4 a gap 1 of b", letters: 3, strings: weakRunStrings(4, 1) },
  { condition: "2 of 3 a", letters: 2, strings: scanStrings(2, 3, A, 2) },
  { condition: "3 of 4 a", letters: 2, strings: scanStrings(3, 4, A, 2) },
  { condition: "3 of 5 a", letters: 2, strings: scanStrings(3, 5, A, 2) },
  { condition: "4 of 8 {a, b}", letters: 3, strings: scanStrings(4, 8, [0, 1], 3) },
  { condition: "6 of 12 a", letters: 2, strings: scanStrings(6, 12, A, 2) },
  {
    condition: "[a b a | b b]",
    letters: 3,
    strings: [
      [A, B, A],
      [B, B],
    ],
  },
  { condition: "[a 2..4 b a]", letters: 3, strings: [2, 3, 4].map((n) => [A, ...times(n, B), A]) },
  { condition: "[a 8 any]", letters: 2, strings: [[A, ...times(8, ANY)]] },
  { condition: "2 a or 3 b", letters: 3, strings: [times(2, A), times(3, B)] },
  { condition: "2 of 4 a or [b a b]", letters: 3, strings: [...scanStrings(2, 4, A, 3), [B, A, B]] },
];

describe("a machine that stays signalled is refa's minimal automaton", () => {
  it.each(cases)("$condition over $letters letters", ({ condition, letters, strings, more }) => {
    agree(policyOf(letters, condition, more ?? ""), letters, strings);
  });

  it("the four zone tests", () => {
    const strings = [
      [[0]],
      [[7]],
      ...scanStrings(2, 3, [6], 8),
      ...scanStrings(2, 3, [1], 8),
      ...scanStrings(4, 5, [5, 6], 8),
      ...scanStrings(4, 5, [1, 2], 8),
      times(8, [4, 5, 6]),
      times(8, [1, 2, 3]),
    ];
    expect(agree(ZONE_TESTS, 8, strings)).toBe(216);
  });
});

/** Compares language and size; returns the number of states. */
function agree(text: string, letters: number, strings: Strings): number {
  const { machine } = compiled(text);
  const at = (state: number, letter: number) =>
    state * machine.columns + (machine.columnOf[letter] as number);
  const ours = acceptorOf({
    states: machine.states,
    letters,
    next: (state, letter) => machine.next[at(state, letter)] as number,
    raised: (state, letter) => machine.output[at(state, letter)] !== 0,
  });
  const theirs = minimalAutomaton(parsedExpression(strings, letters), letters);
  expect(ours.structurallyEqual(theirs)).toBe(true);
  // A raise leads back to the start, so every state but the signalled one is a state of the acceptor too.
  expect(machine.states + 1).toBe(theirs.countNodes());
  return theirs.countNodes();
}
