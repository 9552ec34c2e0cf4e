// Why a signal was raised: attribution through and, or, not; the shortest completing string, sought here by trying every
// stretch; what is said when the memory kept is too short. And the parts, stepped, against the tables they multiply to.

import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { Detector, openMachine, type Reason } from "../../runtime/index.ts";
import type {
  AutomatonInFile,
  FormulaInFile,
  MachineFile,
  ReasonsInFile,
} from "../../runtime/machine-file.ts";
import { type Draft, fileOf, LOW_HIGH, oneOf, reasonsOf, runOf } from "./machines.ts";

function detect(file: Draft, remember = 1000): Detector {
  const { machine, problems } = openMachine(file);
  expect(problems).toEqual([]);
  return new Detector(machine!, { why: true, remember });
}

function letters(names: readonly string[]): MachineFile["statistics"] {
  return [{ name: "v", kind: "letters", letters: names, texts: names.map(() => null), missing: null }];
}

/** Reads a string of single letters, and gives the reasons after the last. */
function reasonsAfter(detector: Detector, text: string): string[] {
  for (const letter of text) detector.observe(letter === "." ? null : letter);
  return detector.because().map(said);
}

function said({ signal, rule, from, to, complete }: Reason): string {
  return `${signal} ${rule} ${from}..${to}${complete ? "" : " began before"}`;
}

const ABC = ["a", "b", "c"];
// Rules over a, b, c: rule0 holds at a, rule1 at b, rule2 at the second of two a in a row.
const rules = [oneOf(0, 3), oneOf(1, 3), runOf(2, 0, 3)];

describe("attribution", () => {
  const formulas: [string, FormulaInFile, string, string[]][] = [
    ["a rule", 0, "a", ["s0 rule0 1..1"]],
    ["or: the one that holds", { or: [0, 1, 2] }, "ca", ["s0 rule0 2..2"]],
    ["or: both that hold", { or: [0, 1, 2] }, "caa", ["s0 rule0 3..3", "s0 rule2 2..3"]],
    ["and: both", { and: [0, 2] }, "caa", ["s0 rule0 3..3", "s0 rule2 2..3"]],
    ["a rule that does not hold explains nothing", { and: [0, { not: 1 }] }, "a", ["s0 rule0 1..1"]],
    ["nor does one that stands against", { and: [0, { not: { and: [1, 2] } }] }, "aa", ["s0 rule0 2..2"]],
    ["not not", { not: { not: 0 } }, "a", ["s0 rule0 1..1"]],
    [
      "not or: every operand",
      { not: { or: [{ not: 0 }, { not: 2 }] } },
      "aa",
      ["s0 rule0 2..2", "s0 rule2 1..2"],
    ],
    ["not and: what does not hold", { not: { and: [{ not: 0 }, { not: 2 }] } }, "a", ["s0 rule0 1..1"]],
    ["one rule said twice is one reason", { or: [0, 0] }, "a", ["s0 rule0 1..1"]],
    ["nothing completed", { not: 0 }, "b", []],
  ];
  test.each(formulas)("%s", (_, formula, text, expected) => {
    const file = fileOf(letters(ABC), reasonsOf(3, rules, [{ formula, response: "continue" }]));
    expect(reasonsAfter(detect(file), text)).toEqual(expected);
  });

  test("two mentions of a rule say the same once, and each its own where they differ", () => {
    const conditions = [
      { name: "twice", automaton: 2 },
      { name: "twice", automaton: 2 },
      { name: "b once", automaton: 1 },
    ];
    const file = fileOf(letters(ABC), reasonsOf(3, rules, [{ conditions, formula: { or: [0, 1, 2] } }]));
    expect(reasonsAfter(detect(file), "caa")).toEqual(["s0 twice 2..3"]);
    expect(reasonsAfter(detect(file), "b")).toEqual(["s0 b once 1..1"]);
  });

  test("several signals, in declared order", () => {
    const signals = [
      { conditions: [{ name: "aa", automaton: 2 }], formula: 0 },
      { conditions: [{ name: "a", automaton: 0 }], formula: 0 },
    ];
    const file = fileOf(letters(ABC), reasonsOf(3, rules, signals));
    expect(reasonsAfter(detect(file), "ca")).toEqual(["s1 a 2..2"]);
    expect(reasonsAfter(detect(file), "caa")).toEqual(["s0 aa 2..3", "s1 a 3..3"]);
    expect(reasonsAfter(detect(file), "caac")).toEqual([]);
  });

  test("not beyond the last clear, of the signal or of everything", () => {
    const spaced: AutomatonInFile = { states: 2, next: [1, 0, 0, 1, 1, 1], completes: [0, 0, 0, 0, 1, 0] };
    // An a, then a b any time after it.
    const file = fileOf(letters(ABC), reasonsOf(3, [spaced], [{}], { block: 6 }));
    expect(reasonsAfter(detect(file), "aab")).toEqual(["s0 rule0 2..3"]);
    expect(reasonsAfter(detect(file), "acccb")).toEqual(["s0 rule0 1..5"]);
    expect(reasonsAfter(detect(file), "accccab")).toEqual([]);
    expect(reasonsAfter(detect(file), "cccccaab")).toEqual(["s0 rule0 7..8"]);
  });
});

describe("the memory kept", () => {
  const long: AutomatonInFile = { states: 2, next: [1, 0, 0, 1, 1, 1], completes: [0, 0, 0, 0, 1, 0] };
  const file = fileOf(letters(ABC), reasonsOf(3, [long], [{}]));

  test.each([
    [10, "acccb", "s0 rule0 1..5"],
    [5, "acccb", "s0 rule0 1..5"],
    [4, "acccb", "s0 rule0 2..5 began before"],
    [1, "acccb", "s0 rule0 5..5 began before"],
    [3, "cccccccccacb", "s0 rule0 10..12"],
  ])("of %i trials after %s", (remember, text, expected) => {
    expect(reasonsAfter(detect(file, remember), text)).toEqual([expected]);
  });

  test("a run of 2,000 is found when as many are kept", () => {
    const run = fileOf(letters(ABC), reasonsOf(3, [runOf(2000, 0, 3)], [{}]));
    expect(reasonsAfter(detect(run, 4000), `b${"a".repeat(2000)}`)).toEqual(["s0 rule0 2..2001"]);
    expect(reasonsAfter(detect(run), `b${"a".repeat(2000)}`)).toEqual(["s0 rule0 1002..2001 began before"]);
  });

  test("an answer from the longest memory takes no time to speak of", () => {
    const detector = detect(file, 65536);
    const begin = performance.now();
    detector.observe("a");
    for (let i = 0; i < 65534; i++) detector.observe("c");
    expect(reasonsAfter(detector, "b")).toEqual(["s0 rule0 1..65536"]);
    expect(performance.now() - begin).toBeLessThan(2000);
  });
});

/** Random parts over three letters: small machines with no other law than to be machines. */
const parts: fc.Arbitrary<ReasonsInFile> = fc
  .array(fc.integer({ min: 1, max: 3 }), { minLength: 2, maxLength: 4 })
  .chain((sizes) => {
    const automata = sizes.map((states) =>
      fc.record({
        states: fc.constant(states),
        next: fc.array(fc.nat(states - 1), { minLength: 3 * states, maxLength: 3 * states }),
        completes: fc.array(fc.constantFrom(0, 0, 1), { minLength: 3 * states, maxLength: 3 * states }),
      }),
    );
    const index = fc.nat(sizes.length - 1);
    const formula = fc.letrec<{ formula: FormulaInFile }>((tie) => ({
      formula: fc.oneof(
        { maxDepth: 3, withCrossShrink: true },
        fc.nat(1),
        fc.record({ not: tie("formula") }),
        fc.record({ and: fc.array(tie("formula"), { minLength: 1, maxLength: 3 }) }),
        fc.record({ or: fc.array(tie("formula"), { minLength: 1, maxLength: 3 }) }),
      ),
    })).formula;
    const signal = fc.record({
      conditions: fc
        .tuple(index, index)
        .map((pair) => pair.map((automaton, i) => ({ name: `r${i}`, automaton }))),
      formula,
      response: fc.constantFrom("own" as const, "restart" as const, "continue" as const),
      quiet: fc.oneof(
        fc.constant(null),
        fc.record({ for: fc.integer({ min: 1, max: 3 }) }),
        fc.record({ until: index }),
      ),
    });
    return fc.record({
      columns: fc.constant(3),
      columnOf: fc.constant([0, 1, 2]),
      automata: fc.tuple(...automata),
      signals: fc.array(signal, { minLength: 1, maxLength: 2 }),
      clearBefore: fc.array(fc.constantFrom(0, 0, 0, 1), { minLength: 3, maxLength: 3 }),
      clearAfter: fc.array(index, { maxLength: 1 }),
      block: fc.constantFrom(null, null, 1, 2, 5),
    });
  });

/** The shortest completing string by trying every stretch that ends at the last trial, on plain lists. */
function shortest({ next, completes }: AutomatonInFile, trials: readonly number[]): number | undefined {
  for (let length = 1; length <= trials.length; length++) {
    let state = 0;
    let done = false;
    for (const letter of trials.slice(-length)) {
      done = completes[state * 3 + letter] === 1;
      state = next[state * 3 + letter]!;
    }
    if (done) return length;
  }
  return undefined;
}

describe("random parts", () => {
  const seed = 20240117;
  const stream = fc.array(fc.constantFrom("a", "b", "c", "."), { minLength: 1, maxLength: 60 });

  test("raise what their product raises, at every trial", () => {
    const property = fc.property(parts, stream, (reasons, text) => {
      const detector = detect(fileOf(letters(ABC), reasons, "break"));
      for (const letter of text) {
        detector.observe(letter === "." ? null : letter);
        expect(detector.partsAgree).toBe(true);
      }
    });
    fc.assert(property, { seed, numRuns: 600 });
  });

  test("have the shortest strings that trying every stretch finds", () => {
    const property = fc.property(parts, stream, (drawn, text) => {
      // With `continue` and nothing else that clears, memory reaches back to the first trial.
      const signals = drawn.signals.map((signal) => ({
        ...signal,
        response: "continue" as const,
        quiet: null,
      }));
      const reasons = { ...drawn, signals, clearBefore: [0, 0, 0], clearAfter: [], block: null };
      const file = fileOf(letters(ABC), reasons);
      const [detector, forgetful] = [detect(file), detect(file, 4)];
      const trials: number[] = [];
      for (const letter of text) {
        if (letter === ".") continue;
        detector.observe(letter);
        forgetful.observe(letter);
        trials.push(ABC.indexOf(letter));
        for (const { signal, rule, from, to, complete } of detector.because()) {
          const { conditions } = signals[Number(signal.slice(1))]!;
          const { automaton } = conditions.find(({ name }) => name === rule)!;
          const length = shortest(reasons.automata[automaton]!, trials);
          expect({ from, to, complete }).toEqual({
            from: trials.length - length! + 1,
            to: trials.length,
            complete: true,
          });
        }
        const short = detector.because().map((reason) => {
          const kept = Math.max(trials.length - 3, 1);
          return reason.from >= kept ? reason : { ...reason, from: kept, complete: false };
        });
        expect(forgetful.because()).toEqual(short);
      }
    });
    fc.assert(property, { seed, numRuns: 600 });
  });
});

test("a file whose parts raise something else than its tables is told from one that does not", () => {
  const file = fileOf([LOW_HIGH], reasonsOf(2, [oneOf(1, 2)], [{}]));
  const detector = detect({ ...file, tables: { ...file.tables, raises: [1, 0] } });
  expect(detector.observe(-1)).toBe(1);
  expect(detector.partsAgree).toBe(false);
  expect(detector.because()).toEqual([]);
});
