/**
 * The outside reference for machines: the general-purpose regular-language library refa (M. Schmidt, npm `refa` 0.12.1),
 * which knows nothing of signals. A policy whose only signal is raised when one of some strings ends is, read as an
 * acceptor that stays signalled, the language (any)* (strings) (any)*.
 *
 * Imports nothing of ours.
 */
import { CharSet, type Concatenation, DFA, type FAIterator, NFA, type NoParent } from "refa";

/** A string of letter sets: `[[0], [0, 1]]` is letter 0, then 0 or 1. */
export type Strings = readonly (readonly (readonly number[])[])[];

/** All strings of `k of m SET`: they begin and end in the set, with k members, within m trials. */
export function scanStrings(count: number, window: number, set: readonly number[], letters: number): Strings {
  if (count === 1) return [[set]];
  const all = [...Array(letters).keys()];
  const strings: (readonly number[])[][] = [];
  const extend = (soFar: (readonly number[])[], held: number) => {
    if (held === count) {
      strings.push(soFar);
      return;
    }
    if (soFar.length === window) return;
    extend([...soFar, set], held + 1);
    if (soFar.length < window - 1) extend([...soFar, all], held);
  };
  extend([set], 1);
  return strings;
}

type Parsed = readonly NoParent<Concatenation>[];

/** The parsed expression (any)* (strings) (any)*, refa's own syntax tree. */
export function parsedExpression(strings: Strings, letters: number): Parsed {
  const maximum = letters - 1;
  const one = (set: readonly number[]) =>
    ({
      type: "CharacterClass",
      characters: CharSet.fromCharacters(
        maximum,
        [...set].sort((a, b) => a - b),
      ),
    }) as const;
  const any = one([...Array(letters).keys()]);
  const concatenation = (elements: NoParent<Concatenation>["elements"]): NoParent<Concatenation> => ({
    type: "Concatenation",
    elements,
  });
  const anything = {
    type: "Quantifier",
    lazy: false,
    min: 0,
    max: Number.POSITIVE_INFINITY,
    alternatives: [concatenation([any])],
  } as const;
  const choice = {
    type: "Alternation",
    alternatives: strings.map((string) => concatenation(string.map(one))),
  } as const;
  return [
    concatenation([
      { ...anything, alternatives: [...anything.alternatives] },
      choice,
      { ...anything, alternatives: [...anything.alternatives] },
    ]),
  ];
}

/** refa's minimal automaton of a parsed expression. */
export function minimalAutomaton(parsed: Parsed, letters: number): DFA {
  const factory = new NFA.LimitedNodeFactory(2_000_000);
  const nfa = NFA.fromRegex(parsed, { maxCharacter: letters - 1 }, {}, factory);
  const dfa = DFA.fromFA(nfa, new DFA.LimitedNodeFactory(2_000_000));
  dfa.minimize();
  return dfa;
}

/** A machine's tables, by letter; `raised` where the transition signals. */
export type Tables = {
  readonly states: number;
  readonly letters: number;
  readonly next: (state: number, letter: number) => number;
  readonly raised: (state: number, letter: number) => boolean;
};

/** A machine read as an acceptor that stays signalled, as refa's minimal automaton. */
export function acceptorOf(tables: Tables): DFA {
  const { states, letters } = tables;
  const maximum = letters - 1;
  const signalled = states;
  const iterator: FAIterator<number, Map<number, CharSet>> = {
    initial: 0,
    stableOut: true,
    isFinal: (state) => state === signalled,
    getOut: (state) => {
      const out = new Map<number, CharSet>();
      for (let letter = 0; letter < letters; letter++) {
        const target =
          state === signalled || tables.raised(state, letter) ? signalled : tables.next(state, letter);
        out.set(
          target,
          (out.get(target) ?? CharSet.empty(maximum)).union(CharSet.fromCharacter(maximum, letter)),
        );
      }
      return out;
    },
  };
  const dfa = DFA.fromFA(
    { maxCharacter: maximum, transitionIterator: () => iterator },
    new DFA.LimitedNodeFactory(2_000_000),
  );
  dfa.minimize();
  return dfa;
}
