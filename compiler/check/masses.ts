/**
 * Laws of letters given letter by letter: `{ letter p, … }`, and `markov`.
 * In: the tree, the alphabet, and the values of names. Out: a probability for each letter, or null once the reason was
 * reported. The probabilities add up to exactly 1; one letter may stand without a number and takes what is left.
 */
import type { MassTree, ModelTree, Name } from "../../grammar/tree.ts";
import { add, compareQuantities, exact, subtract } from "../chance/quantity.ts";
import type { Alphabet, Quantity } from "../policy.ts";
import { evaluate } from "./expressions.ts";
import { listNames, showNumber } from "./figures.ts";
import { stronglyConnected } from "./order.ts";
import { resolve } from "./scope.ts";
import { shorten, showValue, type Values } from "./values.ts";

const ZERO = exact(0n);
const ONE = exact(1n);
/** A chain is a square table. */
const MOST_MARKOV_LETTERS = 500;

/** The letter of an alphabet that a name means, or null once the reason was reported. */
export function findLetter(name: Name, alphabet: Alphabet, values: Values): number | null {
  const index = alphabet.letters.findIndex((letter) => letter.name === name.text);
  if (index !== -1) return index;
  const place = `a law of "${alphabet.name}" names its letters`;
  const entity = resolve(values.scope, name, ["letter"], place);
  if (entity === null) return null;
  values.scope.report("wrong_role", name.span, `"${name.text}" is a letter of "${entity.of}"; ${place}`, {
    hint: `its letters are ${listNames(
      alphabet.letters.map((letter) => letter.name),
      12,
    ).replaceAll('"', "`")}`,
    related: [{ span: entity.span, message: `"${name.text}" is declared here` }],
    data: { name: name.text, statistic: alphabet.name },
  });
  return null;
}

/** Whether a number is certainly a probability; reports when it is not, or may not be. */
export function isProbability(
  value: Quantity,
  written: { readonly span: MassTree["span"] },
  values: Values,
): boolean {
  const [low, high] = [compareQuantities(value, ZERO), compareQuantities(value, ONE)];
  if (low === "less" || high === "greater") {
    values.scope.report(
      "probability_range",
      written.span,
      `a probability lies between 0 and 1, not at ${showValue(written, value)}`,
      {
        data: { value: showNumber(value) },
      },
    );
    return false;
  }
  if (low !== "open" && high !== "open") return true;
  const edge = low === "open" ? "below 0" : "above 1";
  values.scope.report(
    "open_question",
    written.span,
    `whether ${shorten(written)} lies ${edge} is left open: it is ${showNumber(value)}, to double accuracy`,
  );
  return false;
}

/** The probabilities of a mass by letter. */
export function evaluateMass(tree: MassTree, alphabet: Alphabet, values: Values): readonly Quantity[] | null {
  const probabilities: (Quantity | null)[] = alphabet.letters.map(() => null);
  const open: { readonly name: Name; readonly letter: number }[] = [];
  let isSound = true;
  for (const { letter: name, probability } of tree.entries) {
    const letter = findLetter(name, alphabet, values);
    const value = probability === undefined ? null : evaluate(probability, values);
    if (letter === null || (probability !== undefined && value === null)) {
      isSound = false;
    } else if (probabilities[letter] || open.some((other) => other.letter === letter)) {
      isSound = reportTwice(name, "its probability", values);
    } else if (probability === undefined || value === null) {
      open.push({ name, letter });
    } else {
      if (!isProbability(value, probability, values)) isSound = false;
      probabilities[letter] = value;
    }
  }
  if (open.length > 1) isSound = reportManyOpen(open, tree, values);
  if (!isSound) return null;
  const given = probabilities.filter((value) => value !== null).reduce(add, ZERO);
  const rest = subtract(ONE, given);
  const [taker] = open;
  if (!isWholeMass(given, rest, tree, taker !== undefined, values)) return null;
  return probabilities.map((value, letter) => (letter === taker?.letter ? rest : (value ?? ZERO)));
}

/** Whether what is given adds up to exactly 1, or leaves at least 0 for the letter without a number. */
function isWholeMass(
  given: Quantity,
  rest: Quantity,
  tree: MassTree,
  hasTaker: boolean,
  values: Values,
): boolean {
  const order = compareQuantities(rest, ZERO);
  if (order === "equal" || (order === "greater" && hasTaker)) return true;
  if (order === "open") {
    const question = hasTaker ? "exceed 1" : "add up to exactly 1";
    values.scope.report(
      "open_question",
      tree.span,
      `whether the probabilities ${question} is left open: their sum is known to double accuracy only`,
      {
        hint: hasTaker
          ? "leave more for the letter without a number"
          : "let one letter stand without a number: it takes what is left",
      },
    );
    return false;
  }
  const sum = showNumber(given, 17);
  const difference =
    order === "less" ? `${showNumber(subtract(given, ONE))} too much` : `${showNumber(rest)} too little`;
  values.scope.report("probabilities_sum", tree.span, `the probabilities add up to ${sum}: ${difference}`, {
    hint: "one letter may stand without a number and takes what is left",
    data: { sum },
  });
  return false;
}

function reportTwice(name: Name, what: string, values: Values): false {
  values.scope.report("letter_twice", name.span, `"${name.text}" is given ${what} twice`, {
    hint: "keep one of the two",
    data: { letter: name.text },
  });
  return false;
}

function reportManyOpen(open: readonly { readonly name: Name }[], tree: MassTree, values: Values): false {
  const names = open.map(({ name }) => name.text);
  values.scope.report(
    "probabilities_sum",
    tree.span,
    `${listNames(names)} stand without a number; only one letter may take what is left`,
    {
      hint: `give ${open.length === 2 ? "one" : "all but one"} of them a number`,
      data: { letters: names },
    },
  );
  return false;
}

function reportLarge(tree: ModelTree, alphabet: Alphabet, values: Values): null {
  const message = `markov is limited to ${MOST_MARKOV_LETTERS} letters, and "${alphabet.name}" has ${alphabet.letters.length}`;
  values.scope.report("too_many_letters", tree.span, message, { data: { letters: alphabet.letters.length } });
  return null;
}

/** The rows of a Markov chain, by letter and next letter. */
export function evaluateMarkov(
  tree: Extract<ModelTree, { kind: "markov" }>,
  alphabet: Alphabet,
  values: Values,
): readonly (readonly Quantity[])[] | null {
  if (alphabet.letters.length > MOST_MARKOV_LETTERS) return reportLarge(tree, alphabet, values);
  const rows: (readonly Quantity[] | null | undefined)[] = alphabet.letters.map(() => undefined);
  let isSound = true;
  for (const { letter: name, mass } of tree.rows) {
    const letter = findLetter(name, alphabet, values);
    const row = evaluateMass(mass, alphabet, values);
    if (letter === null) isSound = false;
    else if (rows[letter] !== undefined) isSound = reportTwice(name, "a row", values);
    else rows[letter] = row;
  }
  const without = alphabet.letters.filter((_, letter) => rows[letter] === undefined).map(({ name }) => name);
  if (isSound && without.length > 0) {
    values.scope.report(
      "row_missing",
      tree.span,
      `markov says nothing of what follows ${listNames(without)}`,
      {
        hint: `add \`${without[0]} -> { … }\`: every letter of "${alphabet.name}" needs a row`,
        data: { statistic: alphabet.name, letters: without },
      },
    );
    return null;
  }
  if (!isSound || rows.some((row) => row === null || row === undefined)) return null;
  return hasOneLaw(rows as readonly (readonly Quantity[])[], alphabet, tree, values);
}

/** A chain needs one stationary law: all letters must lead to one set of letters that is never left. */
function hasOneLaw(
  rows: readonly (readonly Quantity[])[],
  alphabet: Alphabet,
  tree: ModelTree,
  values: Values,
): readonly (readonly Quantity[])[] | null {
  const targets = rows.map((row) => row.flatMap((p, next) => (p.value.n === 0n ? [] : [next])));
  const closed = stronglyConnected(targets).filter((set) => {
    const members = new Set(set);
    return set.every((letter) => targets[letter]?.every((next) => members.has(next)));
  });
  if (closed.length < 2) return rows;
  const [a, b] = closed.map((set) => listNames(set.map((letter) => alphabet.letters[letter]?.name ?? "")));
  values.scope.report(
    "model_parameter",
    tree.span,
    `the chain has no single stationary law: it never leaves ${b}, nor ${a}`,
    {
      hint: "give some letter a chance to lead from one to the other",
    },
  );
  return null;
}
