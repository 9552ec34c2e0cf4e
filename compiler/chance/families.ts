/**
 * The distributions of the language, one row each: the names of the parameters and what each must be, whether the
 * statistic is continuous or a count, and the law once the parameters are known. In: a name and exact parameters; out: a
 * message for the user, or a law. Adding a distribution is adding a row.
 *
 * A row without a law is parsed and checked but not measured yet.
 */
import type { Quantity } from "../policy.ts";
import {
  STANDARD_EXPONENTIAL,
  STANDARD_LAPLACE,
  STANDARD_LOGISTIC,
  STANDARD_UNIFORM,
  standardWeibull,
} from "./closed-form-laws.ts";
import { binomialLaw, certainCount, geometricLaw, negativeBinomialLaw, poissonLaw } from "./count-laws.ts";
import type { DoubleDouble } from "./double-double.ts";
import { type Law, locatedLaw } from "./law.ts";
import { halfNoncentralChiSquare } from "./noncentral-chi-square.ts";
import { STANDARD_NORMAL } from "./normal.ts";
import { type Demand, demanded, type Parameter } from "./parameters.ts";
import { lognormalLaw, standardGamma } from "./positive-laws.ts";
import { compareQuantities, divide, doubleDoubleOf, exact, subtract, toDouble } from "./quantity.ts";
import { standardStudent } from "./student.ts";

export type Family = {
  readonly name: string;
  readonly values: "continuous" | "count";
  /** In the order they are written; those with a default last. */
  readonly parameters: readonly Parameter[];
  /** What is wrong with these parameters (all of them, defaults filled in), in words for the user, or null. */
  readonly check: (parameters: readonly Quantity[]) => string | null;
  /** The law for parameters that passed `check`; null for a family that is not measured yet. */
  readonly law: ((parameters: readonly Quantity[]) => Law) | null;
};

const ZERO = exact(0n);
const ONE = exact(1n);
const TWO = exact(2n);

function dd(q: Quantity): DoubleDouble {
  return doubleDoubleOf(q.value);
}

type Row = {
  readonly parameters: readonly Parameter[];
  readonly law: ((...parameters: Quantity[]) => Law) | null;
  /** What only several parameters together can break. */
  readonly together?: (...parameters: Quantity[]) => string | null;
};

function parameter(name: string, words: string, demand: Demand, fallback: Quantity | null = null): Parameter {
  return { name, words, demand, fallback };
}

const LOCATION = parameter("location", "the location", "any");
const SCALE = parameter("scale", "the scale", "positive");
const SHAPE = parameter("shape", "the shape", "moderate");
const DEGREES = parameter("df", "the number of degrees of freedom", "moderate");

const CONTINUOUS: Readonly<Record<string, Row>> = {
  normal: {
    parameters: [parameter("mean", "the mean", "any"), parameter("sd", "the standard deviation", "positive")],
    law: (mean, sd) => locatedLaw(STANDARD_NORMAL, mean!, sd!),
  },
  student: {
    parameters: [DEGREES, { ...LOCATION, fallback: ZERO }, { ...SCALE, fallback: ONE }],
    law: (df, location, scale) => locatedLaw(standardStudent(dd(df!)), location!, scale!),
  },
  laplace: {
    parameters: [LOCATION, SCALE],
    law: (location, scale) => locatedLaw(STANDARD_LAPLACE, location!, scale!),
  },
  logistic: {
    parameters: [LOCATION, SCALE],
    law: (location, scale) => locatedLaw(STANDARD_LOGISTIC, location!, scale!),
  },
  lognormal: {
    parameters: [
      parameter("log_mean", "the mean of the logarithm", "exponent"),
      parameter("log_sd", "the standard deviation of the logarithm", "moderate"),
    ],
    law: (logMean, logSd) => lognormalLaw(logMean!, logSd!),
  },
  exponential: {
    parameters: [parameter("mean", "the mean", "positive")],
    law: (mean) => locatedLaw(STANDARD_EXPONENTIAL, ZERO, mean!),
  },
  gamma: {
    parameters: [SHAPE, SCALE],
    law: (shape, scale) => locatedLaw(standardGamma(dd(shape!)), ZERO, scale!),
  },
  weibull: {
    parameters: [SHAPE, SCALE],
    law: (shape, scale) => locatedLaw(standardWeibull(dd(shape!)), ZERO, scale!),
  },
  uniform: {
    parameters: [parameter("low", "the lower end", "any"), parameter("high", "the upper end", "any")],
    together: (low, high) =>
      compareQuantities(low!, high!) === "less" ? null : "the lower end must be below the upper end",
    law: (low, high) => locatedLaw(STANDARD_UNIFORM, low!, subtract(high!, low!)),
  },
  chi_square: {
    parameters: [DEGREES, parameter("noncentrality", "the noncentrality", "upToMillion", ZERO)],
    law: (df, noncentrality) => {
      const half = dd(divide(df!, TWO));
      const central = noncentrality!.value.n === 0n;
      const standard = central
        ? standardGamma(half)
        : halfNoncentralChiSquare(half, dd(divide(noncentrality!, TWO)));
      return locatedLaw(standard, ZERO, TWO);
    },
  },
};

/** p and 1 − p, each exactly rounded. */
function chances(p: Quantity): readonly [DoubleDouble, DoubleDouble] {
  return [dd(p), dd(subtract(ONE, p))];
}

const CHANCE = parameter("p", "the chance p", "positiveChance");

const COUNTS: Readonly<Record<string, Row>> = {
  poisson: {
    parameters: [parameter("mean", "the mean", "moderate")],
    law: (mean) => poissonLaw(dd(mean!)),
  },
  binomial: {
    parameters: [parameter("n", "the number n", "whole"), { ...CHANCE, demand: "chance" }],
    law: (n, p) => {
      const trials = toDouble(n!);
      const [success, failure] = chances(p!);
      if (success.high === 0 || failure.high === 0) return certainCount(success.high === 0 ? 0 : trials);
      return binomialLaw(trials, success, failure);
    },
  },
  negative_binomial: {
    parameters: [parameter("r", "the number r", "moderate"), { ...CHANCE, demand: "sizeableChance" }],
    law: (r, p) => {
      const [success, failure] = chances(p!);
      return failure.high === 0 ? certainCount(0) : negativeBinomialLaw(dd(r!), success, failure);
    },
  },
  geometric: {
    parameters: [CHANCE],
    law: (p) => {
      const [success, failure] = chances(p!);
      return failure.high === 0 ? certainCount(0) : geometricLaw(success, failure);
    },
  },
  signed_rank: { parameters: [parameter("n", "the number n", "whole")], law: null },
  exceedance: {
    parameters: [
      parameter("m", "the size m of the reference sample", "whole"),
      parameter("n", "the number n", "whole"),
      parameter("j", "the rank j", "whole"),
    ],
    together: (m, _n, j) =>
      compareQuantities(j!, m!) === "greater"
        ? "the rank j must not be above the size m of the reference sample"
        : null,
    law: null,
  },
};

function familiesOf(values: Family["values"], rows: Readonly<Record<string, Row>>): [string, Family][] {
  return Object.entries(rows).map(([name, { parameters, law, together }]) => [
    name,
    {
      name,
      values,
      parameters,
      check: (given) => demanded(parameters, given) ?? together?.(...given) ?? null,
      law: law && ((given) => law(...given)),
    },
  ]);
}

/** All of them by name. */
export const FAMILIES: ReadonlyMap<string, Family> = new Map([
  ...familiesOf("continuous", CONTINUOUS),
  ...familiesOf("count", COUNTS),
]);

/** The given parameters with the defaults of the rest, or null when there are too few or too many. */
export function withDefaults(family: Family, given: readonly Quantity[]): readonly Quantity[] | null {
  if (given.length > family.parameters.length) return null;
  const all = family.parameters.map((parameter, i) => given[i] ?? parameter.fallback);
  return all.every((q) => q !== null) ? all : null;
}
