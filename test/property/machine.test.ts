// The machine and the detector agree with the slow twin: every condition form over all strings of letters up to a length,
// and random policies on random streams. FC_SEED chooses the seed, CI fixes it; FC_RUNS says how many policies.
import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { type Case, randomCase, seed, shrinkingLimited } from "../oracle/arbitrary.ts";
import {
  and,
  andThen,
  asSet,
  not,
  or,
  overlapping,
  pattern,
  policy,
  row,
  rows,
  rule,
  run,
  scan,
  separate,
  set,
  signal,
  times,
  unless,
  weak,
} from "../oracle/build.ts";
import { type Condition, everyTrial, type Policy, type Row } from "../oracle/policy.ts";
import { uniforms } from "../oracle/simulate.ts";
import { conditionText, policyText, valueFor } from "../oracle/text.ts";
import { type Answer, answers, begin, type State, step } from "../oracle/twin.ts";
import { FORMS, watched } from "./forms.ts";
import { type Ours, ours } from "./ours.ts";

const RUNS = Number(process.env.FC_RUNS ?? 500);

const shown = (stream: readonly Row[]): string =>
  stream
    .map((row) => (row.length === 1 ? (row[0] ?? "?") : `(${row.map((x) => x ?? "?").join(", ")})`))
    .join(" ");

/** Fails with all that is needed to see who is right. */
function disagree(policy: Policy, stream: readonly Row[], twin: unknown, machine: unknown): never {
  const said = `twin: ${JSON.stringify(twin)}\nours: ${JSON.stringify(machine)}`;
  throw new Error(`at the last of these trials: ${shown(stream)}\n${said}\n\n${policyText(policy)}`);
}

function compiled(policy: Policy): Ours {
  const made = ours(policyText(policy));
  if (made === null) throw new Error(`too many states\n${policyText(policy)}`);
  return made;
}

/** Follows the twin and the machine's tables side by side through every string of these rows; returns how many raised. */
function compareAllStrings(of: Policy, letters: readonly Row[], longest: number): number {
  const machine = compiled(of);
  const { history, state: start } = begin(of);
  const stream: Row[] = [];
  let raises = 0;
  const extend = (twin: State, at: number): void => {
    if (stream.length === longest) return;
    for (const row of letters) {
      stream.push(row);
      const expected = step(history, twin, row);
      const found = machine.follow(at, row);
      const { raised } = expected.answer;
      if (raised.join() !== found.raised.join()) disagree(of, stream, raised, found.raised);
      raises += raised.length;
      extend(expected.state, found.state);
      stream.pop();
    }
  };
  extend(start, 0);
  return raises;
}

describe("every condition form, over all strings", () => {
  const named = FORMS.map((condition) => [conditionText(condition), condition] as const);

  test.each(named)("%s, nothing cleared", (_, condition) => {
    expect(compareAllStrings(watched(condition, "continue"), rows("abc"), 7)).toBeGreaterThan(0);
    compareAllStrings(watched(condition, "continue"), rows("ab"), 10);
  });

  test.each(named)("%s, cleared when raised, and by another's restart", (_, condition) => {
    compareAllStrings(watched(condition, "own"), rows("abc"), 7);
    compareAllStrings(watched(condition, "restart"), rows("abc"), 7);
  });

  test("with broken trials and blocks between", () => {
    for (const [index, condition] of FORMS.entries()) {
      const policy = {
        ...watched(condition, index % 2 === 0 ? "own" : "continue"),
        missing: "break" as const,
      };
      compareAllStrings(policy, rows("ab?"), 6);
      compareAllStrings({ ...policy, blocks: 4 }, rows("ac?"), 6);
    }
  });
});

describe("every condition form in its other places, over all strings", () => {
  // What shows when memory cleared: a run of three trials of any kind.
  const clearing = (condition: Condition, more: Partial<Policy>): Policy => ({
    ...watched(run(3, "any"), "continue"),
    clearAfter: [condition],
    ...more,
  });
  const waiting = (condition: Condition, more: Partial<Policy>): Policy => {
    const quiet = { kind: "until" as const, condition };
    return { ...watched(set("any"), "own"), signals: [signal(set("any"), { quiet })], ...more };
  };

  test.each([
    ["clear after", clearing],
    ["quiet until", waiting],
  ])("%s", (_, place) => {
    for (const condition of FORMS) {
      compareAllStrings(place(condition, {}), rows("abc"), 6);
      compareAllStrings(place(condition, { missing: "break" }), rows("ab?"), 6);
      compareAllStrings(place(condition, { blocks: 4, missing: "break" }), rows("ac?"), 7);
      compareAllStrings(place(condition, { clearBefore: [asSet("c")], blocks: 4 }), rows("abc"), 6);
    }
  });
});

/** Rules and their strings without regard to order; one rule on one string counts once. */
function reasonsOf(answer: Pick<Answer, "because">): string {
  const words = answer.because.map(({ rule, trials: [from, to] }) => `${rule} ${from}..${to}`);
  return [...new Set(words)].sort().join("; ");
}

function compareStream(policy: Policy, machine: Ours, stream: readonly Row[]): void {
  const expected = answers(policy, stream);
  const found = machine.raisesOf(stream);
  const values = stream.map((row, at) =>
    row.map((letter, index) => {
      const alphabet = policy.alphabets[index]!;
      if (letter === null) return alphabet.kind === "zones" ? Number.NaN : "";
      return valueFor(alphabet, letter, at % 2 === 0);
    }),
  );
  const byValue = machine.raisesOfValues(values);
  const causes = machine.causesOf(stream);
  for (const [at, answer] of expected.entries()) {
    const so = stream.slice(0, at + 1);
    const { raised } = answer;
    if (raised.join() !== found[at]!.raised.join()) disagree(policy, so, raised, found[at]!.raised);
    if (raised.join() !== byValue[at]!.join()) disagree(policy, so, raised, { byValue: byValue[at] });
    const reasons = [reasonsOf(answer), reasonsOf(found[at]!)];
    if (reasons[0] !== reasons[1]) disagree(policy, so, reasons[0], reasons[1]);
    const rules = new Set(answer.because.map(({ rule }) => rule));
    const same =
      causes === null ||
      (causes[at]!.every((rule) => rules.has(rule)) && rules.size === new Set(causes[at]).size);
    if (!same) disagree(policy, so, [...rules], { causes: causes[at] });
  }
}

describe("why, over all strings", () => {
  const [r1, r2, r3] = [rule("r1"), rule("r2"), rule("r3")];
  const rules = [
    { name: "r1", condition: run(2, "a") },
    { name: "r2", condition: weak(2, "b", 1, "c") },
    { name: "r3", condition: or(r1, pattern("cb")) },
  ];
  const formulas: readonly Condition[] = [
    or(r1, r2),
    or(or(r1, r2), r3),
    and(or(r1, r3), not(r2)),
    and(r3, or(r1, r2)),
    or(r2, and(r3, not(r1))),
    not(or(not(r3), r2)),
    and(or(r1, r2), not(and(not(r1), pattern("cb")))),
    or(andThen(r1, r2), or(scan(2, 3, "c"), unless(r2, r1, 2))),
    or(or(set("a"), run(2, "a")), pattern("ba")),
    and(not(not(r3)), not(not(or(r1, r2)))),
    or(separate(2, r1), overlapping(2, or(r1, r2))),
    // An operand that does not hold explains nothing, whatever completes in it; nor does one that holds under a `not`.
    or(set("a"), and(r3, not(r1))),
    and(set("a|b"), not(and(or(not(r1), set("a")), set("b")))),
  ];

  test.each(formulas.map((formula) => [conditionText(formula), formula] as const))("%s", (_, formula) => {
    for (const response of ["own", "continue"] as const) {
      const other = signal(or(r2, r3), { name: "other", response: "restart" });
      const of = policy("abc", [signal(formula, { response }), other], { rules });
      const alone = policy("abc", [signal(formula, { response })], { rules });
      for (const each of [of, alone]) {
        const machine = compiled(each);
        for (const stream of allStreams(each, 6)) compareStream(each, machine, stream);
      }
    }
  });
});

/** Every stream of the length. */
function allStreams(of: Policy, length: number): readonly (readonly Row[])[] {
  let streams: readonly (readonly Row[])[] = [[]];
  for (let t = 0; t < length; t++)
    streams = streams.flatMap((stream) => everyTrial(of).map((trial) => [...stream, trial]));
  return streams;
}

describe("long memories", () => {
  const c = (condition: Condition, more: Partial<Policy> = {}) => ({
    ...watched(condition, "continue"),
    ...more,
  });
  const own = (condition: Condition, more: Partial<Policy> = {}) => ({
    ...watched(condition, "own"),
    ...more,
  });
  const quiet = (count: number, condition: Condition): Policy =>
    policy("abc", [signal(condition, { quiet: { kind: "for", count } })], { missing: "break" });

  test.each<[string, Policy]>([
    ["scan over a word", c(scan(2, 31, "c"))],
    ["scan over two words", c(scan(2, 33, "c"))],
    ["scan of two whole words", c(scan(2, 64, "c"))],
    ["scan over three words", own(scan(2, 65, "c"))],
    ["scan of three in a long window", c(scan(3, 40, "c"))],
    ["scan nearly full", c(scan(33, 35, "a|b"))],
    ["long run", own(run(40, "a|b"))],
    ["long weak run", c(weak(12, "a", 9))],
    ["long gap", c(weak(2, "c", 40, "a|b"))],
    ["long pattern", c(pattern(row("c", times(33, 36, "a|b"), "c")))],
    ["long wait in a pattern", c(pattern(row("c", times(40, 40, "a|b"), "b")))],
    ["many completions", c(separate(50, set("a")))],
    ["many overlapping", c(overlapping(40, run(2, "a")))],
    ["then within a long time", c(andThen(run(2, "c"), pattern("ccc"), 60))],
    ["unless within a long time", c(unless(run(3, "c"), set("c"), 35))],
    ["long quiet", quiet(50, run(2, "c"))],
    ["long blocks", own(weak(6, "a", 2), { blocks: 37, missing: "break" })],
  ])("%s", (_, of) => {
    const uniform = uniforms(3);
    const machine = compiled(of);
    for (let count = 0; count < 8; count++) {
      // The share of c, and of missing trials, changes from stream to stream.
      const rare = [0.01, 0.03, 0.1, 0.4][count % 4]!;
      const stream = Array.from({ length: 130 }, (): Row => {
        const u = uniform();
        if (of.missing === "break" && u > 0.99) return [null];
        return [u < rare ? "c" : uniform() < 0.6 ? "a" : "b"];
      });
      compareStream(of, machine, stream);
    }
  });
});

describe("random policies", () => {
  test(`${RUNS} policies, eight streams each`, () => {
    let tooLarge = 0;
    let raising = 0;
    const check = ({ policy, strings }: Case): void => {
      const machine = ours(policyText(policy), 20_000);
      if (machine === null) {
        tooLarge++;
        return;
      }
      for (const stream of strings) compareStream(policy, machine, stream);
      if (machine.machine.output.some((raises) => raises !== 0)) raising++;
    };
    fc.assert(fc.property(randomCase(8, 32), shrinkingLimited(check)), { seed: seed(), numRuns: RUNS });
    expect(tooLarge).toBeLessThan(RUNS / 20);
    expect(raising).toBeGreaterThan(RUNS / 2);
  });
});
