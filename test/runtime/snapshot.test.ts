// Snapshots: going on from one equals never having stopped; every field is checked; another machine's is refused.

import { describe, expect, test } from "vitest";
import { Detector, openMachine, type Value } from "../../runtime/index.ts";
import { type Draft, EIGHT_ZONES, fileOf, LOW_HIGH, oneOf, reasonsOf, runOf, twoInARow } from "./machines.ts";

function detect(file: Draft, options = {}): Detector {
  const { machine, problems } = openMachine(file);
  expect(problems).toEqual([]);
  return new Detector(machine!, options);
}

const rich = fileOf(
  [EIGHT_ZONES],
  reasonsOf(
    8,
    [runOf(2, 7, 8), runOf(3, 6, 8), oneOf(0, 8), runOf(2, 1, 8)],
    [
      { formula: { or: [0, 1] }, quiet: { for: 3 } },
      { formula: { and: [{ or: [1, 2] }, { not: 3 }] }, quiet: { until: 2 }, response: "restart" },
      { formula: 0, response: "continue" },
    ],
    { block: 11, clearAfter: [3], clearBefore: [0, 0, 0, 1, 0, 0, 0, 0] },
  ),
  "break",
);
const values: Value[] = Array.from({ length: 120 }, (_, i) =>
  i % 17 === 9 ? null : 4.3 * Math.sin(Math.floor(i / 4) ** 2 + (i % 4) * 0.05),
);

type Shown = { raises: number; because: unknown; trial: number; readings: number };

function read(detector: Detector, value: Value): Shown {
  const raises = detector.observe(value);
  return { raises, because: detector.because(), trial: detector.trial, readings: detector.readings };
}

describe("going on", () => {
  test.each([
    ["not asked why", rich, {}],
    ["asked why", rich, { why: true }],
    ["asked why, with little kept", rich, { why: true, remember: 3 }],
    [
      "refusing",
      {
        ...twoInARow(),
        statistics: [EIGHT_ZONES],
        tables: { ...rich.tables, broken: null },
        reasons: rich.reasons,
        signals: rich.signals,
      } as Draft,
      { why: true },
    ],
  ] as const)("%s: from each point, as text, equals never having stopped", (_, file, options) => {
    const whole = detect(file, options);
    const expected = values.map((value) => read(whole, value));
    expect(expected.some(({ raises }) => raises > 0)).toBe(true);
    const running = detect(file, options);
    for (const [i, value] of values.entries()) {
      const restored = detect(file, options);
      expect(restored.restore(JSON.stringify(running.snapshot()))).toEqual([]);
      expect(restored.snapshot()).toEqual(running.snapshot());
      expect(restored.because()).toEqual(running.because());
      expect(values.slice(i, i + 30).map((next) => read(restored, next))).toEqual(expected.slice(i, i + 30));
      read(running, value);
    }
  });

  test("with more or less kept than before", () => {
    const [before, more, less] = [6, 9, 3].map((remember) => detect(rich, { why: true, remember }));
    for (const value of values.slice(0, 50)) before!.observe(value);
    for (const detector of [more!, less!]) expect(detector.restore(before!.snapshot())).toEqual([]);
    expect(less!.snapshot().reasons?.symbols).toEqual(before!.snapshot().reasons?.symbols.slice(3));
    for (const value of values.slice(50)) {
      const raises = before!.observe(value);
      expect([more!.observe(value), less!.observe(value)]).toEqual([raises, raises]);
    }
    expect(more!.snapshot().reasons?.symbols).toHaveLength(9);
    expect(less!.snapshot().reasons?.symbols).toHaveLength(3);
  });

  test("a detector that is not asked why takes any, one that is needs its reasons", () => {
    const asked = detect(rich, { why: true });
    const plain = detect(rich);
    for (const value of values) plain.observe(value);
    expect(asked.restore(plain.snapshot()).map(({ code }) => code)).toEqual(["no_reasons"]);
    for (const value of values.slice(0, 7)) asked.observe(value);
    expect(plain.restore(asked.snapshot())).toEqual([]);
    expect(plain.trial).toBe(7);
  });
});

describe("refusals", () => {
  const asked = detect(rich, { why: true });
  for (const value of values.slice(0, 20)) asked.observe(value);
  const good = asked.snapshot();
  const reasons = good.reasons!;
  const because = (field: keyof typeof reasons, value: unknown) => ({
    ...good,
    reasons: { ...reasons, [field]: value },
  });

  test.each([
    ["{", "not_json", "$"],
    [null, "not_a_snapshot", "$.format"],
    [rich, "not_a_snapshot", "$.format"],
    [[good], "not_a_snapshot", "$.format"],
    [{ ...good, version: 2 }, "wrong_version", "$.version"],
    [{ ...good, machine: "0".repeat(64) }, "other_machine", "$.machine"],
    [{ ...good, machine: null }, "other_machine", "$.machine"],
    [{ ...good, more: 1 }, "unknown_field", "$"],
    [{ ...good, state: rich.tables.states }, "out_of_range", "$.state"],
    [{ ...good, state: -1 }, "out_of_range", "$.state"],
    [{ ...good, state: "0" }, "wrong_type", "$.state"],
    [{ ...good, trial: 0.5 }, "bad_number", "$.trial"],
    [{ ...good, trial: 2 ** 53 }, "out_of_range", "$.trial"],
    [{ ...good, trial: 3 }, "bad_length", "$.reasons.symbols"],
    [{ ...good, passedOver: -1 }, "out_of_range", "$.passedOver"],
    [{ ...good, reasons: null }, "no_reasons", "$.reasons"],
    [{ ...good, reasons: [] }, "wrong_type", "$.reasons"],
    [because("states", []), "bad_length", "$.reasons.states"],
    [because("states", reasons.states.with(0, 2)), "out_of_range", "$.reasons.states[0]"],
    [because("completed", reasons.completed.with(1, 2)), "out_of_range", "$.reasons.completed[1]"],
    [because("rests", [4, 0, 0]), "out_of_range", "$.reasons.rests[0]"],
    [because("rests", [0, 2, 0]), "out_of_range", "$.reasons.rests[1]"],
    [because("rests", [0, 0, 1]), "out_of_range", "$.reasons.rests[2]"],
    [because("untils", [1, 0, 0]), "out_of_range", "$.reasons.untils[0]"],
    [because("afters", [2]), "out_of_range", "$.reasons.afters[0]"],
    [because("since", [0, 1, 1]), "out_of_range", "$.reasons.since[0]"],
    [because("sinceAtLast", [1, 1, 22]), "out_of_range", "$.reasons.sinceAtLast[2]"],
    [because("place", 11), "out_of_range", "$.reasons.place"],
    [because("raises", 8), "out_of_range", "$.reasons.raises"],
    [because("symbols", [8]), "out_of_range", "$.reasons.symbols[0]"],
    [because("symbols", [-2]), "out_of_range", "$.reasons.symbols[0]"],
    [because("symbols", "1 2 3"), "wrong_type", "$.reasons.symbols"],
  ])("%#: named, and the detector stays as it was", (snapshot, code, where) => {
    const before = asked.snapshot();
    expect(asked.restore(snapshot).map((problem) => `${problem.code} ${problem.where}`)).toContain(
      `${code} ${where}`,
    );
    expect(asked.snapshot()).toEqual(before);
  });

  test("a broken trial among the symbols, only where trials can break", () => {
    const file = fileOf([LOW_HIGH], reasonsOf(2, [oneOf(1, 2)], [{}]));
    const detector = detect(file, { why: true });
    detector.observe(1);
    const { reasons: kept, ...rest } = detector.snapshot();
    expect(detector.restore({ ...rest, reasons: { ...kept, symbols: [-1] } })).toHaveLength(1);
  });

  test("the other machine is named", () => {
    const [problem] = detect(twoInARow()).restore({ ...good, machine: "f".repeat(64) });
    expect(problem?.what).toContain(`"${"f".repeat(40)}"`);
    expect(problem?.what).toContain('policy "made_by_hand"');
  });
});
