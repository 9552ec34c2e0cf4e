/**
 * The truth of `require`: the measure is computed at every point of the process and held against the value. It fails where
 * the proven interval lies outside, and stays open where the interval holds the value itself.
 */
import { type Diagnostic, diagnose } from "../../grammar/diagnostic.ts";
import { type Assessor, type Point, pointsOf } from "../analysis/assessor.ts";
import { type Measured, measureAt } from "../analysis/measures.ts";
import { toDouble } from "../chance/quantity.ts";
import { showNumber } from "../check/figures.ts";
import type { Policy, Require } from "../policy.ts";

type Verdict = {
  readonly point: Point | null;
  readonly measured: Measured;
  readonly outcome: "holds" | "fails" | "open";
  /** How far from what is required, for choosing the worst: larger is worse. */
  readonly badness: number;
};

/** A diagnostic for each requirement that fails, stays open or cannot be measured. */
export function checkRequirements(policy: Policy, assessor: Assessor): Diagnostic[] {
  return policy.requires.flatMap((require) => checkRequirement(policy, assessor, require));
}

function checkRequirement(policy: Policy, assessor: Assessor, require: Require): Diagnostic[] {
  const { measure } = require;
  const points = measure.process ? pointsOf(policy, measure.process) : [null];
  const verdicts: Verdict[] = [];
  for (const point of points) {
    const { value, diagnostics } = measureAt(assessor, measure, point);
    if (!value) return [...diagnostics];
    verdicts.push(judge(require, point, value));
  }
  const wrong = verdicts.filter(({ outcome }) => outcome === "fails");
  const open = verdicts.filter(({ outcome }) => outcome === "open");
  const chosen = wrong.length > 0 ? wrong : open;
  if (chosen.length === 0) return [];
  const worst = chosen.reduce((a, b) => (b.badness > a.badness ? b : a));
  return [explain(policy, require, worst, chosen.length, points.length)];
}

function judge({ requirement }: Require, point: Point | null, measured: Measured): Verdict {
  const { value, low, high } = measured;
  const limit = toDouble(requirement.value);
  if (requirement.kind === "near") {
    const within = toDouble(requirement.within) * Math.abs(limit);
    const farthest = Math.max(Math.abs(low - limit), Math.abs(high - limit));
    const nearest =
      low <= limit && limit <= high ? 0 : Math.min(Math.abs(low - limit), Math.abs(high - limit));
    const outcome = farthest <= within ? "holds" : nearest > within ? "fails" : "open";
    return { point, measured, outcome, badness: Math.abs(value - limit) };
  }
  const { comparison } = requirement;
  const upward = comparison === ">=" || comparison === ">";
  const badness = upward ? limit - value : value - limit;
  const sure = {
    ">=": low >= limit,
    ">": low > limit,
    "<=": high <= limit,
    "<": high < limit,
  }[comparison];
  const impossible = {
    ">=": high < limit,
    ">": high <= limit,
    "<=": low > limit,
    "<": low >= limit,
  }[comparison];
  return { point, measured, outcome: sure ? "holds" : impossible ? "fails" : "open", badness };
}

function explain(policy: Policy, require: Require, worst: Verdict, wrong: number, all: number): Diagnostic {
  const { measure } = require;
  const { measured, outcome } = worst;
  const where = all > 1 ? ` at ${pointWords(policy, worst.point)}` : "";
  const others =
    all > 1
      ? `; of ${all} values ${wrong} ${outcomeWords(outcome, wrong)}${wrong > 1 ? ", this is the worst" : ""}`
      : "";
  const found = figure(measured.value);
  const reason = measured.reason ? `, since ${measured.reason}` : "";
  const wanted = requirementWords(require);
  const data = {
    measure: measure.text,
    value: Number.isFinite(measured.value) ? measured.value : null,
    low: rounded(measured.low),
    high: rounded(measured.high),
    required: toDouble(require.requirement.value),
    at: worst.point ? worst.point.values.map(toDouble) : [],
  };
  if (outcome === "fails")
    return diagnose(
      "require_fails",
      require.span,
      `"${measure.text}" is ${found}${where}${reason}, and ${wanted} is required${others}`,
      { hint: "change the policy, or what is required of it", data },
    );
  return diagnose(
    "require_open",
    require.span,
    `"${measure.text}" lies between ${measured.low} and ${measured.high}${where}, which leaves open whether it is ${wanted}${others}`,
    { hint: "require a value that is not so close to it", data },
  );
}

function outcomeWords(outcome: Verdict["outcome"], count: number): string {
  if (outcome === "fails") return count === 1 ? "fails" : "fail";
  return count === 1 ? "stays open" : "stay open";
}

function requirementWords({ requirement }: Require): string {
  const value = showNumber(requirement.value, 6);
  if (requirement.kind === "near") return `${value} within ${showNumber(percent(requirement.within), 6)} %`;
  return {
    ">=": `at least ${value}`,
    ">": `more than ${value}`,
    "<=": `at most ${value}`,
    "<": `less than ${value}`,
  }[requirement.comparison];
}

function percent(quantity: Require["requirement"]["value"]): Require["requirement"]["value"] {
  return { value: quantity.value.mul(100), radius: quantity.radius * 100 };
}

/** A value as people read it: six digits, or infinite. */
function figure(value: number): string {
  return Number.isFinite(value) ? `${Number(value.toPrecision(6))}` : "infinite";
}

/** `delta = 0.25, scale = 1`. */
function pointWords(policy: Policy, point: Point | null): string {
  if (!point) return "";
  const parameters = policy.processes[point.process]?.parameters ?? [];
  return parameters
    .map(({ name }, i) => `${name} = ${point.values[i] ? showNumber(point.values[i], 6) : "?"}`)
    .join(", ");
}

/** An end of a proven interval for tools: twelve digits, since what lies beyond them hangs on the order of the arithmetic. */
function rounded(end: number): number | null {
  return Number.isFinite(end) ? Number(end.toPrecision(12)) : null;
}
