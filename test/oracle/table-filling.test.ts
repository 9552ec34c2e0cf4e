// The slow minimiser, on machines whose classes are known.
import { describe, expect, test } from "vitest";
import { scan, signal, policy as watching } from "./build.ts";
import { residuals } from "./residuals.ts";
import { classes, minimalStates } from "./table-filling.ts";

/** A counter modulo n on one symbol, its output 1 when it leaves 0. */
function counter(n: number): { next: number[]; output: number[] } {
  const states = Array.from({ length: n }, (_, state) => state);
  return { next: states.map((state) => (state + 1) % n), output: states.map((state) => Number(state === 0)) };
}

/** Reading binary digits, the remainder modulo n; accepting 0, seen as an output on every symbol. */
function remainders(n: number): { next: number[]; output: number[] } {
  const next: number[] = [];
  const output: number[] = [];
  for (let state = 0; state < n; state++)
    for (const digit of [0, 1]) {
      next.push((2 * state + digit) % n);
      output.push(Number(state === 0));
    }
  return { next, output };
}

const groups = (classOf: readonly number[]): string[] => {
  const members = new Map<number, number[]>();
  for (const [state, of] of classOf.entries()) members.set(of, [...(members.get(of) ?? []), state]);
  return [...members.values()].map((states) => states.join(" ")).sort();
};

describe("table filling", () => {
  test("a counter keeps all its states", () => {
    const { next, output } = counter(6);
    expect(minimalStates(next, output, 1)).toBe(6);
  });

  test("remainders modulo 6 and 8 (an exercise in automata)", () => {
    const six = remainders(6);
    expect(groups(classes(six.next, six.output, 2).classOf)).toEqual(["0", "1 4", "2 5", "3"]);
    const eight = remainders(8);
    expect(groups(classes(eight.next, eight.output, 2).classOf)).toEqual(["0", "1 3 5 7", "2 6", "4"]);
  });

  test("what cannot be reached does not count", () => {
    expect(minimalStates([0, 0, 1, 0], [0, 0, 1, 0], 2)).toBe(1);
    expect(classes([0, 0, 1, 0], [0, 0, 1, 0], 2).classOf).toEqual([0, -1]);
  });

  test("a residual machine is minimal already", () => {
    const machine = residuals(watching("ab", [signal(scan(3, 5, "a"))]), 5);
    const output = machine.raised.map((signals) => signals.join("+"));
    expect(minimalStates(machine.next, output, 2)).toBe(machine.states);
  });
});
