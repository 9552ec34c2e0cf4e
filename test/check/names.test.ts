// One name space for all that has a name, and what is said when a name is taken, unknown or of another kind.

import { describe, expect, test } from "vitest";
import { around, checkText, codesOf } from "./policies.ts";

const ALL = `let a_let = 1
letters a_statistic: a_letter, b_letter
group a_group = a_letter
rule a_rule = 2 a_letter
signal a_signal when 2 a_letter
process a_process(a_parameter from 0 to 1 by 1): x ~ normal(a_parameter, 1), a_statistic ~ { a_letter }
`;

const DECLARE: Readonly<Record<string, (name: string) => string>> = {
  let: (name) => `let ${name} = 2`,
  letter: (name) => `letters more: ${name}`,
  statistic: (name) => `letters ${name}: one_more`,
  zones: (name) => `zones ${name}: c_low < 0 <= c_high`,
  group: (name) => `group ${name} = b_letter`,
  rule: (name) => `rule ${name} = b_letter`,
  signal: (name) => `signal ${name} when b_letter`,
  process: (name) => `process ${name}: x ~ normal(0, 1), a_statistic ~ { a_letter }`,
  parameter: (name) =>
    `process b_process(${name} from 0 to 1 by 1): x ~ normal(0, 1), a_statistic ~ { a_letter }`,
  missing: (name) => `missing x: as ${name}`,
};

describe("one name space", () => {
  const names = [
    "a_let",
    "a_statistic",
    "a_letter",
    "a_group",
    "a_rule",
    "a_signal",
    "a_process",
    "a_parameter",
  ];
  for (const [kind, declare] of Object.entries(DECLARE)) {
    test.each(names)(`%s cannot be a ${kind} too`, (name) => {
      const { diagnostics } = checkText(around(ALL + declare(name)));
      const taken = diagnostics.filter(({ code }) => code === "name_taken");
      expect(taken.map(({ data, related }) => [data?.name, related?.length])).toEqual([[name, 1]]);
    });
  }

  test("the name of the policy stands outside it", () => {
    expect(codesOf("policy high\nzones x: low < 0 <= high\nsignal s when high")).toEqual([]);
  });

  test("a letter twice in one alphabet, and a parameter twice in one process", () => {
    expect(codesOf("policy p\nzones x: low < 0 <= low < 1 <= high\nsignal s when high")).toEqual([
      "name_taken",
    ]);
    expect(codesOf(around("process q(d from 0 to 1 by 1, d from 1 to 2 by 1): x ~ normal(d, 1)"))).toEqual([
      "name_taken",
    ]);
  });

  test("a second statistic of one name is one fault, whatever its letters", () => {
    expect(
      codesOf("policy p\nzones x: low < 0 <= high\nzones x: low < 1 <= high\nsignal s when high"),
    ).toEqual(["name_taken"]);
  });

  test("words known by their place are free", () => {
    const words =
      "zones mean: when < 0 <= on < 1 <= states\nlet sqrt = 4\nrule normal = 2 on\nsignal arl when normal and states";
    expect(codesOf(`policy p\n${words}\nlet e = sqrt(sqrt)`)).toEqual([]);
  });

  test("`all` is no signal's name, and `pi` no let's", () => {
    expect(codesOf(around("signal all when high"))).toEqual(["name_not_allowed"]);
    expect(codesOf(around("let pi = 3"))).toEqual(["name_not_allowed"]);
    expect(codesOf(around("rule all = 2 high"))).toEqual([]);
  });
});

describe("names that differ only in case", () => {
  test("are warned of once for each later name", () => {
    const { value, diagnostics } = checkText(around("rule High = 2 high\nlet HIGH = 2"));
    expect(value).toBeDefined();
    expect(diagnostics.map(({ code, severity, data }) => [code, severity, data?.name, data?.other])).toEqual([
      ["name_case", "warning", "High", "high"],
      ["name_case", "warning", "HIGH", "high"],
    ]);
  });
});

describe("did you mean", () => {
  test.each([
    ["rule r = 2 hihg", "high"],
    ["rule r = swnig\nrule swing = 2 low", "swing"],
    ["let a = sigm\nlet sigma = 2", "sigma"],
    ["require arl(s, stedy) > 1\nprocess steady: x ~ normal(0, 1)", "steady"],
    ["process q: y2 ~ normal(0, 1)", null],
    ["rule r = 2 mid then swnig\nlet swing = 2", null],
  ])("%s", (text, near) => {
    const [first] = checkText(around(text)).diagnostics;
    expect(first?.code).toBe("unknown_name");
    if (near === null) expect(first?.hint).not.toContain("did you mean");
    else expect(first?.hint).toBe(`did you mean \`${near}\`?`);
  });
});
