// What `openMachine` takes and what it refuses, by name and place; and what the JSON Schema says of the same files.

import { readFileSync } from "node:fs";
import { Ajv2020 } from "ajv/dist/2020.js";
import { describe, expect, test } from "vitest";
import { MOST_SIGNALS, openMachine } from "../../runtime/index.ts";
import type { FormulaInFile, StatisticInFile } from "../../runtime/machine-file.ts";
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

const schema = JSON.parse(
  readFileSync(new URL("../../runtime/machine.schema.json", import.meta.url), "utf8"),
);
const matches = new Ajv2020({ strict: true, strictRequired: false, allowUnionTypes: true }).compile(schema);

function codes(file: unknown): string[] {
  return openMachine(file).problems.map(({ code, where }) => `${code} ${where}`);
}

/** A copy with one value put elsewhere, the path written as in a refusal: `$.tables.next[1]`. */
function changed(file: Draft, path: string, value: unknown): unknown {
  const copy = structuredClone(file) as unknown;
  const steps = [...path.matchAll(/\.(\w+)|\[(\d+)\]/g)].map((step) => step[1] ?? Number(step[2]));
  const last = steps.pop()!;
  const holder = steps.reduce((at, step) => (at as Record<string | number, unknown>)[step], copy);
  if (value === undefined) delete (holder as Record<string | number, unknown>)[last];
  else (holder as Record<string | number, unknown>)[last] = value;
  return copy;
}

const [automaton, signal] = ["$.reasons.automata[0]", "$.reasons.signals[0]"];
const two = fileOf(
  [LOW_HIGH, { ...GOOD_BAD, missing: 0 }],
  reasonsOf(
    4,
    [runOf(2, 3, 4), oneOf(1, 4)],
    [{ formula: { or: [0, { not: { and: [1, 0] } }] }, quiet: { for: 3 } }],
  ),
);

describe("good files", () => {
  const cases: [string, Draft][] = [
    ["two in a row", twoInARow()],
    ["with a break", twoInARow("break")],
    ["two statistics", two],
    ["eight zones", fileOf([EIGHT_ZONES], reasonsOf(8, [oneOf(7, 8)], [{}]))],
    ["no title", { ...twoInARow(), policy: { ...twoInARow().policy, title: null } }],
    ["quiet until", fileOf([LOW_HIGH], reasonsOf(2, [oneOf(1, 2), oneOf(0, 2)], [{ quiet: { until: 1 } }]))],
    ["all clears", fileOf([LOW_HIGH], reasonsOf(2, [oneOf(1, 2)], [{}], { clearAfter: [0], block: 4, clearBefore: [1, 0] }))],
    ["an added letter", changed(fileOf([{ ...LOW_HIGH, letters: ["low", "high", "gone"], missing: 2 }], reasonsOf(3, [oneOf(1, 3)], [{}])), "$.missing", "break") as Draft],
  ]; // biome-ignore format: a case a line
  test.each(cases)("%s: opened, and by the schema too", (_, file) => {
    expect(openMachine(file).problems).toEqual([]);
    expect(openMachine(JSON.stringify(file)).problems).toEqual([]);
    expect(openMachine(`\uFEFF${JSON.stringify(file, null, 2)}`).machine?.signals).toEqual(file.signals);
    expect(matches(file), JSON.stringify(matches.errors)).toBe(true);
  });

  test("a copy is kept: changing the value afterwards changes nothing", () => {
    const file = structuredClone(two);
    const { machine } = openMachine(file);
    (file.tables.next as number[])[0] = 99;
    (file.statistics[0]!.letters as string[])[0] = "other";
    expect(machine?.tables.next[0]).toBeLessThan(99);
    expect(machine?.statistics[0]?.letters[0]).toBe("low");
  });
});

type Refusal = readonly [path: string, value: unknown, code: string, where?: string];

/** Where a value is put, the value, and the refusal: its code, and its place where that is another. */
const REFUSED_BY_BOTH: readonly Refusal[] = [
  ["$.format", "tocsin-snapshot", "not_a_machine"],
  ["$.format", undefined, "not_a_machine"],
  ["$.version", 2, "wrong_version"],
  ["$.version", "1", "wrong_version"],
  ["$.policy", undefined, "missing_field"],
  ["$.policy", null, "wrong_type"],
  ["$.policy.name", "two words", "bad_text"],
  ["$.policy.name", "\u001b[31m", "bad_text"],
  ["$.policy.title", 7, "wrong_type"],
  ["$.policy.source", "AB".repeat(32), "bad_text"],
  ["$.id", "12", "bad_text"],
  ["$.id", "", "bad_text"],
  ["$.extra", 1, "unknown_field", "$"],
  ["$.tables.extra", 1, "unknown_field", "$.tables"],
  ["$.statistics", [], "bad_length"],
  ["$.statistics", {}, "wrong_type"],
  ["$.statistics[0]", null, "wrong_type"],
  ["$.statistics[0].kind", "counts", "bad_text"],
  ["$.statistics[0].kind", "letters", "missing_field", "$.statistics[0].texts"],
  ["$.statistics[0].cuts", [], "bad_length"],
  ["$.statistics[0].cuts[0]", 5, "wrong_type"],
  ["$.statistics[0].cuts[0].at", null, "bad_number"],
  ["$.statistics[0].cuts[0].at", "0", "bad_number"],
  ["$.statistics[0].cuts[0].owner", "both", "bad_text"],
  ["$.statistics[0].cuts[0].exact", "1/0", "bad_text"],
  ["$.statistics[0].cuts[0].exact", "0.5", "bad_text"],
  ["$.statistics[0].missing", -1, "out_of_range"],
  ["$.statistics[0].missing", 0.5, "bad_number"],
  ["$.statistics[0].letters", ["low", "low"], "duplicate_name", "$.statistics[0].letters[1]"],
  ["$.statistics[0].letters[0]", "1st", "bad_text"],
  ["$.statistics[1].texts[1]", "", "bad_text"],
  ["$.missing", "ignore", "bad_text"],
  ["$.signals", Array.from({ length: MOST_SIGNALS + 1 }, (_, j) => `s${j}`), "bad_length"],
  ["$.signals[0]", 3, "wrong_type"],
  ["$.tables.states", 0, "out_of_range"],
  ["$.tables.columns", 0, "out_of_range"],
  ["$.tables.columnOf[0]", 65536, "out_of_range"],
  ["$.tables.next[1]", -1, "out_of_range"],
  ["$.tables.next[1]", 0.5, "bad_number"],
  ["$.tables.next[1]", "0", "wrong_type"],
  ["$.tables.next[1]", null, "wrong_type"],
  ["$.tables.raises[1]", 2 ** 31, "out_of_range"],
  ["$.reasons.columns", 1.5, "bad_number"],
  ["$.reasons.clearBefore[0]", 2, "out_of_range"],
  ["$.reasons.clearAfter", [-1], "out_of_range", "$.reasons.clearAfter[0]"],
  ["$.reasons.block", 0, "out_of_range"],
  [`${automaton}.states`, 0, "out_of_range"],
  [`${automaton}.next[0]`, true, "wrong_type"],
  [`${automaton}.completes[0]`, 2, "out_of_range"],
  [`${signal}.conditions`, [], "bad_length"],
  [`${signal}.conditions[0].name`, "", "bad_text"],
  [`${signal}.response`, "none", "bad_text"],
  [`${signal}.quiet`, { for: 0 }, "out_of_range", `${signal}.quiet.for`],
  [`${signal}.quiet`, { for: 1, until: 0 }, "unknown_field"],
  [`${signal}.quiet`, 7, "wrong_type"],
  [`${signal}.formula`, { xor: [0, 1] }, "wrong_type"],
  [`${signal}.formula`, { and: [] }, "bad_length", `${signal}.formula.and`],
  [`${signal}.formula`, { and: [0], or: [0] }, "unknown_field"],
  [`${signal}.formula`, null, "wrong_type"],
];

/** What no schema of single values can say. */
const REFUSED_BY_US: readonly Refusal[] = [
  ["$.statistics[0].letters", ["low", "mid", "high"], "bad_length"],
  ["$.statistics[0].missing", 2, "out_of_range"],
  ["$.statistics[1].texts", [null], "bad_length"],
  ["$.statistics[1].texts", ["x", "x"], "duplicate_name", "$.statistics[1].texts[1]"],
  ["$.statistics[1].name", "x", "duplicate_name"],
  ["$.tables.states", 9, "bad_length", "$.tables.next"],
  ["$.tables.states", 2 ** 31 - 1, "too_many", "$.tables"],
  ["$.tables.columns", 5, "out_of_range"],
  ["$.tables.columnOf", [0, 1, 2], "bad_length"],
  ["$.tables.columnOf[3]", 4, "out_of_range"],
  ["$.tables.next[1]", 99, "out_of_range"],
  ["$.tables.raises[0]", 2, "out_of_range"],
  ["$.tables.broken", [0], "wrong_type"],
  ["$.missing", "break", "wrong_type", "$.tables.broken"],
  ["$.reasons.columnOf[0]", 4, "out_of_range"],
  ["$.reasons.clearBefore", [0], "bad_length"],
  ["$.reasons.clearAfter", [2], "out_of_range", "$.reasons.clearAfter[0]"],
  ["$.reasons.automata", [], "out_of_range", `${signal}.conditions[0].automaton`],
  ["$.reasons.signals", [], "bad_length"],
  [`${automaton}.next[0]`, 2, "out_of_range"],
  [`${automaton}.states`, 3, "bad_length", `${automaton}.next`],
  [`${automaton}.completes`, [1], "bad_length"],
  [`${signal}.conditions[1].automaton`, 2, "out_of_range"],
  [`${signal}.quiet`, { until: 2 }, "out_of_range", `${signal}.quiet.until`],
  [`${signal}.formula`, { or: [0, { not: 2 }] }, "out_of_range", `${signal}.formula.or[1].not`],
];

describe("refusals", () => {
  test.each(REFUSED_BY_BOTH.map((refusal) => ({ refusal })))(
    "$refusal, which the schema refuses too",
    ({ refusal }) => {
      const [path, value, code, where = path] = refusal;
      const file = changed(two, path, value);
      expect(codes(file)).toContain(`${code} ${where}`);
      expect(matches(file)).toBe(false);
    },
  );

  test.each(REFUSED_BY_US.map((refusal) => ({ refusal })))(
    "$refusal, which the schema cannot see",
    ({ refusal }) => {
      const [path, value, code, where = path] = refusal;
      const file = changed(two, path, value);
      expect(codes(file)).toContain(`${code} ${where}`);
      expect(matches(file), JSON.stringify(matches.errors)).toBe(true);
    },
  );

  test("every field left out is named", () => {
    for (const [holder, path] of [
      [two, "$"],
      [two.policy, "$.policy"],
      [two.tables, "$.tables"],
      [two.reasons, "$.reasons"],
    ] as const) {
      for (const field of Object.keys(holder)) {
        if (field === "format" || field === "version") continue;
        expect(codes(changed(two, `${path}.${field}`, undefined))).toContain(
          `missing_field ${path}.${field}`,
        );
      }
    }
  });

  test("a machine with a break needs to know where it leads, unless no trial can break", () => {
    expect(codes(changed(twoInARow("break"), "$.tables.broken", null))).toEqual([
      "wrong_type $.tables.broken",
    ]);
    expect(codes(changed(twoInARow("break"), "$.tables.broken", [0, 2]))).toEqual([
      "out_of_range $.tables.broken[1]",
    ]);
    const standIn = { ...twoInARow("break"), statistics: [{ ...LOW_HIGH, missing: 0 }] };
    expect(codes(changed(standIn, "$.tables.broken", null))).toEqual([]);
  });

  const cuts = (list: readonly (readonly [number, "below" | "above"])[]): StatisticInFile => ({
    name: "x",
    kind: "zones",
    letters: Array.from({ length: list.length + 1 }, (_, i) => `z${i}`),
    cuts: list.map(([at, owner]) => ({ at, owner, exact: "0" })),
    missing: null,
  });
  test.each([
    [
      "decreasing",
      [
        [1, "above"],
        [0, "above"],
      ],
    ],
    [
      "equal, the letter between owning neither",
      [
        [0, "below"],
        [0, "above"],
      ],
    ],
    [
      "equal, the letter between owning the lower only",
      [
        [0, "above"],
        [0, "above"],
      ],
    ],
    [
      "equal, the letter between owning the upper only",
      [
        [0, "below"],
        [0, "below"],
      ],
    ],
    [
      "three equal",
      [
        [0, "above"],
        [0, "below"],
        [0, "below"],
      ],
    ],
    [
      "swapped by one place in the last digit",
      [
        [1.0000000000000002, "above"],
        [1, "below"],
      ],
    ],
  ] as const)("cuts %s", (_, list) => {
    const file = fileOf([cuts(list)], reasonsOf(list.length + 1, [oneOf(0, list.length + 1)], [{}]));
    expect(codes(file)).toEqual([`bad_order $.statistics[0].cuts[${list.length - 1}].at`]);
  });

  test("too many combinations of letters", () => {
    const letters = (n: number, name: string): StatisticInFile => ({
      name,
      kind: "letters",
      letters: Array.from({ length: n }, (_, i) => `l${i}`),
      texts: Array.from({ length: n }, () => null),
      missing: null,
    });
    const file = { ...twoInARow(), statistics: [letters(300, "a"), letters(300, "b")] };
    expect(codes(file)).toEqual(["too_many $.statistics"]);
  });

  test("the version is named in words", () => {
    expect(openMachine({ ...twoInARow(), version: 2 }).problems[0]?.what).toBe(
      "this file is of version 2; this detector reads 1",
    );
  });

  test("a formula may nest deep, but not without end", () => {
    const nest = (depth: number): FormulaInFile => {
      let formula: FormulaInFile = 0;
      for (let i = 0; i < depth; i++) formula = { not: formula };
      return formula;
    };
    expect(codes(changed(two, `${signal}.formula`, nest(1000)))).toEqual([]);
    expect(codes(changed(two, `${signal}.formula`, nest(1001)))).toEqual(["too_deep $.reasons.signals"]);
    const deep = JSON.stringify(two).replace(
      '"formula":',
      `"formula":${'{"not":'.repeat(1e5)}0${"}".repeat(1e5)},"x":`,
    );
    expect(openMachine(deep).machine).toBeUndefined();
  });

  test("a thousand wrong things make a hundred problems", () => {
    const names = Array.from({ length: 1000 }, () => "?");
    expect(openMachine(changed(two, "$.statistics[0].letters", names)).problems).toHaveLength(100);
  });

  test.each([
    ["", "not_json"],
    ["{", "not_json"],
    ["nonsense", "not_json"],
    ["null", "not_a_machine"],
    ["12", "not_a_machine"],
    ["[]", "not_a_machine"],
    ['"text"', "not_a_machine"],
    ['{"__proto__": {"format": "tocsin-machine", "version": 1}}', "not_a_machine"],
    [undefined, "not_a_machine"],
    [Number.NaN, "not_a_machine"],
    ["[".repeat(1e5), "not_json"],
  ])("no machine at all: %#", (text, code) => {
    expect(openMachine(text).problems.map((problem) => problem.code)).toEqual([code]);
  });
});
