// Conditions: their algebra, their counts, and what they may not do.

import { describe, expect, test } from "vitest";
import type { Condition } from "../../compiler/policy.ts";
import { around, checkText, codesOf, policyOf } from "./policies.ts";

/** A condition in a line, SETs by their letters. */
function shape(condition: Condition): string {
  const set = (trials: Uint8Array) => ["l", "m", "h"].filter((_, symbol) => trials[symbol] === 1).join("");
  switch (condition.kind) {
    case "set":
      return set(condition.set);
    case "run":
      return `run(${condition.count} ${set(condition.set)})`;
    case "weakRun":
      return `weak(${condition.count} ${set(condition.set)} ${condition.gap} ${set(condition.failures)})`;
    case "scan":
      return `scan(${condition.count} ${condition.window} ${set(condition.set)})`;
    case "pattern":
      return `pattern(${JSON.stringify(condition.pattern, (key, value) => (key === "set" ? set(value) : value))})`;
    case "separate":
    case "overlapping":
      return `${condition.kind}(${condition.count} ${shape(condition.operand)})`;
    case "then":
    case "unless":
      return `${condition.kind}(${shape(condition.left)} ${shape(condition.right)} ${condition.within})`;
    case "and":
    case "or":
      return `${condition.kind}(${shape(condition.left)} ${shape(condition.right)})`;
    case "not":
      return `not(${shape(condition.operand)})`;
    case "rule":
      return `${condition.name}=${shape(condition.condition)}`;
  }
}

describe("the algebra", () => {
  test.each([
    ["high", "h"],
    ["{high, low}", "lh"],
    ["3 high", "run(3 h)"],
    ["n {low, mid}", "run(4 lm)"],
    ["3 high gap 1", "weak(3 h 1 m)"],
    ["n low gap z of {mid, high}", "weak(4 l 0 mh)"],
    ["2 of 3 any except low", "scan(2 3 mh)"],
    ["2 separate 3 high", "separate(2 run(3 h))"],
    ["2 overlapping (high then low)", "overlapping(2 then(h l null))"],
    ["high then low within n", "then(h l 4)"],
    ["high unless low within 2", "unless(h l 2)"],
    ["high then mid then low", "then(then(h m null) l null)"],
    ["not high and low or mid", "or(and(not(h) l) m)"],
    ["other and not high", "and(other=run(2 m) not(h))"],
  ])("%s", (text, expected) => {
    const policy = policyOf(
      around(`let n = 4\nlet z = 0\nassign high -> mid\nrule it = ${text}\nrule other = 2 mid`),
    );
    const rule = policy.rules.find(({ name }) => name === "it");
    expect(rule && shape(rule.condition)).toBe(expected);
  });

  test("patterns keep their counts", () => {
    const { rules } = policyOf(around("rule it = [2 high (low | 0..3 mid) 1.. any except low]"));
    const [rule] = rules;
    expect(rule?.condition.kind === "pattern" && rule.condition.pattern).toMatchObject({
      kind: "sequence",
      items: [
        { kind: "repeat", least: 2, most: 2 },
        { kind: "choice", options: [{ kind: "letters" }, { kind: "repeat", least: 0, most: 3 }] },
        { kind: "repeat", least: 1, most: null },
      ],
    });
  });

  test("each mention of a rule shares its one condition", () => {
    const { rules } = policyOf(around("rule a = b and b\nrule b = 2 high"));
    const condition = rules[0]?.condition;
    if (condition?.kind !== "and" || condition.left.kind !== "rule" || condition.right.kind !== "rule") {
      throw new Error("not two mentions");
    }
    expect(condition.left).not.toBe(condition.right);
    expect(condition.left.condition).toBe(condition.right.condition);
    expect(condition.left.condition).toBe(rules[1]?.condition);
  });
});

describe("counts", () => {
  test.each([
    ["0 high", "count_out_of_range"],
    ["1000001 high", "count_out_of_range"],
    [`${"9".repeat(400)} high`, "count_out_of_range"],
    ["4 of 3 high", "count_out_of_range"],
    ["0 of 3 high", "count_out_of_range"],
    ["2 high gap 1000001 of mid", "count_out_of_range"],
    ["0 separate high", "count_out_of_range"],
    ["0 overlapping high", "count_out_of_range"],
    ["high then low within 0", "count_out_of_range"],
    ["high unless low within 0", "count_out_of_range"],
    ["[3..2 high]", "count_out_of_range"],
    ["[1..2000000 high]", "count_out_of_range"],
    ["half high", "count_not_whole"],
    ["root high", "count_not_whole"],
    ["minus high gap minus", "count_out_of_range"],
    ["mid high", "wrong_role"],
    ["oops high", "unknown_name"],
    ["high then low within s", "wrong_role"],
  ])("%s: %s", (text, code) => {
    const codes = codesOf(around(`let half = 1/2\nlet root = sqrt(2)^2\nlet minus = -1\nrule it = ${text}`));
    expect(codes[0]).toBe(code);
  });

  test("at their limits", () => {
    const limits =
      "1000000 high then 1 of 1 low within 1000000 or 1 high gap 0 of mid or [0..1000000 high low]";
    expect(codesOf(around(`rule it = ${limits}`))).toEqual([]);
  });
});

describe("patterns the empty string satisfies", () => {
  test.each([
    "[0..1 high]",
    "[0.. high]",
    "[high | 0..2 low]",
    "[0..1 high 0..2 low]",
    "[2 (high | 0.. low)]",
    "[0 high]",
    "[0.. (1.. high)]",
  ])("%s", (text) => expect(codesOf(around(`rule it = ${text}`))).toEqual(["pattern_empty"]));
  test.each(["[0..1 high low]", "[1.. (high | low)]", "[0 high low]", "[(0.. low) high]"])(
    "%s is none",
    (text) => expect(codesOf(around(`rule it = ${text}`))).toEqual([]),
  );
});

describe("`not` on silence", () => {
  test.each([
    ["signal t when not high", true],
    ["signal t when high and not low", false],
    ["signal t when high or not low", true],
    ["signal t when not (high or not low)", false],
    ["signal t when idle", true],
    ["signal t when idle and high", false],
    ["rule r = 2 separate idle", true],
    ["rule r = 2 overlapping (idle and high)", false],
    ["rule r = idle then high", true],
    ["rule r = high then idle", true],
    ["rule r = high then not low within 3", true],
    ["rule r = high unless idle within 3", true],
    ["rule r = not (high then low)", false],
    ["signal t when high quiet until not low", false],
    ["clear after idle", false],
    ["rule r = high and (low or (2 separate (not mid)))", true],
  ])("%s: %s", (text, isFault) => {
    expect(codesOf(around(`rule idle = not low\n${text}`))).toEqual(isFault ? ["silent_not"] : []);
  });
});

describe("rules that mention rules", () => {
  test("in any order", () => {
    expect(codesOf(around("rule a = b or c\nrule b = c and high\nrule c = 2 low"))).toEqual([]);
  });

  test.each([
    ["rule a = a", ["a"]],
    ["rule a = b\nrule b = a", ["a", "b"]],
    ["rule a = b and high\nrule b = 2 separate c\nrule c = not a or low", ["a", "b", "c"]],
  ])("%s leads back", (text, names) => {
    const { diagnostics } = checkText(around(text));
    expect(diagnostics.map(({ code, data }) => [code, data?.names])).toEqual([["cycle", names]]);
  });

  test("what mentions a rule with a fault is silent", () => {
    expect(codesOf(around("rule a = 0 high\nrule b = a or c\nrule c = c\nsignal t when a and b"))).toEqual([
      "count_out_of_range",
      "cycle",
    ]);
  });
});
