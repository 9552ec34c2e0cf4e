// What one signal alone sees of a machine of several.

import { describe, expect, test } from "vitest";
import { longRunLaw } from "../../compiler/analysis/long-run.ts";
import { countRaises, raiseRate } from "../../compiler/analysis/raise-counts.ts";
import { prepareRunLengths } from "../../compiler/analysis/run-lengths.ts";
import { viewOf } from "../../compiler/analysis/view.ts";
import { eitherRun, probabilitiesOf, run, scan, withLockout } from "./machines.ts";

const first = (output: number) => (output & 1) !== 0;
const second = (output: number) => (output & 2) !== 0;
const weights = probabilitiesOf([5n, 1n, 94n]);

describe("views", () => {
  const machine = withLockout(2, 5000);

  test("each signal keeps its own memory only", () => {
    expect(machine.states).toBe(10_001);
    expect(viewOf(machine, first).states).toBe(2);
    expect(viewOf(machine, second).states).toBe(5001);
    expect(viewOf(machine, (output) => output).states).toBe(10_001);
  });

  test("the same question has the same view; one told apart already is the machine itself", () => {
    expect(viewOf(machine, first)).toBe(viewOf(machine, (output) => output % 2 === 1));
    const single = scan(3, 5);
    expect(viewOf(single, first)).toBe(single);
    expect(viewOf(eitherRun(2, 3), () => true).output).toEqual(Int32Array.of(0, 0, 1, 0, 0, 0, 0, 1));
  });

  test("run length, long-run law, rate and number are those of the signal alone", () => {
    const alone = run(2);
    const chances = probabilitiesOf([5n, 95n]);
    expect(prepareRunLengths(machine, first).under(weights).mean()).toBe(
      prepareRunLengths(alone, first).under(chances).mean(),
    );
    expect(raiseRate(machine, first, weights).value).toBe(raiseRate(alone, first, chances).value);
    expect(countRaises(machine, first, weights, 1e6).value).toBe(
      countRaises(alone, first, chances, 1e6).value,
    );
    const [ours, theirs] = [longRunLaw(machine, first, weights), longRunLaw(alone, first, chances)];
    expect("law" in ours && "law" in theirs && ours.law.weights).toEqual(
      "law" in theirs && theirs.law.weights,
    );
  });

  test("a signal that no output raises never ends", () => {
    const lengths = prepareRunLengths(machine, (output) => (output & 4) !== 0).under(weights);
    expect(lengths.everProbability()).toBe(0);
    expect(viewOf(machine, (output) => (output & 4) !== 0).states).toBe(1);
  });
});
