// Mean numbers of raises and long-run rates against exact path counts and exact balance equations; first causes.

import { describe, expect, test } from "vitest";
import { firstCauses } from "../../compiler/analysis/first-causes.ts";
import { countRaises, raiseRate } from "../../compiler/analysis/raise-counts.ts";
import type { Automaton } from "../../compiler/machine/automaton.ts";
import { exactCounts, exactEndings, exactRate, relativeError, toNumber } from "../oracle/exact-chain.ts";
import {
  blockRun,
  eitherRun,
  plain,
  probabilitiesOf,
  randomMachine,
  randomNumbers,
  run,
  withLockout,
} from "./machines.ts";

const anyOutput = () => true;

describe("rate", () => {
  test("300 random machines", () => {
    const random = randomNumbers(41);
    let tried = 0;
    while (tried < 300) {
      const { automaton, weights } = randomMachine(random, 10, random());
      let exact: ReturnType<typeof exactRate>;
      try {
        exact = exactRate(plain(automaton, -1), weights);
      } catch {
        // Several closed classes: no one rate.
        continue;
      }
      tried++;
      const { value, low, high } = raiseRate(automaton, anyOutput, probabilitiesOf(weights));
      expect(relativeError(value, exact)).toBeLessThan(1e-13);
      expect(low).toBeLessThanOrEqual(toNumber(exact) * (1 + 1e-15));
      expect(high).toBeGreaterThanOrEqual(toNumber(exact) * (1 - 1e-15));
    }
  });

  test("renewals: one over the mean run length", () => {
    const { value } = raiseRate(run(14), anyOutput, probabilitiesOf([1n, 9n]));
    expect(value * 111111111111110).toBeCloseTo(1, 13);
  });

  test("never raised: exactly 0", () => {
    expect(raiseRate(run(2), (output) => output === 2, probabilitiesOf([1n, 1n]))).toEqual({
      value: 0,
      low: 0,
      high: 0,
    });
  });

  test("several closed classes count with the chance to end in each", () => {
    // Column 0 leads to where every second letter raises, column 1 to where none does.
    const automaton: Automaton = {
      states: 3,
      columns: 2,
      next: Int32Array.of(1, 2, 1, 1, 2, 2),
      output: Int32Array.of(0, 0, 1, 0, 0, 0),
    };
    expect(raiseRate(automaton, anyOutput, probabilitiesOf([1n, 3n])).value).toBeCloseTo(1 / 16, 14);
    const { value, low, high } = countRaises(automaton, anyOutput, probabilitiesOf([1n, 3n]), 1001);
    expect(value).toBeCloseTo(1000 / 16, 9);
    expect(low).toBeLessThanOrEqual(1000 / 16);
    expect(high).toBeGreaterThanOrEqual(1000 / 16);
  });
});

describe("mean number among n", () => {
  test("120 random machines, n = 0 to 200", () => {
    const random = randomNumbers(42);
    for (let i = 0; i < 120; i++) {
      const { automaton, weights } = randomMachine(random, 7, random());
      const exact = exactCounts(plain(automaton, -1), weights, 200);
      for (const n of [0, 1, 2, 3, 10, 37, 200]) {
        const { value, low, high } = countRaises(automaton, anyOutput, probabilitiesOf(weights), n);
        expect(relativeError(value, exact[n]!)).toBeLessThan(1e-9);
        expect(low).toBeLessThanOrEqual(toNumber(exact[n]!) * (1 + 1e-15));
        expect(high).toBeGreaterThanOrEqual(toNumber(exact[n]!) * (1 - 1e-15));
      }
    }
  });

  test.each([
    ["blocks of 12", blockRun(3, 12), [1n, 1n], 1, 700],
    ["a rest of 30 trials", withLockout(2, 30), [1n, 1n, 3n], 2, 700],
    ["either run", eitherRun(3, 4), [1n, 1n], 3, 700],
  ] as const)("%s, beyond where the bracket closes", (_name, automaton, weights, mask, most) => {
    const exact = exactCounts(plain(automaton, mask), weights, most);
    const isRaise = (output: number) => (output & mask) !== 0;
    for (let n = 1; n <= most; n += 23) {
      const { value, low, high } = countRaises(automaton, isRaise, probabilitiesOf(weights), n);
      expect(relativeError(value, exact[n]!)).toBeLessThan(1e-12);
      expect(low).toBeLessThanOrEqual(toNumber(exact[n]!) * (1 + 1e-15));
      expect(high).toBeGreaterThanOrEqual(toNumber(exact[n]!) * (1 - 1e-15));
    }
  });

  test("among 1e15 trials: the rate, less what the start costs", () => {
    // Two in a row at 1/10: raises renew, so the mean number is n / m + (s^2 + m - m^2 ...) / (2 m^2) - 1 + …; to
    // 1e-14 it is n / m.
    const { value, low, high } = countRaises(run(2), anyOutput, probabilitiesOf([1n, 9n]), 1e15);
    expect(value / (1e15 / 110)).toBeCloseTo(1, 12);
    expect(high - low).toBeLessThan(1e-12 * value);
  });
});

describe("first causes", () => {
  test("a raise may have several causes, and the chances add up to more than 1", () => {
    const automaton = {
      states: 1,
      columns: 3,
      next: Int32Array.of(0, 0, 0),
      output: Int32Array.of(1, 2, 3),
      columnOf: Int32Array.of(0, 1, 2),
      broken: null,
      attributions: [
        [],
        [{ signal: 0, condition: "heavy" }],
        [
          { signal: 0, condition: "heavy" },
          { signal: 0, condition: "swing" },
        ],
        [{ signal: 1, condition: "light" }],
      ],
    };
    const chances = probabilitiesOf([1n, 2n, 5n]);
    const first = firstCauses(automaton, 0, chances)!;
    expect(Object.keys(first)).toEqual(["heavy", "swing"]);
    expect(first.heavy).toBeCloseTo(1, 14);
    expect(first.swing).toBeCloseTo(2 / 3, 14);
    const any = firstCauses(automaton, "any", chances)!;
    expect(any.light).toBeCloseTo(5 / 8, 14);
    expect(any.heavy).toBeCloseTo(3 / 8, 14);
  });

  test("200 random machines: the kinds of output that come first", () => {
    const random = randomNumbers(43);
    for (let i = 0; i < 200; i++) {
      const { automaton, weights } = randomMachine(random, 9, random());
      const attributed = {
        ...automaton,
        columnOf: Int32Array.from({ length: automaton.columns }, (_, column) => column),
        broken: null,
        attributions: [[], ...["one", "two", "three"].map((condition) => [{ signal: 0, condition }])],
      };
      const first = firstCauses(attributed, 0, probabilitiesOf(weights))!;
      for (const [kind, name] of ["one", "two", "three"].entries()) {
        const exact = exactEndings(
          plain(automaton, -1),
          weights,
          (state, column) => automaton.output[state * automaton.columns + column] === kind + 1,
        );
        expect(relativeError(first[name]!, exact[0]!)).toBeLessThan(1e-13);
      }
    }
  });
});
