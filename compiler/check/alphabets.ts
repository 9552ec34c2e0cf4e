/**
 * The alphabets: chains of intervals and lists of categories, each a partition of the values of a statistic.
 * In: `zones`, `letters` and `missing STAT: as LETTER`, and the values of the lets. Out: alphabets with exact cuts. Around
 * each cut exactly one letter owns it; cuts increase, and two are equal only around a letter that owns both.
 */
import { spanText } from "../../grammar/span.ts";
import type { CutTree, Name } from "../../grammar/tree.ts";
import { compareQuantities, doubleOf } from "../chance/quantity.ts";
import type { Alphabet, Cut, Letter, Quantity } from "../policy.ts";
import type { Declared, Of, Statistic } from "./declarations.ts";
import { evaluate } from "./expressions.ts";
import { showApart, showNumber } from "./figures.ts";
import { letterNames } from "./names.ts";
import { resolve } from "./scope.ts";
import { shorten, type Values } from "./values.ts";

/** A cut whose number may be missing because its fault was reported. */
type Found = { readonly tree: CutTree; readonly at: Quantity | null; readonly owner: Cut["owner"] | null };

/** Makes the alphabets; those with a fault stand in with their letters, so that names keep their place. */
export function checkAlphabets(declared: Declared, values: Values): Alphabet[] {
  const missing = missingLetters(declared, values);
  return declared.statistics.map((statistic, index) => {
    const letters: Letter[] = letterNames(statistic).map((name, letter) => ({
      name: name.text,
      text: statistic.kind === "letters" ? (statistic.letters[letter]?.text?.value ?? null) : null,
      span: name.span,
    }));
    const cuts = statistic.kind === "zones" ? checkCuts(statistic, values) : [];
    if (statistic.kind === "letters") checkTexts(statistic, values);
    const stand = missing.get(index) ?? null;
    const place = stand === null ? -1 : letters.findIndex((letter) => letter.name === stand.text);
    if (stand !== null && place === -1) letters.push({ name: stand.text, text: null, span: stand.span });
    return {
      name: statistic.name.text,
      kind: statistic.kind,
      letters,
      cuts,
      missing: stand === null ? null : place === -1 ? letters.length - 1 : place,
      span: statistic.span,
    };
  });
}

/** The letter that stands for a missing value, by statistic. */
function missingLetters(declared: Declared, values: Values): ReadonlyMap<number, Name> {
  const found = new Map<number, Name>();
  for (const { statistic, letter, span } of declared.missingLetters) {
    const place = "`missing STAT: as LETTER` names a statistic";
    const entity = resolve(values.scope, statistic, ["statistic"], place);
    if (entity === null) continue;
    const first = found.get(entity.index);
    if (first === undefined) {
      found.set(entity.index, letter);
      continue;
    }
    values.scope.report(
      "declared_twice",
      span,
      `a missing "${statistic.text}" already stands as "${first.text}"`,
      {
        hint: "keep one of the two",
        related: [{ span: first.span, message: "it is said here" }],
      },
    );
  }
  return found;
}

function checkCuts(zones: Of<"zones">, values: Values): Cut[] {
  const found = zones.cuts.map((tree, index): Found => {
    const owner = ownerOf(zones, index, values);
    return { tree, at: evaluate(tree.expression, values), owner };
  });
  for (let index = 1; index < found.length; index++) checkPair(zones, found, index, values);
  return found.flatMap(({ tree, at, owner }) =>
    at === null || owner === null ? [] : [{ at, owner, span: tree.expression.span }],
  );
}

function ownerOf(zones: Of<"zones">, index: number, values: Values): Cut["owner"] | null {
  const cut = zones.cuts[index]!;
  if (cut.below !== cut.above) return cut.below === "<=" ? "below" : "above";
  const below = zones.letters[index]?.text ?? "";
  const above = zones.letters[index + 1]?.text ?? "";
  const written = shorten(cut.expression).slice(1, -1);
  const hint = `write \`${below} <= ${written} < ${above}\` or \`${below} < ${written} <= ${above}\``;
  const data = { statistic: zones.name.text, below, above };
  if (cut.below === "<") {
    const message = `the cut ${shorten(cut.expression)} belongs neither to "${below}" nor to "${above}"`;
    values.scope.report("cut_unowned", cut.span, message, { hint, data });
  } else {
    const message = `the cut ${shorten(cut.expression)} belongs to both "${below}" and "${above}"`;
    values.scope.report("cut_owned_twice", cut.span, message, { hint, data });
  }
  return null;
}

/** Checks that a cut lies above the one before it, or is equal around a letter that owns both. */
function checkPair(zones: Of<"zones">, cuts: readonly Found[], index: number, values: Values): void {
  const [before, after] = [cuts[index - 1]!, cuts[index]!];
  if (before.at === null || after.at === null) return;
  const letter = zones.letters[index]?.text ?? "";
  const order = compareQuantities(before.at, after.at);
  const ownsBoth = before.owner === "above" && after.owner === "below";
  if (order === "open") {
    reportOpen(letter, before, after, values);
  } else if (order === "greater") {
    reportOrder(`the cuts around "${letter}" do not increase`, before, after, values);
  } else if (order === "equal" && !ownsBoth && before.owner !== null && after.owner !== null) {
    reportOrder(
      `the cuts around "${letter}" are equal, and "${letter}" does not own both`,
      before,
      after,
      values,
    );
  } else if (order === "less" && doubleOf(before.at.value) === doubleOf(after.at.value)) {
    reportCollision(letter, before, after, values);
  }
}

function reportOrder(fault: string, before: Found, after: Found, values: Values): void {
  const [low, high] = [before.at!, after.at!];
  const areEqual = compareQuantities(low, high) === "equal";
  const [first, second] = areEqual ? [showNumber(low), showNumber(high)] : showApart(low, high);
  const shown = (cut: Found, number: string) => {
    const text = spanText(cut.tree.expression.span);
    return text === number ? number : `${shorten(cut.tree.expression)} (${number})`;
  };
  const order = areEqual
    ? `both are ${second}`
    : `${shown(after, second)} stands after ${shown(before, first)}`;
  values.scope.report("cuts_not_increasing", after.tree.expression.span, `${fault}: ${order}`, {
    hint: "from left to right cuts increase; two may be equal only around a letter that owns both: `a < 0 <= b <= 0 < c`",
    related: [{ span: before.tree.expression.span, message: `the cut at ${first}` }],
    data: { before: doubleOf(low.value), after: doubleOf(high.value) },
  });
}

function reportOpen(letter: string, before: Found, after: Found, values: Values): void {
  const [low, high] = [before.at!, after.at!];
  const width = (low.radius + high.radius).toPrecision(2);
  const message =
    `whether the cuts around "${letter}" increase is left open: ` +
    `${shorten(before.tree.expression)} and ${shorten(after.tree.expression)} are both ${showNumber(high)}, known to within ${width}`;
  values.scope.report("open_question", after.tree.expression.span, message, {
    hint: "set the cuts further apart, or write them as decimal numbers, which are exact",
    related: [{ span: before.tree.expression.span, message: "the cut before it" }],
    data: { before: doubleOf(low.value), after: doubleOf(high.value) },
  });
}

function reportCollision(letter: string, before: Found, after: Found, values: Values): void {
  const [low, high] = showApart(before.at!, after.at!);
  const message = `the cuts around "${letter}", ${low} and ${high}, round to one double, ${doubleOf(after.at!.value)}`;
  values.scope.report("cuts_collide", after.tree.expression.span, message, {
    hint: "set the cuts further apart: a detector reads doubles",
    related: [{ span: before.tree.expression.span, message: "the cut it collides with" }],
    data: { double: doubleOf(after.at!.value) },
  });
}

/** No two letters may be read from the same text, and none from an empty one, which is a missing value. */
function checkTexts(statistic: Of<"letters">, values: Values): void {
  const byText = new Map<string, Statistic["name"]>();
  for (const { name, text } of statistic.letters) {
    const written = text?.value ?? name.text;
    const first = byText.get(written);
    const span = text?.span ?? name.span;
    if (written.trim() === "") {
      values.scope.report(
        "letter_text",
        span,
        `"${name.text}" cannot be read from an empty text: empty means missing`,
        {
          hint: `\`missing ${statistic.name.text}: as ${name.text}\` makes a missing value this letter`,
          data: { letter: name.text },
        },
      );
    } else if (first !== undefined && first.text !== name.text) {
      values.scope.report(
        "letter_text",
        span,
        `both "${first.text}" and "${name.text}" are read from the text "${written}"`,
        {
          hint: "give each letter a text of its own",
          related: [{ span: first.span, message: `"${first.text}" is declared here` }],
          data: { text: written, first: first.text, second: name.text },
        },
      );
    }
    if (first === undefined) byText.set(written, name);
  }
}
