/** Text to machine, against refa from parsed patterns to its minimal automaton of the same language. */
import { compile } from "../../compiler/compile.ts";
import { policyOf, ZONE_TESTS } from "../machine/compiled.ts";
import { minimalAutomaton, parsedExpression, type Strings, scanStrings } from "../oracle/regular-language.ts";
import { type Figure, time } from "./figure.ts";

const times = (count: number, set: readonly number[]) => Array.from({ length: count }, () => set);
const ZONE_STRINGS: Strings = [
  [[0]],
  [[7]],
  ...scanStrings(2, 3, [6], 8),
  ...scanStrings(2, 3, [1], 8),
  ...scanStrings(4, 5, [5, 6], 8),
  ...scanStrings(4, 5, [1, 2], 8),
  times(8, [4, 5, 6]),
  times(8, [1, 2, 3]),
];

export function benchCompile(): Figure[] {
  return [
    against("four zone tests, text to machine", ZONE_TESTS, ZONE_STRINGS, 8),
    against("6 of 12, text to machine", policyOf(2, "6 of 12 b"), scanStrings(6, 12, [1], 2), 2),
    alone("8 of 20, text to machine", policyOf(2, "8 of 20 b"), 2000),
    alone("8 of 22, text to machine", policyOf(2, "8 of 22 b"), 5000),
  ];
}

function against(name: string, text: string, strings: Strings, letters: number): Figure {
  const parsed = parsedExpression(strings, letters);
  const theirs = minimalAutomaton(parsed, letters).countNodes();
  const states = compile(text).machine?.states ?? 0;
  if (states + 1 !== theirs)
    throw new Error(`${name}: ${states} states against refa's ${theirs} with the signalled one`);
  const ours = time(() => compile(text), 40, 20);
  const peer = time(() => minimalAutomaton(parsed, letters), 7, 3);
  const faster = peer.median / ours.median;
  return {
    name,
    state: "warm",
    ours,
    peer: { name: "refa", timing: peer },
    faster,
    target: ">= 10 x",
    reached: faster >= 10,
    checksum: `${states} states`,
  };
}

function alone(name: string, text: string, most: number): Figure {
  const ours = time(() => compile(text), 5, 2);
  const checksum = `${compile(text).machine?.states} states`;
  return {
    name,
    state: "warm",
    ours,
    peer: null,
    faster: null,
    target: `<= ${most}`,
    reached: ours.median <= most,
    checksum,
  };
}
