/**
 * Quantiles from the side they are asked from: the value exceeded, or not reached, with a given chance. In: a family, its
 * exact parameters and an exact chance; out: a quantity with a radius, or why there is none.
 *
 * Continuous families: the standard variable by safeguarded Newton steps on the logarithm of the smaller tail (in asinh x
 * on the line, in ln x on the positive side, where the logarithm of every tail of the language is nearly straight or
 * concave), down to chances of 1e-300; then location and scale in exact arithmetic. The radius covers the error of the
 * tail, of the chance and of inexact parameters. Rational values (a median of a symmetric law, a uniform law) are exact.
 *
 * Count families: `upper` is the smallest whole x with P(X > x) ≤ p, `lower` the largest whole x with P(X < x) ≤ p; a
 * tail too close to p to tell is decided in exact arithmetic (`count-quantile.ts`), or refused.
 */
import type { Quantity } from "../policy.ts";
import { countQuantile, type Refused, type Side } from "./count-quantile.ts";
import * as dd from "./double-double.ts";
import type { Family } from "./families.ts";
import type { ContinuousLaw, StandardLaw } from "./law.ts";
import { compareQuantities, doubleOf, exact, fractionOfDouble, fromDouble, subtract } from "./quantity.ts";

const ZERO = exact(0n);
const ONE = exact(1n);
/** No tail of a law is further off than this, relative to itself (see the tests of the laws). */
const TAIL_ERROR = 4e-15;
const SMALLEST_CHANCE = 1e-300;
/** A density nearer to 0 has too few digits left for a Newton step. */
const LEAST_DENSITY = 1e-305;
/** The standard variable is sought up to e^REACH, 1e299. */
const REACH = 690;

/** The value exceeded with chance p, 0 < p < 1; for a count the smallest whole x with P(X > x) ≤ p. */
export function upperQuantile(
  family: Family,
  parameters: readonly Quantity[],
  p: Quantity,
): Quantity | Refused {
  return quantile(family, parameters, p, "above");
}

/** The value not reached with chance p, 0 < p < 1; for a count the largest whole x with P(X < x) ≤ p. */
export function lowerQuantile(
  family: Family,
  parameters: readonly Quantity[],
  p: Quantity,
): Quantity | Refused {
  return quantile(family, parameters, p, "below");
}

function quantile(
  family: Family,
  parameters: readonly Quantity[],
  p: Quantity,
  side: Side,
): Quantity | Refused {
  const { law } = family;
  if (law === null) return { refused: `quantiles of ${family.name} are not built in this version` };
  const inside = compareQuantities(p, ZERO) === "greater" && compareQuantities(p, ONE) === "less";
  if (!inside) return { refused: "the chance must be above 0 and below 1" };
  const rest = subtract(ONE, p);
  if (Math.min(doubleOf(p.value), doubleOf(rest.value)) < SMALLEST_CHANCE) {
    return { refused: "the chance must not be nearer than 1e-300 to 0 or 1" };
  }
  const values = parameters.map(({ value }) => exact(value));
  const find = (at: readonly Quantity[]) => {
    const found = law(at);
    return found.kind === "count"
      ? countQuantile(family.name, found, at, p, side)
      : continuousQuantile(found, p, rest, side);
  };
  const found = find(values);
  return "refused" in found
    ? found
    : widened(found, parameters, (i, end) => find(values.with(i, end)), family);
}

/** The quantile with its radius widened by what it does when each inexact parameter moves by its own radius. */
function widened(
  middle: Quantity,
  parameters: readonly Quantity[],
  moved: (index: number, end: Quantity) => Quantity | Refused,
  family: Family,
): Quantity | Refused {
  let radius = middle.radius;
  for (const [i, { value, radius: reach }] of parameters.entries()) {
    if (reach === 0) continue;
    const open = { refused: `the ${family.parameters[i]?.name} of ${family.name} is not known well enough` };
    if (!Number.isFinite(reach)) return open;
    const step = fractionOfDouble(reach);
    let most = 0;
    for (const end of [value.sub(step), value.add(step)]) {
      const there = moved(i, exact(end));
      if ("refused" in there) return there;
      most = Math.max(most, Math.abs(doubleOf(there.value.sub(middle.value))));
    }
    if (most > 0 && family.values === "count") return open;
    radius += 1.000001 * most + middle.radius;
  }
  return { value: middle.value, radius };
}

function continuousQuantile(law: ContinuousLaw, p: Quantity, rest: Quantity, side: Side): Quantity | Refused {
  const { standard } = law;
  const known = standard.exactQuantile?.((side === "above" ? p : rest).value) ?? null;
  const small = p.value.compare(rest.value) <= 0;
  const tail = doubleOf((small ? p : rest).value);
  const found = known === null ? solve(standard, tail, small === (side === "above")) : doubleOf(known);
  const density = standard.density(dd.pair(found));
  if (!(density > LEAST_DENSITY)) return { refused: "the quantile lies too far out to be found" };
  const fromChance = p.radius / density;
  if (known !== null) return law.original({ value: known, radius: fromChance });
  const radius = (tail * TAIL_ERROR) / density + Math.abs(found) * 2 ** -51 + fromChance;
  return law.original(fromDouble(found, radius));
}

/** The standard variable whose upper (or lower) tail is `tail` ≤ 1/2; NaN when it is no normal double. */
function solve(standard: StandardLaw, tail: number, upper: boolean): number {
  const line = standard.support === "line";
  const place = (s: number) => (line ? Math.sinh(s) : Math.exp(s));
  const at = (x: number) => {
    const { above, below } = standard.tails(dd.pair(x));
    return upper ? above : below;
  };
  let [low, high] = [-REACH, REACH];
  const [first, last] = [at(place(low)), at(place(high))];
  if (upper ? !(first > tail && last < tail) : !(first < tail && last > tail)) return Number.NaN;
  for (let s = 0, step = 0; step < 200; step++) {
    const x = place(s);
    const there = at(x);
    if (there > tail === upper) low = s;
    else high = s;
    const slope = standard.density(dd.pair(x)) * (line ? Math.cosh(s) : x);
    const move = (there / slope) * Math.log(there / tail);
    let next = upper ? s + move : s - move;
    if (!(next > low && next < high)) next = (low + high) / 2;
    const done = Math.abs(next - s) <= 1e-13 * Math.max(1, Math.abs(s));
    s = next;
    if (done || high - low < 1e-13) return polished(standard, place(s), tail, upper);
  }
  return Number.NaN;
}

/** Two last Newton steps in the variable itself, which no rounding of its logarithm disturbs. */
function polished(standard: StandardLaw, start: number, tail: number, upper: boolean): number {
  let x = start;
  for (let step = 0; step < 2; step++) {
    const { above, below } = standard.tails(dd.pair(x));
    const move = (upper ? above - tail : tail - below) / standard.density(dd.pair(x));
    if (Number.isFinite(move)) x += move;
  }
  return x;
}
