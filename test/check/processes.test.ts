// Processes: their sweeps and laws, and the numbers of a law at a point.

import { describe, expect, test } from "vitest";
import { exact } from "../../compiler/chance/quantity.ts";
import { processAt } from "../../compiler/check/process-at.ts";
import type { Quantity } from "../../compiler/policy.ts";
import { around, checkText, codesOf, policyOf } from "./policies.ts";

const TWO =
  "policy p\nzones x: low < 0 <= high\nletters y: good, bad\nmissing y: as none\nsignal s when high & bad\n";

function fractions(quantities: readonly Quantity[]): string[] {
  return quantities.map(({ value }) => value.toFraction());
}

describe("sweeps", () => {
  function valuesOf(sweep: string): string[] {
    const [process] = policyOf(around(`process q(${sweep}): x ~ normal(d, 1)`)).processes;
    return fractions(process?.parameters[0]?.values ?? []);
  }

  test.each([
    ["d from 0 to 1 by 0.25", "0 1/4 1/2 3/4 1"],
    ["d from 0 to 1 by 0.3", "0 3/10 3/5 9/10"],
    ["d from -1 to 1 by 1", "-1 0 1"],
    ["d from 2 to 2 by 5", "2"],
    ["d from 0 to 1 by 5", "0"],
    ["d from 0 to 0.3 by 0.1", "0 1/10 1/5 3/10"],
  ])("%s", (sweep, expected) => {
    expect(valuesOf(sweep)).toEqual(expected.split(" "));
  });

  test("up to ten thousand values, and no more", () => {
    expect(valuesOf("d from 1 to 10000 by 1")).toHaveLength(10_000);
    expect(codesOf(around("process q(d from 0 to 10000 by 1): x ~ normal(d, 1)"))).toEqual(["sweep_range"]);
    expect(codesOf(around("process q(d from 0 to 1e300 by 1e-300): x ~ normal(d, 1)"))).toEqual([
      "sweep_range",
    ]);
    const grid = (by: string) =>
      around(`process q(d from 1 to 100 by 1, e from 1 to ${by} by 1): x ~ normal(d, e)`);
    expect(codesOf(grid("100"))).toEqual([]);
    expect(codesOf(grid("101"))).toEqual(["sweep_range"]);
  });

  test.each([
    ["d from 1 to 0 by 1", "sweep_range"],
    ["d from 0 to 1 by 0", "sweep_range"],
    ["d from 0 to 1 by -1", "sweep_range"],
    ["d from 0 to sqrt(2) by sqrt(2)/2", "open_question"],
    ["d from 0 to 1 by sqrt(2)*sqrt(2)-2", "open_question"],
    ["d from oops to 1 by 1", "unknown_name"],
    ["d from d to 1 by 1", "wrong_role"],
  ])("%s: %s", (sweep, code) => {
    expect(codesOf(around(`process q(${sweep}): x ~ normal(d, 1)`))).toEqual([code]);
  });
});

describe("laws at a point", () => {
  const policy = policyOf(
    `${TWO}let mu = 1/2
process q(d from 0 to 0.5 by 0.25): x ~ normal(mu + d, 2), y ~ { good 1 - d, bad } with none d/2
process r: x ~ student(5), y ~ markov { good -> { good 0.9, bad }, bad -> { good }, none -> { good } }
process u: x ~ normal(1, 2) ar -0.5, y ~ { bad 1 }
process v: x ~ normal(1, 2) estimated from 25 subgroups of 5 under q(0.25), y ~ { bad }`,
  );
  const at = (index: number, ...point: number[]) => {
    const process = policy.processes[index];
    if (process === undefined) throw new Error("no such process");
    return processAt(policy, process, point.map(exact));
  };

  test("a distribution with its parameters, and a mass thinned by missing values", () => {
    const [x, y] = at(0, 0.25).value ?? [];
    expect(x?.kind === "distribution" && [x.family, ...fractions(x.parameters)]).toEqual([
      "normal",
      "3/4",
      "2",
    ]);
    expect(y?.kind === "mass" && fractions(y.probabilities)).toEqual(["21/32", "7/32", "1/8"]);
  });

  test("defaults are filled in, and rows of a chain are by letter", () => {
    const [x, y] = at(1).value ?? [];
    expect(x?.kind === "distribution" && fractions(x.parameters)).toEqual(["5", "0", "1"]);
    expect(x?.kind === "distribution" && x.missing.value.toFraction()).toBe("0");
    expect(y?.kind === "markov" && y.rows.map(fractions)).toEqual([
      ["9/10", "1/10", "0"],
      ["1", "0", "0"],
      ["1", "0", "0"],
    ]);
  });

  test("the autoregressive and the estimated law", () => {
    const [ar, bad] = at(2).value ?? [];
    expect(ar?.kind === "autoregressive" && fractions([ar.mean, ar.sd, ar.phi])).toEqual(["1", "2", "-1/2"]);
    expect(bad?.kind === "mass" && fractions(bad.probabilities)).toEqual(["0", "1", "0"]);
    const [estimated] = at(3).value ?? [];
    expect(estimated).toMatchObject({ kind: "estimated", subgroups: 25, size: 5 });
  });

  test("values outside the sweep may fail, and say where", () => {
    expect(at(0, 0.75).diagnostics).toEqual([]);
    const { value, diagnostics } = at(0, 3);
    expect(value).toBeUndefined();
    expect(diagnostics[0]).toMatchObject({ code: "probability_range", data: { at: ["d = 3"] } });
  });
});

describe("faults of laws", () => {
  test.each([
    ["x ~ normal(0, 1), x ~ normal(0, 1), y ~ { bad }", ["law_twice"]],
    ["x ~ normal(0, 1)", ["law_missing"]],
    ["y ~ { bad }", ["law_missing"]],
    ["x ~ nomal(0, 1), y ~ { bad }", ["unknown_model"]],
    ["x ~ normal(0), y ~ { bad }", ["wrong_operands"]],
    ["x ~ normal(0, 1, 2), y ~ { bad }", ["wrong_operands"]],
    ["x ~ normal(0, -1), y ~ { bad }", ["model_parameter"]],
    ["x ~ normal(0, oops), y ~ { bad }", ["unknown_name"]],
    ["z ~ normal(0, 1), x ~ normal(0, 1), y ~ { bad }", ["unknown_name"]],
    ["s ~ normal(0, 1), x ~ normal(0, 1), y ~ { bad }", ["wrong_role"]],
    ["x ~ exponential(1) ar 0.5, y ~ { bad }", ["model_mismatch"]],
    ["x ~ normal(0, 1) ar 1, y ~ { bad }", ["model_parameter"]],
    ["x ~ normal(0, 1) ar -1, y ~ { bad }", ["model_parameter"]],
    ["x ~ normal(0, 1) estimated from 5 subgroups of 1, y ~ { bad }", ["count_out_of_range"]],
    ["x ~ normal(0, 1) estimated from 0 subgroups of 5, y ~ { bad }", ["count_out_of_range"]],
    ["x ~ normal(0, 1) estimated from 5 subgroups of 5 under nobody, y ~ { bad }", ["unknown_name"]],
    ["x ~ normal(0, 1) estimated from 5 subgroups of 5 under swept, y ~ { bad }", ["wrong_operands"]],
    ["x ~ normal(0, 1) estimated from 5 subgroups of 5 under swept(1), y ~ { bad }", []],
    ["x ~ normal(0, 1) estimated from 5 subgroups of 5 under odd, y ~ { bad }", ["model_mismatch"]],
    ["x ~ { low 0.5, high 0.5 }, y ~ { bad }", []],
    ["x ~ { low 0.5 }, y ~ { bad }", ["probabilities_sum"]],
    ["x ~ { low 0.5, high 0.6 }, y ~ { bad }", ["probabilities_sum"]],
    ["x ~ { low, high }, y ~ { bad }", ["probabilities_sum"]],
    ["x ~ { low 2, high }, y ~ { bad }", ["probability_range"]],
    ["x ~ { low 0.5, low 0.5 }, y ~ { bad }", ["letter_twice"]],
    ["x ~ { low 1/3, high 1 - 1/3 }, y ~ { bad }", []],
    ["x ~ { low exp(-1), high 1 - exp(-1) }, y ~ { bad }", ["open_question"]],
    ["x ~ { low exp(-1), high }, y ~ { bad }", []],
    ["x ~ { bad }, y ~ { bad }", ["wrong_role"]],
    ["x ~ { oops }, y ~ { bad }", ["unknown_name"]],
    ["x ~ normal(0, 1), y ~ poisson(2)", ["model_mismatch"]],
    ["x ~ normal(0, 1), y ~ { bad } with bad 0.1", ["letter_not_missing"]],
    ["x ~ normal(0, 1) with low 0.1, y ~ { bad }", ["letter_not_missing"]],
    ["x ~ normal(0, 1), y ~ { bad } with none 1.5", ["probability_range"]],
    ["x ~ markov { low -> { low 0.5, high } }, y ~ { bad }", ["row_missing"]],
    ["x ~ markov { low -> { low }, high -> { high } }, y ~ { bad }", ["model_parameter"]],
    ["x ~ markov { low -> { high }, high -> { low } }, y ~ { bad }", []],
    ["x ~ markov { low -> { high }, low -> { low }, high -> { low } }, y ~ { bad }", ["letter_twice"]],
    ["x ~ markov { low -> { high 0.5 }, high -> { low } }, y ~ { bad }", ["probabilities_sum"]],
    ["x ~ signed_rank(8), y ~ { bad }", []],
    ["x ~ exceedance(100, 5, 101), y ~ { bad }", ["model_parameter"]],
    ["x ~ binomial(10, 1.5), y ~ { bad }", ["model_parameter"]],
    ["x ~ binomial(10.5, 0.5), y ~ { bad }", ["model_parameter"]],
    ["x ~ uniform(1, 0), y ~ { bad }", ["model_parameter"]],
  ])("%s", (laws, codes) => {
    const others = `process swept(e from 0 to 1 by 1): x ~ normal(e, 1), y ~ { bad }\nprocess odd: x ~ gamma(1, 1), y ~ { bad }`;
    expect(codesOf(`${TWO}${others}\nprocess q: ${laws}`)).toEqual(codes);
  });

  test("the first value of a sweep that fails is named, once", () => {
    const sweep = (law: string) => {
      const { diagnostics } = checkText(`${TWO}process q(d from 0 to 2 by 0.5): ${law}, y ~ { bad }`);
      return diagnostics.map(({ code, data }) => [code, data?.at]);
    };
    expect(sweep("x ~ normal(0, 1 - d)")).toEqual([["model_parameter", ["d = 1"]]]);
    expect(sweep("x ~ { low d, high }")).toEqual([["probability_range", ["d = 1.5"]]]);
    expect(sweep("x ~ normal(0, 1 / (d - 0.5))")).toEqual([["model_parameter", ["d = 0"]]]);
    expect(sweep("x ~ normal(1 / (d - 0.5), 1)")).toEqual([["division_by_zero", ["d = 0.5"]]]);
    expect(sweep("x ~ normal(0, oops + d)")).toEqual([["unknown_name", undefined]]);
  });
});

describe("a law may be left out", () => {
  const one = (condition: string, more = "") =>
    codesOf(
      `policy p\nzones x: low < 0 <= high\nletters y: good, bad\nsignal s when ${condition}\n${more}\nprocess q: x ~ normal(0, 1)`,
    );

  test("when nothing hangs on the letter", () => {
    expect(one("high")).toEqual([]);
    expect(one("high & {good, bad}")).toEqual([]);
    expect(one("high", "rule unused = 2 bad")).toEqual([]);
    expect(one("any except (low)")).toEqual(["syntax"]);
  });

  test("but not when a signal, a quiet time or a clear reads it", () => {
    expect(one("high & bad")).toEqual(["law_missing"]);
    expect(one("high", "rule r = 2 bad\nsignal t when r")).toEqual(["law_missing"]);
    expect(one("high quiet until bad")).toEqual(["law_missing"]);
    expect(one("high", "clear before bad")).toEqual(["law_missing"]);
    expect(one("high", "clear after 2 bad")).toEqual(["law_missing"]);
    expect(one("[high (bad | low)]")).toEqual(["law_missing"]);
    expect(one("3 high gap 1 of low & bad")).toEqual(["law_missing"]);
  });
});
