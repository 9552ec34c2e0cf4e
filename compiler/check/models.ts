/**
 * The models of laws, with their numbers.
 * In: the tree of a law, its alphabet, and the values of lets and parameters. Out: the model, or null once the reason was
 * reported. Distributions are for zones; which there are, with their parameters, is told by `chance/families.ts`.
 */
import type { Expression, Law, ModelTree } from "../../grammar/tree.ts";
import { FAMILIES } from "../chance/families.ts";
import { add, compareQuantities, exact, multiply, subtract } from "../chance/quantity.ts";
import type { Alphabet, LetterModel, Quantity } from "../policy.ts";
import { readCount } from "./counts.ts";
import { evaluate } from "./expressions.ts";
import { readFamily } from "./families.ts";
import { showNumber } from "./figures.ts";
import { evaluateMarkov, evaluateMass, findLetter, isProbability } from "./masses.ts";
import { showValue, type Values } from "./values.ts";

type Distribution = Extract<ModelTree, { kind: "distribution" }>;

const ZERO = exact(0n);
const ONE = exact(1n);

/** The model of a law at the given values. */
export function evaluateModel(law: Law, alphabet: Alphabet, values: Values): LetterModel | null {
  const missing = evaluateWith(law, alphabet, values);
  const { model } = law;
  switch (model.kind) {
    case "mass": {
      const mass = evaluateMass(model.mass, alphabet, values);
      return mass === null || missing === null ? null : withMissing(mass, missing, alphabet);
    }
    case "markov": {
      const rows = evaluateMarkov(model, alphabet, values);
      return rows === null || missing === null ? null : { kind: "markov", rows };
    }
    case "distribution": {
      if (alphabet.kind === "letters") return reportCategories(model, alphabet, values);
      const found = evaluateDistribution(model, values);
      return found === null || missing === null ? null : { ...found, missing };
    }
  }
}

/** The chance of the letter that stands for missing: 0 when none is given. */
function evaluateWith(law: Law, alphabet: Alphabet, values: Values): Quantity | null {
  if (law.with === undefined) return ZERO;
  const { letter: name, probability } = law.with;
  const value = evaluate(probability, values);
  const letter = findLetter(name, alphabet, values);
  if (letter !== null && letter !== alphabet.missing) {
    const stand = alphabet.missing === null ? undefined : alphabet.letters[alphabet.missing]?.name;
    const message = `"${name.text}" does not stand for a missing value of "${alphabet.name}"`;
    values.scope.report("letter_not_missing", name.span, message, {
      hint:
        stand === undefined
          ? `\`missing ${alphabet.name}: as LETTER\` makes a letter stand for it`
          : `it is \`${stand}\` that does`,
      data: { letter: name.text, statistic: alphabet.name },
    });
    return null;
  }
  if (law.model.kind === "markov") {
    values.scope.report(
      "model_mismatch",
      name.span,
      "`with` does not go with `markov`, whose letters depend on the one before",
      {
        hint: `give "${name.text}" its chances in the rows of \`markov\``.replaceAll('"', "`"),
      },
    );
    return null;
  }
  if (value === null || letter === null || !isProbability(value, probability, values)) return null;
  return value;
}

/** A mass of the letters that are there, thinned by the chance of a missing value. */
function withMissing(mass: readonly Quantity[], missing: Quantity, alphabet: Alphabet): LetterModel {
  if (missing.radius === 0 && missing.value.n === 0n) return { kind: "mass", probabilities: mass };
  const present = subtract(ONE, missing);
  const probabilities = mass.map((probability, letter) => {
    const thinned = multiply(probability, present);
    return letter === alphabet.missing ? add(thinned, missing) : thinned;
  });
  return { kind: "mass", probabilities };
}

function reportCategories(model: Distribution, alphabet: Alphabet, values: Values): null {
  const message = `"${model.name.text}" is a distribution of numbers, and "${alphabet.name}" has categories`;
  values.scope.report("model_mismatch", model.span, message, {
    hint: `give each letter its probability: \`{ ${alphabet.letters[0]?.name ?? "letter"} 0.1, … }\``,
    data: { model: model.name.text, statistic: alphabet.name },
  });
  return null;
}

type Without<T> = T extends unknown ? Omit<T, "missing"> : never;
type Numbers = Without<Extract<LetterModel, { kind: "distribution" | "autoregressive" | "estimated" }>>;

function evaluateDistribution(model: Distribution, values: Values): Numbers | null {
  const found = readFamily(model, values, evaluate);
  const extra = model.ar !== undefined ? "ar" : model.estimated !== undefined ? "estimated" : null;
  if (extra !== null && FAMILIES.has(model.name.text) && model.name.text !== "normal") {
    const message = `\`${extra}\` goes with \`normal\`, not with \`${model.name.text}\``;
    const form = extra === "ar" ? "ar phi" : "estimated from m subgroups of n";
    values.scope.report("model_mismatch", model.span, message, {
      hint: `write \`normal(mean, sd) ${form}\``,
      data: { model: model.name.text },
    });
    return null;
  }
  if (model.ar !== undefined) {
    const phi = evaluateLag(model.ar, values);
    const [mean, sd] = found?.parameters ?? [];
    return phi && mean && sd ? { kind: "autoregressive", mean, sd, phi } : null;
  }
  if (model.estimated !== undefined) {
    const sample = evaluateSample(model.estimated, values);
    const [mean, sd] = found?.parameters ?? [];
    return sample && mean && sd ? { kind: "estimated", mean, sd, ...sample } : null;
  }
  return found === null
    ? null
    : { kind: "distribution", family: found.family.name, parameters: found.parameters };
}

/** The lag-1 correlation of a stationary first-order autoregression. */
function evaluateLag(tree: Expression, values: Values): Quantity | null {
  const phi = evaluate(tree, values);
  if (phi === null) return null;
  const isInside = compareQuantities(phi, ONE) === "less" && compareQuantities(phi, exact(-1n)) === "greater";
  if (isInside) return phi;
  const message = `the correlation after \`ar\` lies between -1 and 1, not at ${showValue(tree, phi)}`;
  values.scope.report("model_parameter", tree.span, message, {
    hint: "at 1 and beyond the statistic has no stationary law",
    data: { value: showNumber(phi) },
  });
  return null;
}

type Sample = Pick<Extract<LetterModel, { kind: "estimated" }>, "subgroups" | "size" | "under">;

/** The phase 1 sample. */
function evaluateSample(tree: NonNullable<Distribution["estimated"]>, values: Values): Sample | null {
  const subgroups = readCount(tree.subgroups, 1, "the number of subgroups", values);
  const size = readCount(tree.size, 2, "the size of a subgroup", values);
  return subgroups === null || size === null ? null : { subgroups, size, under: tree.under ?? null };
}
