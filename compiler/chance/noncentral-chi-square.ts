/**
 * The noncentral chi-square law, halved: the variable is X/2, so that it is a Poisson mixture of gamma laws, of shape
 * df/2 + j with the chance that a Poisson count of mean noncentrality/2 is j. In, df/2 and noncentrality/2; out, both
 * tails and the density, relative error about 1e-14 from 1e-300 upward.
 *
 * Method: Johnson, Kotz & Balakrishnan, *Continuous Univariate Distributions* 2, 29.3. Only positive terms are added: the
 * upper tails of the gamma laws follow from each other upward in j and the lower ones downward, both divided by the gamma
 * factor so that nothing under- or overflows. The sum starts well before its largest term and ends where terms no longer
 * count: about 20·√(noncentrality) terms.
 */
import * as dd from "./double-double.ts";
import { gammaTailsOf, lowerSeries, upperFraction } from "./incomplete-gamma.ts";
import type { StandardLaw, Tails } from "./law.ts";
import { logGamma } from "./log-gamma.ts";

type DoubleDouble = dd.DoubleDouble;

/** The mixture: a = df/2 and shift = noncentrality/2. */
type Mixture = {
  readonly halfDegrees: DoubleDouble;
  readonly halfShift: DoubleDouble;
  readonly a: number;
  readonly shift: number;
  readonly logShift: DoubleDouble;
};

const NEGLIGIBLE = 2 ** -60;
/** Beyond, nothing is left of any law within the ranges of the parameters. */
const FAR = 1e12;
/** A largest term below e to this leaves a sum below the smallest double. */
const LEAST_LOGARITHM = -800;

/** The logarithm of Poisson(j) · y^(a+j) e^(−y) / Γ(a+j). */
function logTerm({ halfDegrees, halfShift, logShift }: Mixture, j: number, y: DoubleDouble): DoubleDouble {
  const shape = dd.add(halfDegrees, dd.pair(j));
  const weight = dd.subtract(dd.subtract(dd.scale(logShift, j), halfShift), logGamma(dd.pair(j + 1)));
  const factor = dd.subtract(dd.subtract(dd.multiply(shape, dd.log(y)), y), logGamma(shape));
  return dd.add(weight, factor);
}

/** e^logarithm · sum where the first alone might underflow. */
function scaledUp(logarithm: DoubleDouble, sum: number): number {
  const root = dd.expToNumber(dd.scale(logarithm, 0.5));
  return root * sum * root;
}

/** Where the terms of the density are largest: j(a + j) = shift·y. */
function peak({ a, shift }: Mixture, y: number): number {
  return Math.floor((2 * shift * y) / (a + Math.sqrt(a * a + 4 * shift * y)));
}

/** The upper tail of the gamma law of shape a + j divided by y^(a+j) e^(−y) / Γ(a+j), for y at least that shape. */
function firstUpper(mixture: Mixture, j: number, y: DoubleDouble): number {
  const shape = dd.add(mixture.halfDegrees, dd.pair(j));
  if (y.high >= 1) return upperFraction(shape.high, dd.toNumber(dd.subtract(y, shape)));
  const { upper, density } = gammaTailsOf(shape)(y);
  return upper / (density * y.high);
}

/** P(X/2 > y), for y at or above the mean a + shift. */
function upperTail(mixture: Mixture, y: DoubleDouble): number {
  const { a, shift } = mixture;
  const x = y.high;
  const most = Math.max(peak(mixture, x), Math.floor(shift));
  if (x > FAR || logTerm(mixture, most, y).high < LEAST_LOGARITHM) return 0;
  const first = Math.max(0, Math.floor(most - 9 * Math.sqrt(most) - 40));
  const tails = [firstUpper(mixture, first, y)];
  const tailAt = (j: number): number => {
    for (let i = first + tails.length; i <= j; i++) tails.push((tails[i - first - 1]! * (a + i - 1) + 1) / x);
    return tails[j - first]!;
  };
  return scaledUp(logTerm(mixture, most, y), sumOutward(mixture, x, most, first, tailAt));
}

/** P(X/2 ≤ y), for y below the mean. */
function lowerTail(mixture: Mixture, y: DoubleDouble): number {
  const { a, shift } = mixture;
  const x = y.high;
  const most = peak(mixture, x);
  let last = most;
  for (let share = 1; share > NEGLIGIBLE; last++) share *= (shift / (last + 1)) * (x / (a + last));
  const tails = [lowerSeries(a + last, x) / (a + last)];
  const tailAt = (j: number): number => {
    for (let i = last - tails.length; i >= j; i--) tails.push((tails[last - i - 1]! * x + 1) / (a + i));
    return tails[last - j] ?? 0;
  };
  return scaledUp(logTerm(mixture, most, y), sumOutward(mixture, x, most, 0, tailAt));
}

/**
 * Σ over j ≥ first of Poisson(j)·y^(a+j)/Γ(a+j) relative to its value at `most`, times a factor: outward from `most`, so
 * that the terms that count are few steps from one that is exact.
 */
function sumOutward(
  { a, shift }: Mixture,
  y: number,
  most: number,
  first: number,
  factorAt: (j: number) => number,
): number {
  let sum = factorAt(most);
  for (let j = most + 1, term = 1, part = sum; part > NEGLIGIBLE * sum; j++) {
    term *= (shift / j) * (y / (a + j - 1));
    part = term * factorAt(j);
    sum += part;
  }
  for (let j = most - 1, term = 1, part = sum; j >= first && part > NEGLIGIBLE * sum; j--) {
    term *= ((j + 1) / shift) * ((a + j) / y);
    part = term * factorAt(j);
    sum += part;
  }
  return sum;
}

function tails(mixture: Mixture, at: DoubleDouble): Tails {
  if (!(at.high > 0)) return { at, below: 0, above: 1 };
  if (at.high >= mixture.a + mixture.shift) {
    const above = upperTail(mixture, at);
    return { at, below: 1 - above, above };
  }
  const below = lowerTail(mixture, at);
  return { at, below, above: 1 - below };
}

function density(mixture: Mixture, at: DoubleDouble): number {
  if (!(at.high > 0) || at.high > FAR) return 0;
  const most = peak(mixture, at.high);
  return (
    scaledUp(
      logTerm(mixture, most, at),
      sumOutward(mixture, at.high, most, 0, () => 1),
    ) / at.high
  );
}

/** The standard law of X/2, for halfDegrees = df/2 > 0 and halfShift = noncentrality/2 > 0. */
export function halfNoncentralChiSquare(halfDegrees: DoubleDouble, halfShift: DoubleDouble): StandardLaw {
  const mixture = {
    halfDegrees,
    halfShift,
    a: halfDegrees.high,
    shift: halfShift.high,
    logShift: dd.log(halfShift),
  };
  return {
    support: "positive",
    tails: (at) => tails(mixture, at),
    density: (at) => density(mixture, at),
  };
}
