/**
 * Small machines made by hand for the tests of the analysis, each from the definition of its rule and not by the
 * compiler. Column 0 is the letter the rule is about unless said otherwise; output 1 is the raise, after which the
 * machine begins anew.
 */

import type { ColumnProbabilities } from "../../compiler/analysis/run-lengths.ts";
import { doubleDoubleOfRatio } from "../../compiler/chance/quantity.ts";
import type { Automaton } from "../../compiler/machine/automaton.ts";
import type { PlainMachine } from "../oracle/exact-chain.ts";

/** Explores a machine from a start: states are named by any text, `step` gives the successor and the output. */
export function explore(
  start: string,
  columns: number,
  step: (state: string, column: number) => readonly [string, number],
): Automaton {
  const numbers = new Map([[start, 0]]);
  const names = [start];
  const next: number[] = [];
  const output: number[] = [];
  for (let state = 0; state < names.length; state++) {
    for (let column = 0; column < columns; column++) {
      const [to, out] = step(names[state]!, column);
      if (!numbers.has(to)) {
        numbers.set(to, names.length);
        names.push(to);
      }
      next.push(numbers.get(to)!);
      output.push(out);
    }
  }
  return { states: names.length, columns, next: Int32Array.from(next), output: Int32Array.from(output) };
}

/** k in a row. */
export function run(k: number): Automaton {
  return explore("0", 2, (state, column) => {
    if (column === 1) return ["0", 0];
    const length = Number(state) + 1;
    return length === k ? ["0", 1] : [String(length), 0];
  });
}

/** r of column 0 in a row, or s of column 1; output 1 or 2. */
export function eitherRun(r: number, s: number): Automaton {
  return explore("0 0", 2, (state, column) => {
    const [first, second] = state.split(" ").map(Number) as [number, number];
    if (column === 0) return first + 1 === r ? ["0 0", 1] : [`${first + 1} 0`, 0];
    return second + 1 === s ? ["0 0", 2] : [`0 ${second + 1}`, 0];
  });
}

/** k of the last m, the window held as ages of successes; those that can no longer matter are dropped. */
export function scan(k: number, m: number): Automaton {
  return explore("", 2, (state, column) => {
    const ages = state === "" ? [] : state.split(" ").map((age) => Number(age) + 1);
    if (column === 0) ages.push(1);
    while (ages.length > 0 && ages[0]! > m) ages.shift();
    if (column === 0 && ages.length >= k) return ["", 1];
    while (ages.length > 0 && ages[0]! > m - k + ages.length) ages.shift();
    return [ages.join(" "), 0];
  });
}

/** k of the last m, the window held as it is. */
export function rawScan(k: number, m: number): Automaton {
  return explore("", 2, (state, column) => {
    const window = (state + (column === 0 ? "a" : "b")).slice(-m);
    const count = [...window].filter((letter) => letter === "a").length;
    return column === 0 && count >= k ? ["", 1] : [window.slice(-(m - 1)), 0];
  });
}

/**
 * Weak run: k successes (column 0), between neighbours at most `gap` failures (column 1) and nothing else (column 2).
 */
export function weakRun(k: number, gap: number): Automaton {
  return explore("0 0", 3, (state, column) => {
    const [count, failures] = state.split(" ").map(Number) as [number, number];
    if (column === 0) return count + 1 === k ? ["0 0", 1] : [`${count + 1} 0`, 0];
    if (column === 2 || count === 0 || failures === gap) return ["0 0", 0];
    return [`${count} ${failures + 1}`, 0];
  });
}

/** Whichever of several words comes first; letters are columns, output i + 1 for word i. */
export function words(columns: number, list: readonly (readonly number[])[]): Automaton {
  return explore("", columns, (state, column) => {
    const read = state === "" ? [column] : [...state.split(" ").map(Number), column];
    const ends = (word: readonly number[]): boolean =>
      word.length <= read.length && word.every((letter, i) => read[read.length - word.length + i] === letter);
    const complete = list.findIndex(ends);
    if (complete >= 0) return ["", complete + 1];
    for (let from = 0; from < read.length; from++) {
      const rest = read.slice(from);
      if (list.some((word) => rest.every((letter, i) => word[i] === letter))) return [rest.join(" "), 0];
    }
    return ["", 0];
  });
}

/** The n-th time that two in a row come, memory clear after each. */
export function separatePairs(n: number): Automaton {
  return explore("0 0", 2, (state, column) => {
    const [done, held] = state.split(" ").map(Number) as [number, number];
    if (column === 1) return [`${done} 0`, 0];
    if (held === 0) return [`${done} 1`, 0];
    return done + 1 === n ? ["0 0", 1] : [`${done + 1} 0`, 0];
  });
}

/** k in a row within a block of n trials; memory clears at the block's edge, the place goes on. */
export function blockRun(k: number, n: number): Automaton {
  return explore("0 0", 2, (state, column) => {
    const [place, length] = state.split(" ").map(Number) as [number, number];
    const following = (place + 1) % n;
    const raised = column === 0 && length + 1 === k;
    const held = column === 1 || raised || following === 0 ? 0 : length + 1;
    return [`${following} ${held}`, raised ? 1 : 0];
  });
}

/**
 * Output 1: k of column 0 in a row. Output 2: column 1, which then rests for `quiet` trials; the two know nothing of
 * each other.
 */
export function withLockout(k: number, quiet: number): Automaton {
  return explore("0 0", 3, (state, column) => {
    const [length, rest] = state.split(" ").map(Number) as [number, number];
    const stops = column === 0 && length + 1 === k;
    const held = column === 0 && !stops ? length + 1 : 0;
    const looks = column === 1 && rest === 0;
    return [`${held} ${looks ? quiet : Math.max(0, rest - 1)}`, (stops ? 1 : 0) + (looks ? 2 : 0)];
  });
}

/** Probabilities weights[c] / sum of the weights, in double-double. */
export function probabilitiesOf(weights: readonly bigint[]): ColumnProbabilities {
  const whole = weights.reduce((a, b) => a + b, 0n);
  const pairs = weights.map((weight) =>
    weight === 0n ? { high: 0, low: 0 } : doubleDoubleOfRatio(weight, whole),
  );
  return {
    high: Float64Array.from(pairs, ({ high }) => high),
    low: Float64Array.from(pairs, ({ low }) => low),
  };
}

/** The machine as the oracle wants it: runs end at outputs that share a bit with the mask. */
export function plain(automaton: Automaton, mask = 1): PlainMachine {
  const { states, columns, next, output } = automaton;
  return { states, columns, next, ends: (state, column) => (output[state * columns + column]! & mask) !== 0 };
}

/** A generator of numbers from 0 to 1, the same for the same seed (mulberry32). */
export function randomNumbers(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let t = Math.imul(state ^ (state >>> 15), state | 1);
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}

export type RandomCase = { readonly automaton: Automaton; readonly weights: readonly bigint[] };

/**
 * A random machine all of whose states are reached from state 0 and are sure to end, and probabilities from common to
 * as rare as 1e-9. A few transitions raise; `rarity` from 0 to 1 makes the means longer.
 */
export function randomMachine(random: () => number, mostStates: number, rarity: number): RandomCase {
  for (;;) {
    const states = 1 + Math.floor(random() * mostStates);
    const columns = 2 + Math.floor(random() * 4);
    const weights = Array.from({ length: columns }, (_, column) =>
      column === 0 ? 1_000_000_000n : BigInt(Math.ceil(10 ** (9 * (1 - rarity * random())) * random())),
    );
    const ladder = random() < 0.4;
    const next = Int32Array.from({ length: states * columns }, (_, at) => {
      const state = Math.floor(at / columns);
      if (ladder && at % columns > 0 && state + 1 < states) return state + 1;
      return ladder ? 0 : Math.floor(random() * states);
    });
    const output = new Int32Array(states * columns);
    const raises = 1 + Math.floor(random() * 3);
    for (let i = 0; i < raises; i++) {
      const state = ladder ? states - 1 : Math.floor(random() * states);
      output[state * columns + 1 + Math.floor(random() * (columns - 1))] = 1 + (i % 3);
    }
    const automaton = { states, columns, next, output };
    if (isSound(automaton)) return { automaton, weights };
  }
}

/** Whether state 0 leads to all states, and all lead to a raise, without passing one. */
function isSound({ states, columns, next, output }: Automaton): boolean {
  const forth = new Set([0]);
  for (const state of forth)
    for (let column = 0; column < columns; column++)
      if (output[state * columns + column] === 0) forth.add(next[state * columns + column]!);
  if (forth.size < states) return false;
  const hopeful = new Set<number>();
  for (let grown = true; grown; ) {
    grown = false;
    for (let state = 0; state < states; state++) {
      for (let column = 0; column < columns && !hopeful.has(state); column++) {
        const at = state * columns + column;
        if (output[at] === 0 && !hopeful.has(next[at]!)) continue;
        hopeful.add(state);
        grown = true;
      }
    }
  }
  return hopeful.size === states;
}

/**
 * The upper side's and the lower side's trackers of the zone tests, each as the ages of its successes, oldest first.
 */
type Zone = { readonly count: number; readonly window: number; readonly holds: (letter: number) => boolean };

/**
 * The zone tests of Western Electric (1956) over eight letters, cut at -3, -2, -1, 0, 1, 2, 3; `tests` names some of
 * C1 to C4 as Champ & Woodall (1987) do. One signal, after which all begins anew.
 */
export function zoneTests(tests: readonly ("C1" | "C2" | "C3" | "C4")[]): Automaton {
  const sides = (count: number, window: number, depth: number): Zone[] => [
    { count, window, holds: (letter) => letter >= 4 + depth },
    { count, window, holds: (letter) => letter <= 3 - depth },
  ];
  const all = { C1: sides(1, 1, 3), C2: sides(2, 3, 2), C3: sides(4, 5, 1), C4: sides(8, 8, 0) };
  const zones = tests.flatMap((test) => all[test]);
  const start = zones.map(() => "").join("|");
  return explore(start, 8, (state, letter) => {
    let raised = false;
    const following = state.split("|").map((held, z) => {
      const { count, window, holds } = zones[z]!;
      const ages = (held === "" ? [] : held.split(" ").map((age) => Number(age) + 1)).filter(
        (age) => age <= window,
      );
      if (holds(letter)) ages.push(1);
      if (holds(letter) && ages.length >= count) raised = true;
      while (ages.length > 0 && ages[0]! > window - count + ages.length) ages.shift();
      return ages.join(" ");
    });
    return raised ? [start, 1] : [following.join("|"), 0];
  });
}
