/** Facts about machines: sizes with their sources, canonical bytes, merged letters, and the state budget. */
import { describe, expect, it } from "vitest";
import { compile } from "../../compiler/compile.ts";
import { machineFile } from "../../compiler/emit/machine-file.ts";
import { buildAttributedMachine } from "../../compiler/machine/build.ts";
import { coarsestPartition, equalAutomata, minimise } from "../../compiler/machine/minimise.ts";
import { compiled, policyOf, ZONE_TESTS } from "./compiled.ts";
import { rawScan } from "./raw-scan.ts";

describe("numbers of states", () => {
  // A one-sided k-of-m scan needs C(m, k-1) states: orders of the recurrences OEIS A118647 and A120118 for the small ones.
  it.each([
    ["3 of 4 a", 6],
    ["3 of 5 a", 10],
    ["6 of 12 a", 792],
    ["7 of 18 a", 18_564],
    ["8 of 20 a", 77_520],
    ["8 of 22 a", 170_544],
    ["2 of 40 a", 40],
    ["3 of 64 a", 2016],
    ["2000 a", 2000],
    ["5 a gap 3 of b", 17],
  ])("%s: %i", (condition, states) => {
    expect(compiled(policyOf(2, condition)).machine.states).toBe(states);
  });

  // Champ & Woodall (1987), Technometrics 29:393, as counted in the project's language reference: 7 and 215 states, and 283
  // when the rules are kept apart.
  it("the zone tests: 215, and 283 with the rules kept apart", () => {
    const { policy, machine } = compiled(ZONE_TESTS);
    expect(machine.states).toBe(215);
    expect(buildAttributedMachine(policy).value?.states).toBe(283);
    expect(compiled(ZONE_TESTS.replace(" or four or eight", "")).machine.states).toBe(7);
  });

  it("`quiet for n` adds n states, `blocks of n` at most n times as many", () => {
    expect(compiled(policyOf(2, "a quiet for 5000")).machine.states).toBe(5001);
    expect(compiled(policyOf(2, "2 a", "blocks of 500")).machine.states).toBe(999);
  });
});

describe("equal policies give equal bytes", () => {
  const tables = (text: string) => {
    const { policy, machine } = compiled(text);
    return JSON.stringify(machineFile(policy, machine).tables);
  };
  it.each([
    ["2 a gap 0 of b", "2 a"],
    ["2 of 2 a", "2 a"],
    ["[a a]", "2 a"],
    ["[a 0..2 b a]", "2 a gap 2 of b"],
    ["a and not b", "a"],
    ["2 a or 3 a", "2 a"],
    ["not not [a b]", "[a b]"],
    ["1 separate 2 a", "2 a"],
    ["a then a within 1", "2 a"],
    ["{a, b} except b", "a"],
    ["3 separate a", "3 overlapping a"],
  ])("%s is %s", (left, right) => {
    expect(tables(policyOf(3, left))).toBe(tables(policyOf(3, right)));
  });

  it("letters that nothing tells apart share a column", () => {
    const { machine } = compiled(policyOf(15, "3 {c, d, e}"));
    expect(machine.columns).toBe(2);
    expect([...machine.columnOf.slice(0, 6)]).toEqual([0, 0, 1, 1, 1, 0]);
  });

  it("a letter told apart by a condition that never matters is merged again", () => {
    expect(compiled(policyOf(3, "2 a or 3 a and b")).machine.columns).toBe(2);
  });
});

describe("minimising", () => {
  it("the raw windows of `8 of 20`: 94,184 states become 77,520", () => {
    const raw = rawScan(8, 20);
    expect(raw.states).toBe(94_184);
    const minimal = minimise(raw);
    expect(minimal.states).toBe(77_520);
    expect(equalAutomata(minimal, minimise(minimal))).toBe(true);
    const { machine } = compiled(policyOf(2, "8 of 20 b"));
    expect(machine.states).toBe(minimal.states);
  });

  // Binary counters, accepting 0, letters 0 and 1 appended: an automata exercise; classes as in the published check values.
  it.each([
    [6, [[0], [3], [1, 4], [2, 5]]],
    [8, [[0], [4], [2, 6], [1, 3, 5, 7]]],
  ])("the remainder of a binary number by %i", (divisor, classes) => {
    const states = [...Array(divisor).keys()];
    // As an acceptor: the state itself is told by the output of every transition out of it.
    const automaton = {
      states: divisor,
      columns: 2,
      next: Int32Array.from(states.flatMap((state) => [(2 * state) % divisor, (2 * state + 1) % divisor])),
      output: Int32Array.from(states.flatMap((state) => [state === 0 ? 1 : 0, state === 0 ? 1 : 0])),
    };
    const blockOf = coarsestPartition(automaton);
    const found = [...new Set(blockOf)].map((block) => states.filter((state) => blockOf[state] === block));
    const byFirst = (a: readonly number[], b: readonly number[]) => (a[0] as number) - (b[0] as number);
    expect(found.sort(byFirst)).toEqual([...classes].sort(byFirst));
  });
});

describe("the state budget", () => {
  it.each([
    ["30 of 60 a", /"30 of 60 a" would need about 1\.1e\+17 states/],
    ["[a 40 any]", /"\[a 40 any\]" would need more than 2,000,000 states/],
    ["a unless 2 b within 200", /would need more than 2,000,000 states/],
    ["[0..1000000 a b]", /would need more than 2,000,000 states/],
  ])("%s", (condition, message) => {
    const { machine, diagnostics } = compile(policyOf(2, condition));
    expect(machine).toBeUndefined();
    expect(diagnostics.map(({ code }) => code)).toEqual(["too_many_states"]);
    expect(diagnostics[0]?.message).toMatch(message);
    expect(diagnostics[0]?.hint).toBeTruthy();
  });

  it("`mostStates` trips it at any size, and names what was being built", () => {
    const text = `${policyOf(2, "10 a")}signal t when 7 b quiet for 30\n`;
    const { states } = compiled(text).machine;
    expect(compile(text, { mostStates: states - 1 }).diagnostics.map(({ code }) => code)).toEqual([
      "too_many_states",
    ]);
    expect(compile(text, { mostStates: 5 }).diagnostics[0]?.message).toMatch(
      /"10 a" would need about 10 states; the budget is 5/,
    );
    expect(compile(text, { mostStates: 20 }).diagnostics[0]?.message).toMatch(/signal t/);
  });
});
