/**
 * A policy's data as `.tocsin` text, with the parentheses the grammar needs and no others. Independent of the project's own
 * printer. Cuts are the whole numbers 1, 2, …, owned in turn by the letter below and the one above.
 */
import type { Alphabet, Condition, Pattern, Policy, SetExpr, Signal } from "./policy.ts";

const UNION_OR_NAME = 2;
const MEET = 1;
const EXCEPT = 0;

/** The text of a SET where an operand of at least this tightness is due; braces group. */
function setText(set: SetExpr, tightness = EXCEPT): string {
  switch (set.kind) {
    case "any":
      return "any";
    case "letter":
    case "group":
      return set.name;
    case "union":
      return `{${set.members.map((member) => setText(member)).join(", ")}}`;
    case "meet": {
      const text = `${setText(set.left, MEET)} & ${setText(set.right, UNION_OR_NAME)}`;
      return tightness > MEET ? `{${text}}` : text;
    }
    case "except": {
      const text = `${setText(set.left, EXCEPT)} except ${setText(set.right, MEET)}`;
      return tightness > EXCEPT ? `{${text}}` : text;
    }
  }
}

function timesText(least: number, most: number | null): string {
  if (most === null) return `${least}..`;
  return least === most ? `${least}` : `${least}..${most}`;
}

/** An item of a sequence; only a choice needs parentheses there. */
function itemText(item: Pattern): string {
  switch (item.kind) {
    case "letters":
      return setText(item.set);
    case "sequence":
      return item.items.map(itemText).join(" ");
    case "choice":
      return item.options.length === 1 ? itemText(item.options[0]!) : `(${patternText(item)})`;
    case "repeat":
      return `${timesText(item.least, item.most)} ${repeatedText(item.item)}`;
  }
}

/** What a count may stand before: a SET, or anything in parentheses. */
function repeatedText(item: Pattern): string {
  return item.kind === "letters" ? setText(item.set) : `(${patternText(item)})`;
}

function patternText(pattern: Pattern): string {
  return pattern.kind === "choice" ? pattern.options.map(patternText).join(" | ") : itemText(pattern);
}

const OR = 0;
const AND = 1;
const CHAIN = 2;
const UNARY = 3;
const ATOM = 4;

/** The text of a condition where one of at least this tightness is due. */
export function conditionText(condition: Condition, tightness = OR): string {
  const [text, own] = conditionParts(condition);
  return own < tightness ? `(${text})` : text;
}

function conditionParts(condition: Condition): readonly [text: string, tightness: number] {
  switch (condition.kind) {
    case "or":
      return [`${conditionText(condition.left, OR)} or ${conditionText(condition.right, AND)}`, OR];
    case "and":
      return [`${conditionText(condition.left, AND)} and ${conditionText(condition.right, CHAIN)}`, AND];
    case "then": {
      const text = `${conditionText(condition.left, CHAIN)} then ${conditionText(condition.right, UNARY)}`;
      return [condition.within === null ? text : `${text} within ${condition.within}`, CHAIN];
    }
    case "unless": {
      const operands = `${conditionText(condition.left, CHAIN)} unless ${conditionText(condition.right, UNARY)}`;
      return [`${operands} within ${condition.within}`, CHAIN];
    }
    case "not":
      return [`not ${conditionText(condition.operand, UNARY)}`, UNARY];
    case "separate":
    case "overlapping":
      return [`${condition.count} ${condition.kind} ${conditionText(condition.operand, ATOM)}`, ATOM];
    case "rule":
      return [condition.name, ATOM];
    case "set":
      return [setText(condition.set), ATOM];
    case "run":
      return [`${condition.count} ${setText(condition.set)}`, ATOM];
    case "weakRun": {
      const text = `${condition.count} ${setText(condition.set)} gap ${condition.gap}`;
      return [condition.failures === null ? text : `${text} of ${setText(condition.failures)}`, ATOM];
    }
    case "scan":
      return [`${condition.count} of ${condition.window} ${setText(condition.set)}`, ATOM];
    case "pattern":
      return [`[${patternText(condition.pattern)}]`, ATOM];
  }
}

function alphabetText({ name, kind, letters }: Alphabet): string {
  if (kind === "letters") return `letters ${name}: ${letters.join(", ")}`;
  const [first = "", ...rest] = letters;
  const chain = rest.map((letter, index) =>
    index % 2 === 0 ? `< ${index + 1} <= ${letter}` : `<= ${index + 1} < ${letter}`,
  );
  return `zones ${name}: ${[first, ...chain].join(" ")}`;
}

/**
 * A value of a letter, under the cuts printed here: a text, a number inside its interval, or when `onEdge` a cut the letter
 * owns, where it owns one. A letter that only stands for missing has NaN.
 */
export function valueFor({ kind, letters }: Alphabet, letter: string, onEdge: boolean): number | string {
  if (kind === "letters") return letters.includes(letter) ? letter : "";
  const index = letters.indexOf(letter);
  if (index === -1) return Number.NaN;
  // Cut i stands between letters i − 1 and i; an odd one is owned above, an even one below.
  const owned = index % 2 === 1 ? index : Number.NaN;
  return onEdge && !Number.isNaN(owned) ? owned : index + 0.5;
}

function signalText({ name, condition, response, quiet }: Signal): string {
  const parts = [`signal ${name} when ${conditionText(condition)}`];
  if (response !== "own") parts.push(response);
  if (quiet?.kind === "for") parts.push(`quiet for ${quiet.count}`);
  if (quiet?.kind === "until") parts.push(`quiet until ${conditionText(quiet.condition)}`);
  return parts.join(" ");
}

/** The whole file. */
export function policyText(policy: Policy): string {
  const lines = [
    "policy twin",
    ...policy.lets.map(({ name, value }) => `let ${name} = ${value}`),
    ...policy.alphabets.map(alphabetText),
    ...policy.alphabets.flatMap(({ name, missingAs }) =>
      missingAs === null ? [] : [`missing ${name}: as ${missingAs}`],
    ),
    ...policy.groups.map(({ name, set }) => `group ${name} = ${setText(set)}`),
    ...policy.assigns.map(({ from, to }) => `assign ${setText(from)} -> ${setText(to)}`),
    ...policy.rules.map(({ name, condition }) => `rule ${name} = ${conditionText(condition)}`),
    ...policy.signals.map(signalText),
    ...policy.clearBefore.map((set) => `clear before ${setText(set)}`),
    ...policy.clearAfter.map((condition) => `clear after ${conditionText(condition)}`),
    ...(policy.missing === "refuse" ? [] : [`missing ${policy.missing}`]),
    ...(policy.blocks === null ? [] : [`blocks of ${policy.blocks}`]),
  ];
  return `${lines.join("\n")}\n`;
}
