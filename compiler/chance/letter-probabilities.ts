/**
 * From the law of a statistic to the chances of its letters. In: an alphabet with exact cuts and a model with exact
 * parameters. Out: a double-double for each letter, or the name of a model that is not built yet.
 *
 * Accuracy: for a mass, the exact rationals to 32 digits. For a distribution each letter is right relative to itself, to
 * about 1e-15 from 1e-300 upward (see the laws for the few exceptions), with low part 0 but for two letters: the largest,
 * when it holds half or more, is one minus the sum of the others in double-double, so that the sum is exactly 1; and
 * what is multiplied by the chance of not being missing keeps the product's low part. Cost: a normal law with seven cuts
 * takes about 10 µs.
 */
import type { Alphabet, LetterModel, Quantity } from "../policy.ts";
import * as dd from "./double-double.ts";
import { FAMILIES } from "./families.ts";
import type { Law } from "./law.ts";
import { doubleDoubleOf, exact, subtract } from "./quantity.ts";

/** Many double-doubles: by index, the two parts. */
export type Chances = { readonly high: Float64Array; readonly low: Float64Array };

/** A model this version reads and checks but cannot measure, by the word of the language. */
export type Unbuilt = { readonly unbuilt: string };

const ONE = exact(1n);

/**
 * The chance of each letter, in the order of the alphabet. The parameters must have passed the check of their family, and
 * a distribution needs an alphabet of zones (a mistake of ours otherwise: RangeError).
 */
export function letterProbabilities(alphabet: Alphabet, model: LetterModel): Chances | Unbuilt {
  switch (model.kind) {
    case "mass":
      return chancesOf(model.probabilities.map(({ value }) => doubleDoubleOf(value)));
    case "distribution": {
      const family = FAMILIES.get(model.family);
      if (family === undefined) throw new RangeError(`no distribution "${model.family}"`);
      if (family.law === null) return { unbuilt: model.family };
      const zones = zoneProbabilities(alphabet, family.law(model.parameters));
      return chancesOf(withMissing(alphabet, completed(zones), model.missing));
    }
    case "markov":
      return { unbuilt: "markov" };
    case "autoregressive":
      return { unbuilt: "ar" };
    case "estimated":
      return { unbuilt: "estimated" };
    default:
      return model satisfies never;
  }
}

/** The chance of each zone, from the lowest to the highest. */
function zoneProbabilities(alphabet: Alphabet, law: Law): number[] {
  if (alphabet.kind !== "zones") throw new RangeError(`"${alphabet.name}" has no zones`);
  const bounds = alphabet.cuts.map(({ at, owner }) => law.tails(law.place(at.value, owner)));
  const [first, last] = [bounds[0], bounds.at(-1)];
  if (first === undefined || last === undefined) return [1];
  const inner = bounds.slice(1).map((bound, i) => law.between(bounds[i]!, bound));
  return [first.below, ...inner, last.above];
}

/** The same, the largest replaced by what the others leave when that is half or more. */
function completed(zones: readonly number[]): dd.DoubleDouble[] {
  const chances = zones.map(dd.pair);
  const largest = zones.indexOf(Math.max(...zones));
  if (!(zones[largest]! >= 0.5)) return chances;
  const others = chances.reduce(
    (total, chance, i) => (i === largest ? total : dd.add(total, chance)),
    dd.pair(0),
  );
  chances[largest] = dd.subtract(dd.pair(1), others);
  return chances;
}

/** The zones thinned by the chance of a missing value, which goes to the letter that stands for it. */
function withMissing(
  alphabet: Alphabet,
  zones: readonly dd.DoubleDouble[],
  missing: Quantity,
): readonly dd.DoubleDouble[] {
  if (missing.value.n === 0n && zones.length === alphabet.letters.length) return zones;
  const chance = doubleDoubleOf(missing.value);
  const present = doubleDoubleOf(subtract(ONE, missing).value);
  return alphabet.letters.map((_, letter) => {
    const zone = zones[letter] ?? dd.pair(0);
    const seen = dd.multiply(zone, present);
    return letter === alphabet.missing ? dd.add(seen, chance) : seen;
  });
}

function chancesOf(values: readonly dd.DoubleDouble[]): Chances {
  const high = new Float64Array(values.length);
  const low = new Float64Array(values.length);
  for (const [i, value] of values.entries()) {
    high[i] = value.high;
    low[i] = value.low;
  }
  return { high, low };
}
