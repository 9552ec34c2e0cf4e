// The detector on small machines written by hand: what is raised, by number of trial, and how missing values are met.

import { describe, expect, test } from "vitest";
import { Detector, NO_LETTER, openMachine, REFUSED, type Value } from "../../runtime/index.ts";
import {
  type Draft,
  EIGHT_ZONES,
  fileOf,
  GOOD_BAD,
  LOW_HIGH,
  oneOf,
  reasonsOf,
  runOf,
  twoInARow,
} from "./machines.ts";

function detect(file: Draft, options = {}): Detector {
  const { machine, problems } = openMachine(file);
  expect(problems).toEqual([]);
  return new Detector(machine!, options);
}

/** What each reading raises, with `R` for a refused one. */
function feed(detector: Detector, values: readonly (Value | readonly Value[])[]): (number | "R")[] {
  return values.map((value) => {
    const raises = Array.isArray(value) ? detector.observe(...value) : detector.observe(value as Value);
    return raises === REFUSED ? "R" : raises;
  });
}

/** Letters `h` and `l` as numbers above and below 0, `.` as a missing value. */
function hl(text: string): number[] {
  return [...text].map((c) => (c === "h" ? 1 : c === "l" ? -1 : Number.NaN));
}

const two = fileOf([LOW_HIGH], reasonsOf(2, [runOf(2, 1, 2)], [{}]));

describe("two in a row", () => {
  test.each([
    ["hand-written tables", twoInARow()],
    ["multiplied parts", two],
  ])("%s: raised at every second high of a run, and memory is clear then", (_, file) => {
    for (const why of [false, true]) {
      const detector = detect(file, { why });
      expect(feed(detector, hl("hhhhhlhlhh"))).toEqual([0, 1, 0, 1, 0, 0, 0, 0, 0, 1]);
      expect(detector.trial).toBe(10);
      expect(detector.partsAgree).toBe(true);
    }
  });

  test("±∞ are the end letters, −0 is 0, the owner has the cut", () => {
    const detector = detect(twoInARow());
    expect(feed(detector, [Infinity, -0, -Infinity, 0, 0])).toEqual([0, 1, 0, 0, 1]);
  });

  test("letters by index", () => {
    const detector = detect(twoInARow());
    expect([1, 1, 0, 1, 1].map((letter) => detector.observeLetter(letter))).toEqual([0, 1, 0, 0, 1]);
  });

  test("clear forgets, and the count of trials goes on", () => {
    const detector = detect(twoInARow(), { why: true });
    feed(detector, hl("h"));
    detector.clear();
    expect(feed(detector, hl("hh"))).toEqual([0, 1]);
    expect(detector.because()).toEqual([{ signal: "s0", rule: "rule0", from: 2, to: 3, complete: true }]);
    expect(detector.trial).toBe(3);
    detector.clear();
    expect(detector.because()).toEqual([]);
    expect(detector.state).toBe(0);
  });
});

describe("missing values", () => {
  const bad: readonly Value[] = [Number.NaN, undefined, null, "", "1"];

  test("refuse: said, and the detector stays as it was", () => {
    for (const value of bad) {
      const detector = detect(twoInARow("refuse"), { why: true });
      expect(feed(detector, [1, value, 1])).toEqual([0, "R", 1]);
      expect([detector.trial, detector.readings]).toEqual([2, 3]);
      expect(detector.because()).toEqual([{ signal: "s0", rule: "rule0", from: 1, to: 2, complete: true }]);
      feed(detector, [value]);
      expect(detector.because()).toEqual([]);
    }
  });

  test("skip: the same without a word", () => {
    const detector = detect(twoInARow("skip"));
    expect(feed(detector, [1, Number.NaN, 1])).toEqual([0, 0, 1]);
    expect([detector.trial, detector.readings]).toEqual([2, 3]);
  });

  test("break: memory clears, and it is a trial", () => {
    const detector = detect(twoInARow("break"), { why: true });
    expect(feed(detector, [1, Number.NaN, 1, 1])).toEqual([0, 0, 0, 1]);
    expect([detector.trial, detector.readings]).toEqual([4, 4]);
    expect(detector.because()).toEqual([{ signal: "s0", rule: "rule0", from: 3, to: 4, complete: true }]);
    expect(detector.observeMissing()).toBe(0);
  });

  test("as a letter of the statistic, or as one added", () => {
    const own = detect({ ...twoInARow(), statistics: [{ ...LOW_HIGH, missing: 1 }] });
    expect(feed(own, [1, Number.NaN, Number.NaN, null])).toEqual([0, 1, 0, 1]);
    expect(own.observeMissing()).toBe(0);
    const gone = { ...LOW_HIGH, letters: ["low", "high", "gone"], missing: 2 };
    const added = detect(fileOf([gone], reasonsOf(3, [runOf(2, 2, 3)], [{}])));
    expect(feed(added, [1, Number.NaN, Number.NaN, Number.NaN])).toEqual([0, 0, 1, 0]);
    expect(added.readings).toBe(4);
  });

  test("an index that is no letter is a missing value", () => {
    for (const letter of [NO_LETTER, 2, 0.5, Number.NaN, Infinity, 255]) {
      expect(detect(twoInARow()).observeLetter(letter)).toBe(REFUSED);
    }
    expect(detect(twoInARow()).observeLetter()).toBe(REFUSED);
    expect(
      detect({ ...twoInARow(), statistics: [{ ...LOW_HIGH, missing: 1 }] }).observeLetter(NO_LETTER),
    ).toBe(0);
  });
});

describe("two statistics", () => {
  // The symbols are (low, good), (low, bad), (high, good), (high, bad).
  const file = fileOf([LOW_HIGH, GOOD_BAD], reasonsOf(4, [oneOf(3, 4)], [{}]));

  test("the first varies slowest; a category by its name or its text", () => {
    const detector = detect(file);
    const values: Value[][] = [[1, "bad"], [1, "NOK"], [1, "good"], [-1, "bad"], [0, "bad"]]; // biome-ignore format: pairs
    expect(feed(detector, values)).toEqual([1, 1, 0, 0, 1]);
    expect([
      detector.observeLetter(1, 1),
      detector.observeLetter(0, 1),
      detector.observeLetter(1, 0),
    ]).toEqual([1, 0, 0]);
  });

  test("one value missing makes the trial missing", () => {
    const detector = detect(file);
    expect(feed(detector, [[1, "no idea"], [Number.NaN, "bad"], [1], [], 1])).toEqual([
      "R",
      "R",
      "R",
      "R",
      "R",
    ]);
    expect(detector.observeLetter(1)).toBe(REFUSED);
    expect(detector.trial).toBe(0);
  });

  test("unless each missing one has a letter", () => {
    const detector = detect({ ...file, statistics: [LOW_HIGH, { ...GOOD_BAD, missing: 1 }] });
    expect(feed(detector, [[1], [1, 5 as Value], [null, "bad"]])).toEqual([1, 1, "R"]);
    expect(detector.observeLetter(1, NO_LETTER)).toBe(1);
    expect(detector.observeMissing()).toBe(REFUSED);
  });
});

describe("responses, quiet times and clearing", () => {
  const high2 = runOf(2, 1, 2);
  const high = oneOf(1, 2);
  const low = oneOf(0, 2);
  const only = { conditions: [{ name: "twice", automaton: 0 }], formula: 0 } as const;
  const until = { ...only, quiet: { until: 1 } } as const;

  test.each([
    [
      "continue: raised at every high but the first",
      reasonsOf(2, [high2], [{ response: "continue" }]),
      "hhhh",
      [0, 1, 1, 1],
    ],
    ["quiet for 2", reasonsOf(2, [high], [{ quiet: { for: 2 } }]), "hhhhlh", [1, 0, 0, 1, 0, 0]],
    [
      "quiet for 2, with clear memory after it",
      reasonsOf(2, [high2], [{ quiet: { for: 2 } }]),
      "hhhhhh",
      [0, 1, 0, 0, 0, 1],
    ],
    ["quiet until low", reasonsOf(2, [high2, low], [until]), "hhhhlhh", [0, 1, 0, 0, 0, 0, 1]],
    ["quiet until two lows", reasonsOf(2, [high, runOf(2, 0, 2)], [until]), "hlhllh", [1, 0, 0, 0, 0, 1]],
    ["blocks of 3", reasonsOf(2, [high2], [{}], { block: 3 }), "lhhlhhhhl", [0, 0, 1, 0, 0, 1, 0, 1, 0]],
    [
      "memory ends at the edge of a block",
      reasonsOf(2, [high2], [{}], { block: 3 }),
      "llhhhh",
      [0, 0, 0, 0, 1, 0],
    ],
    [
      "quiet times do not",
      reasonsOf(2, [high], [{ quiet: { for: 3 } }], { block: 2 }),
      "hhhhh",
      [1, 0, 0, 0, 1],
    ],
    ["clear before low", reasonsOf(2, [runOf(2, 0, 2)], [{}], { clearBefore: [1, 0] }), "lllh", [0, 0, 0, 0]],
    [
      "clear after two highs, with the place in the block",
      reasonsOf(2, [oneOf(0, 2), high2], [only], { clearAfter: [1], block: 5 }),
      "hhll",
      [0, 0, 1, 1],
    ],
    [
      "clear after ends a quiet time",
      reasonsOf(2, [low, high2], [{ ...only, quiet: { for: 9 } }], { clearAfter: [1] }),
      "llhhl",
      [1, 0, 0, 0, 1],
    ],
    [
      "and one that begins at that trial",
      reasonsOf(2, [high], [{ quiet: { for: 9 } }], { clearAfter: [0] }),
      "hh",
      [1, 1],
    ],
  ] as const)("%s", (_, reasons, text, raises) => {
    const detector = detect(fileOf([LOW_HIGH], reasons), { why: true });
    expect(feed(detector, hl(text))).toEqual(raises);
    expect(detector.partsAgree).toBe(true);
  });

  const conditions = (automaton: number) => [{ name: `rule${automaton}`, automaton }];

  test("restart clears the memory and the quiet times of the others", () => {
    const signals = [
      { conditions: conditions(0), response: "restart" as const },
      { conditions: conditions(1), quiet: { for: 2 } },
    ];
    const detector = detect(fileOf([LOW_HIGH], reasonsOf(2, [high2, high], signals)), { why: true });
    expect(feed(detector, hl("hhhhh"))).toEqual([0b10, 0b01, 0b10, 0b01, 0b10]);
    expect(detector.partsAgree).toBe(true);
  });

  test("restart cancels no quiet time that begins at the same trial", () => {
    const signals = [
      { conditions: conditions(0), response: "restart" as const, quiet: { for: 5 } },
      { conditions: conditions(0), quiet: { for: 3 } },
    ];
    const detector = detect(fileOf([LOW_HIGH], reasonsOf(2, [high2], signals)), { why: true });
    expect(feed(detector, hl("hhhhhhhhh"))).toEqual([0, 0b11, 0, 0, 0, 0, 0b10, 0, 0b01]);
    expect(detector.partsAgree).toBe(true);
  });

  test("thirty-one signals, and the refusal is none of them", () => {
    const signals = Array.from({ length: 31 }, () => ({ response: "continue" as const }));
    const detector = detect(fileOf([LOW_HIGH], reasonsOf(2, [high], signals)), { why: true });
    expect(detector.observe(1)).toBe(0x7fffffff);
    expect(detector.namesOf(detector.observe(1))).toHaveLength(31);
    expect(detector.because()).toHaveLength(31);
    expect(detector.namesOf(REFUSED)).toEqual([]);
    expect(detector.namesOf(0b101)).toEqual(["s0", "s2"]);
  });
});

describe("batches", () => {
  const files: [string, Draft][] = [
    [
      "refuse",
      fileOf([EIGHT_ZONES], reasonsOf(8, [runOf(2, 7, 8), runOf(3, 6, 8)], [{ formula: { or: [0, 1] } }])),
    ],
    ["skip", fileOf([EIGHT_ZONES], reasonsOf(8, [runOf(2, 5, 8)], [{}]), "skip")],
    [
      "break",
      fileOf([EIGHT_ZONES], reasonsOf(8, [runOf(2, 5, 8)], [{ quiet: { for: 2 } }], { block: 7 }), "break"),
    ],
    ["as", fileOf([{ ...EIGHT_ZONES, missing: 5 }], reasonsOf(8, [runOf(2, 5, 8)], [{}]))],
    ["two", fileOf([EIGHT_ZONES, GOOD_BAD], reasonsOf(16, [runOf(2, 9, 16)], [{}]), "break")],
  ];
  const values = Float64Array.from({ length: 997 }, (_, i) =>
    i % 13 === 5 ? Number.NaN : 4.2 * Math.sin(i * i),
  );
  const words = Array.from(values, (_, i) => ["good", "NOK", "bad", "?"][(i * i) % 4]!);

  test.each(files)("missing %s: the same as one at a time", (_, file) => {
    for (const why of [false, true]) {
      const [single, batch, letters, split] = [0, 1, 2, 3].map(() => detect(file, { why }));
      const columns = file.statistics.length === 1 ? [values] : [values, words];
      const expected = Array.from(values, (value, i) => single!.observe(value, words[i]));
      const raises = new Uint32Array(values.length);
      batch!.observeAll(columns.length === 1 ? values : columns, raises);
      expect([...raises]).toEqual(expected);
      const indices = columns.map((column, i) => {
        const { cuts } = EIGHT_ZONES as Extract<typeof EIGHT_ZONES, { kind: "zones" }>;
        const of = (value: Value) =>
          i === 1
            ? ["good", "bad", "NOK"].indexOf(value as string) === 2
              ? 1
              : ["good", "bad"].indexOf(value as string)
            : Number.isNaN(value)
              ? -1
              : cuts.filter(({ at, owner }) => (value as number) > at || (value === at && owner === "above"))
                  .length;
        return Uint8Array.from(column as readonly Value[], of);
      });
      raises.fill(0);
      letters!.observeLetters(indices.length === 1 ? indices[0]! : indices, raises);
      expect([...raises]).toEqual(expected);
      const parts = [0, 1, 500, 500, 997];
      const pieces = parts.slice(1).flatMap((end, k) => {
        const piece = new Uint32Array(end - parts[k]!);
        split!.observeAll(
          columns.map((column) => column.slice(parts[k]!, end)),
          piece,
        );
        return [...piece];
      });
      expect(pieces).toEqual(expected);
      for (const detector of [batch!, letters!, split!])
        expect(detector.snapshot()).toEqual(single!.snapshot());
    }
  });

  test("16-bit letters, and more than eight zones", () => {
    const cuts = Array.from({ length: 300 }, (_, i) => ({ at: i, exact: `${i}`, owner: "above" as const }));
    const zones = { ...LOW_HIGH, letters: Array.from({ length: 301 }, (_, i) => `z${i}`), cuts };
    const file = fileOf([zones], reasonsOf(301, [runOf(2, 260, 301)], [{}]));
    const raises = new Uint32Array(4);
    detect(file).observeLetters(Uint16Array.of(260, 260, 5, 301), raises);
    expect([...raises]).toEqual([0, 1, 0, REFUSED]);
    detect(file).observeAll(Float64Array.of(259, 259.5, 5, Number.NaN), raises);
    expect([...raises]).toEqual([0, 1, 0, REFUSED]);
  });

  test("calls that no data can cause are errors", () => {
    const detector = detect(twoInARow());
    const room = new Uint32Array(2);
    expect(() => detector.observeAll(new Float64Array(3), room)).toThrow(RangeError);
    expect(() => detector.observeAll([new Float64Array(2), new Float64Array(2)], room)).toThrow(RangeError);
    expect(() => detect(files[4]![1]).observeAll([new Float64Array(2), ["good"]], room)).toThrow(RangeError);
    expect(() => detect(files[4]![1]).observeAll(new Float64Array(2), room)).toThrow(RangeError);
    expect(() => detector.observeLetters([], room)).toThrow(RangeError);
    for (const remember of [0, -1, 1.5, 65537, Number.NaN]) {
      expect(() => detect(twoInARow(), { why: true, remember })).toThrow(RangeError);
    }
  });
});
