/**
 * Expectations: trials written out, and the raises due on them.
 * In: `expect` declarations. Out: symbols with raises, repeat counts unrolled, or null once the reason was reported. A
 * repeat count before a raise repeats the letter only: in `3 high -> stop` the raise belongs to the third.
 */
import type { Name, TrialTree } from "../../grammar/tree.ts";
import type { Alphabet, Expect, ExpectedTrial } from "../policy.ts";
import { MOST_TRIALS } from "./counts.ts";
import type { Of } from "./declarations.ts";
import { countOf } from "./figures.ts";
import { signalIndex } from "./measures.ts";
import { resolve } from "./scope.ts";
import type { Trials } from "./trials.ts";
import { shorten, type Values } from "./values.ts";

export type Stream = { readonly alphabets: readonly Alphabet[]; readonly trials: Trials };

/** Checks all expectations; together they hold at most MOST_TRIALS trials. */
export function checkExpects(
  expects: readonly Of<"expect">[],
  stream: Stream,
  values: Values,
): (Expect | null)[] {
  let room = MOST_TRIALS;
  return expects.map((declaration) => {
    const expectation = checkExpectation(declaration, values);
    const found = declaration.trials.map((tree) => checkTrial(tree, stream, values));
    checkRaises(declaration, values);
    const counts = declaration.trials.map((tree) => readRepeat(tree, values));
    const total = counts.reduce((sum: number, count) => sum + (count ?? 0), 0);
    if (total > room) return reportLong(declaration, values);
    room -= total;
    if (expectation === null || found.includes(null) || counts.includes(null)) return null;
    const trials = found.flatMap((trial, index) => unroll(trial!, counts[index] ?? 1));
    return { trials, expectation, span: declaration.span };
  });
}

function checkExpectation({ expectation }: Of<"expect">, values: Values): Expect["expectation"] | null {
  if (expectation.kind !== "signal") return { kind: expectation.kind };
  const place = "`expect` names a signal, `any`, `quiet` or `all`";
  const signal = signalIndex(expectation.name, place, values);
  return signal === null ? null : { kind: "signal", signal };
}

function unroll(trial: ExpectedTrial, count: number): ExpectedTrial[] {
  const plain = trial.raises.length === 0 ? trial : { ...trial, raises: [] };
  return Array.from({ length: count }, (_, index) => (index === count - 1 ? trial : plain));
}

function readRepeat({ count }: TrialTree, values: Values): number | null {
  if (count === undefined) return 1;
  const value = Number(count.text);
  if (value >= 1 && value <= MOST_TRIALS) return value;
  const limit = MOST_TRIALS.toLocaleString("en-US");
  const shown = count.text.length > 20 ? `a number of ${count.text.length} digits` : count.text;
  values.scope.report(
    "count_out_of_range",
    count.span,
    `a trial is repeated from 1 to ${limit} times, not ${shown}`,
    {
      data: { value: Number.isFinite(value) ? value : null, least: 1, most: MOST_TRIALS },
    },
  );
  return null;
}

function reportLong(declaration: Of<"expect">, values: Values): null {
  const limit = MOST_TRIALS.toLocaleString("en-US");
  values.scope.report(
    "count_out_of_range",
    declaration.span,
    `the trials of all expectations are more than ${limit}`,
    {
      hint: "expect shorter streams",
      data: { most: MOST_TRIALS },
    },
  );
  return null;
}

/** The symbol of a trial, null inside for a missing one. */
function checkTrial(tree: TrialTree, { alphabets, trials }: Stream, values: Values): ExpectedTrial | null {
  const raises = (tree.raises ?? []).map(
    (name) => resolve(values.scope, name, ["signal"], "after `->` stands a signal")?.index ?? null,
  );
  const bare = !tree.tuple && tree.letters[0] === null;
  if (!bare && tree.letters.length !== alphabets.length) return reportSize(tree, alphabets, values);
  const letters = alphabets.map((alphabet, index) => {
    const name = bare ? null : tree.letters[index];
    return name === null || name === undefined
      ? (alphabet.missing ?? "missing")
      : letterIn(name, index, alphabets, values);
  });
  if (letters.includes(null) || raises.includes(null)) return null;
  const isMissing = letters.includes("missing");
  const symbol = letters.reduce(
    (sum: number, letter, index) => sum + Number(letter) * (trials.strides[index] ?? 1),
    0,
  );
  return { symbol: isMissing ? null : symbol, raises: raises as readonly number[], span: tree.span };
}

function letterIn(name: Name, index: number, alphabets: readonly Alphabet[], values: Values): number | null {
  const alphabet = alphabets[index]!;
  const found = alphabet.letters.findIndex((letter) => letter.name === name.text);
  if (found !== -1) return found;
  const entity = resolve(values.scope, name, ["letter"], `a trial names a letter of "${alphabet.name}" here`);
  if (entity === null) return null;
  values.scope.report(
    "trial_mismatch",
    name.span,
    `"${name.text}" is a letter of "${entity.of}"; a letter of "${alphabet.name}" stands here`,
    {
      hint: `a trial is ${orderOf(alphabets)}`,
      related: [{ span: entity.span, message: `"${name.text}" is declared here` }],
      data: { letter: name.text, statistic: alphabet.name },
    },
  );
  return null;
}

function reportSize(tree: TrialTree, alphabets: readonly Alphabet[], values: Values): null {
  const found = countOf(tree.letters.length, "letter");
  const due = countOf(alphabets.length, "alphabet");
  values.scope.report(
    "trial_mismatch",
    tree.span,
    `${shorten(tree)} has ${found}, and the policy has ${due}`,
    {
      hint: `write a trial as ${orderOf(alphabets)}`,
      data: { letters: tree.letters.length, alphabets: alphabets.length },
    },
  );
  return null;
}

/** How a trial is written: `(fill, weight)`, or for one alphabet one of its letters. */
function orderOf(alphabets: readonly Alphabet[]): string {
  if (alphabets.length === 1) return `a letter of "${alphabets[0]?.name}"`;
  return `\`(${alphabets.map(({ name }) => name).join(", ")})\`, with a letter of each`;
}

/** `->` belongs to `expect all` alone. */
function checkRaises({ expectation, trials }: Of<"expect">, values: Values): void {
  if (expectation.kind === "all") return;
  const first = trials.find((tree) => tree.raises !== undefined);
  if (first === undefined) return;
  const form =
    expectation.kind === "quiet"
      ? "`expect quiet` expects no raise"
      : "`expect SIGNAL` expects one raise, at the last trial";
  values.scope.report("raise_misplaced", first.span, `${form}, and ${shorten(first)} writes one out`, {
    hint: "write `expect all on …` for exactly the raises written",
  });
}
