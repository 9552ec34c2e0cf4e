// Requirements, expectations and allowances: their form.

import { describe, expect, test } from "vitest";
import { applyAllowances } from "../../compiler/check/allowances.ts";
import { around, checkText, codesOf, policyOf } from "./policies.ts";

const PROCESSES = `process steady: x ~ normal(0.5, 1)
process shifted(d from 0 to 3 by 0.5): x ~ normal(0.5 + d, 4 - d)
process grid(a from 0 to 1 by 1, b from 1 to 2 by 1): x ~ normal(a, b)
process phase: x ~ normal(0, 1) estimated from 20 subgroups of 4
`;

describe("measures", () => {
  test.each([
    ["arl(s, steady) >= 1", []],
    ["sdrl(any, steady) > 1", []],
    ["mrl(s, shifted) <= 1", []],
    ["rate(s, shifted(1.25)) < 1", []],
    ["quantile(s, steady, 5%) = 10 within 5%", []],
    ["signalled(s, steady, 10) <= 1%", []],
    ["count(s, grid(0, 1), 10) <= 1", []],
    ["arl(s, grid) <= 1", []],
    ["arl(s, shifted(1) after steady) <= 1", []],
    ["arl_quantile(s, phase, 0.1) >= 1", []],
    ["states <= 20", []],
    ["arls(s, steady) >= 1", ["unknown_measure"]],
    ["arl(t, steady) >= 1", ["unknown_name"]],
    ["arl(high, steady) >= 1", ["wrong_role"]],
    ["arl(s, s) >= 1", ["wrong_role"]],
    ["arl(s, stedy) >= 1", ["unknown_name"]],
    ["arl(s, steady, 1) >= 1", ["wrong_operands"]],
    ["arl >= 1", ["wrong_operands"]],
    ["states(s, steady) >= 1", ["wrong_operands"]],
    ["quantile(s, steady) >= 1", ["wrong_operands"]],
    ["quantile(s, steady, 0) >= 1", ["number_domain"]],
    ["quantile(s, steady, 1) >= 1", ["number_domain"]],
    ["arl_quantile(s, phase, 100%) >= 1", ["number_domain"]],
    ["arl_quantile(s, steady, 0.5) >= 1", ["measure_undefined"]],
    ["signalled(s, steady, 0) >= 1", ["count_out_of_range"]],
    ["signalled(s, steady, 1/2) >= 1", ["count_not_whole"]],
    ["count(s, steady, 1e9) >= 1", ["count_out_of_range"]],
    ["arl(s, steady(1)) >= 1", ["wrong_operands"]],
    ["arl(s, grid(1)) >= 1", ["wrong_operands"]],
    ["arl(s, grid(1, 2, 3)) >= 1", ["wrong_operands"]],
    ["arl(s, grid(1, 0)) >= 1", ["model_parameter"]],
    ["arl(s, shifted(4)) >= 1", ["model_parameter"]],
    ["arl(s, steady after shifted(5)) >= 1", ["model_parameter"]],
    ["arl(s, steady after shifted) >= 1", ["wrong_operands"]],
    ["arl(s, steady) = 1 within 0", ["number_domain"]],
    ["arl(s, steady) = 1 within -5%", ["number_domain"]],
    ["arl(s, steady) >= oops", ["unknown_name"]],
    ["arl(s, steady) >= d", ["wrong_role"]],
  ])("%s", (requirement, codes) => {
    expect(codesOf(around(`${PROCESSES}require ${requirement}`))).toEqual(codes);
  });

  test("come out with indices and numbers", () => {
    const policy = policyOf(
      around(`${PROCESSES}require quantile(any, shifted(1.5) after steady, 5%) = 10 within 2%`),
    );
    const [require] = policy.requires;
    expect(require?.measure).toMatchObject({
      name: "quantile",
      signal: "any",
      process: { process: 1 },
      after: { process: 0, values: [] },
    });
    expect(require?.measure.process?.values?.[0]?.value.toFraction()).toBe("3/2");
    expect(require?.measure.argument?.value.toFraction()).toBe("1/20");
    expect(require?.measure.text).toBe("quantile(any, shifted(1.5) after steady, 5%)");
    expect(require?.requirement.kind === "near" && require.requirement.within.value.toFraction()).toBe(
      "1/50",
    );
  });
});

describe("expectations", () => {
  const TWO =
    "policy p\nletters x: a, b\nletters y: c, d\nmissing y: as none\nsignal s when a & c\nsignal t when b & d\n";

  test("trials are unrolled, missing values become their letter, a raise belongs to the last of a repeat", () => {
    const policy = policyOf(`${TWO}expect all on (a, ?) 3 (b, d) -> t (?, c) ? (a, c) -> {s}`);
    expect(policy.expects[0]?.trials.map(({ symbol, raises }) => [symbol, ...raises])).toEqual([
      [2],
      [4],
      [4],
      [4, 1],
      [null],
      [null],
      [0, 0],
    ]);
  });

  test("with one alphabet a letter stands alone or in parentheses", () => {
    const policy = policyOf(around("missing x: as gone\nexpect s on low (mid) ? 2 high"));
    expect(policy.expects[0]?.trials.map(({ symbol }) => symbol)).toEqual([0, 1, 3, 2, 2]);
    expect(policy.expects[0]?.expectation).toEqual({ kind: "signal", signal: 0 });
  });

  test.each([
    ["expect s on (a, c)", []],
    ["expect any on (a, c)", []],
    ["expect quiet on 5 (a, d)", []],
    ["expect s on a", ["trial_mismatch"]],
    ["expect s on (a, c, d)", ["trial_mismatch"]],
    ["expect s on (c, a)", ["trial_mismatch", "trial_mismatch"]],
    ["expect s on (a, s)", ["wrong_role"]],
    ["expect s on (a, oops)", ["unknown_name"]],
    ["expect oops on (a, c)", ["unknown_name"]],
    ["expect a on (a, c)", ["wrong_role"]],
    ["expect s on (a, c) -> s", ["raise_misplaced"]],
    ["expect all on (a, c) -> oops", ["unknown_name"]],
    ["expect all on (a, c) -> {s, a}", ["wrong_role"]],
    ["expect quiet on 0 (a, d)", ["count_out_of_range"]],
    ["expect quiet on 1000001 (a, d)", ["count_out_of_range"]],
    ["expect quiet on 1000000 (a, d)", []],
    ["expect quiet on 1000000 (a, d)\nexpect quiet on (a, d)", ["count_out_of_range"]],
  ])("%s", (declaration, codes) => {
    expect(codesOf(TWO + declaration)).toEqual(codes);
  });
});

describe("allowances", () => {
  test("take a warning away, and are warned of when idle", () => {
    const judge = (text: string) => {
      const { value, diagnostics } = checkText(around(text));
      const allowances = value && "allowances" in value ? value.allowances : [];
      return applyAllowances(allowances, diagnostics).map(({ code }) => code);
    };
    expect(judge("rule High = high")).toEqual(["name_case"]);
    expect(judge('rule High = high\nallow name_case "told apart by everyone"')).toEqual([]);
    expect(judge('allow name_case "told apart by everyone"')).toEqual(["allow_idle"]);
    expect(judge('rule High = high\nallow name_case "yes"\nallow name_case "again"')).toEqual(["allow_idle"]);
    expect(judge('blocks of 5\nallow missing_alters_blocks "no gaps here"')).toEqual([]);
  });

  test.each([
    ['allow name_case ""', ["allow_reason"]],
    ['allow name_case "  "', ["allow_reason"]],
    ['allow cut_unowned "why"', ["allow_unknown"]],
    ['allow library_names "why"', ["allow_unknown"]],
    ['allow allow_idle "why"', ["allow_unknown"]],
    ['allow nothing "why"', ["allow_unknown"]],
    ['allow nothing ""', ["allow_unknown", "allow_reason"]],
  ])("%s", (declaration, codes) => {
    expect(codesOf(around(declaration))).toEqual(codes);
  });
});
