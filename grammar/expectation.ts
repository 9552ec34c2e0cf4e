/**
 * What could stand at a place, in the words a reader knows: not the tokens a condition may begin with but "a condition".
 * Signs and words that only carry on what is whole already (operators and the like) are told apart from what is missing.
 */
import type { TokenType } from "chevrotain";
import type { Expected, Failure } from "./attempt.ts";
import { quote } from "./quote.ts";
import { Name, Numeral, placed, reserved, signs, Text, Whole } from "./tokens.ts";

/** What carries on a condition, a SET or an expression. */
const carryingOn = new Set<TokenType>([
  signs.percent,
  signs.power,
  signs.times,
  signs.over,
  signs.plus,
  signs.meet,
  signs.rangeTo,
  signs.choice,
  reserved.except,
  reserved.then,
  reserved.unless,
  reserved.and,
  reserved.or,
  reserved.gap,
  reserved.separate,
  reserved.overlapping,
]);

/** What a name stands for, by the rule that asks for it. */
const namesByRule: Readonly<Record<string, string>> = {
  letterEntry: "the name of a letter",
  massEntry: "the name of a letter",
  markovRow: "the name of a letter",
  place: "the name of a letter",
  law: "a name",
  sweep: "the name of a parameter",
  signalReference: "the name of a signal",
  raises: "the name of a signal",
  expect: "the name of a signal",
  processReference: "the name of a process",
  processAt: "the name of a process",
  measure: "a measure",
  cadence: "a unit of time",
  allow: "the code of a warning",
};

export function asksFor(failure: Failure, type: TokenType): boolean {
  return failure.expected.some((one) => one.type === type);
}

/** The signs and words expected, as written. */
export function expectedWords(failure: Failure): string[] {
  return failure.expected.map((one) => one.type.LABEL).filter((label) => label !== undefined);
}

/** Types of the signs and words that are missing, not those that carry on. */
export function missing(failure: Failure): TokenType[] {
  const types = failure.expected.filter((one) => !carriesOn(one, failure)).map((one) => one.type);
  return [...new Set(types)];
}

function carriesOn({ type, rule }: Expected, failure: Failure): boolean {
  if (type === signs.openParen) return rule === "operands" || rule === "measure";
  if (type === signs.minus) return rule === "expression";
  if (type === reserved.of) return rule === "counted" || rule === "run";
  if (type === reserved.within) return rule === "link" && failure.complete;
  return carryingOn.has(type);
}

/** "a condition", "`=`", "the name of a letter or `?`", … */
export function expectation(failure: Failure): string {
  const phrases = new Set<string>();
  const has = (type: TokenType, rule: string) =>
    failure.expected.some((one) => one.type === type && one.rule === rule);
  const isCondition = has(signs.openBracket, "pattern");
  const isSet = has(reserved.any, "member");
  const isExpression = has(Numeral, "primary");
  if (isCondition) phrases.add("a condition");
  else if (isSet && has(signs.openParen, "item")) phrases.add("an item of the pattern");
  else if (isSet && !failure.complete) phrases.add("a SET");
  if (isExpression) phrases.add("an expression");
  if (has(signs.openBrace, "mass") && has(Name, "distribution")) phrases.add("a model");
  for (const one of failure.expected) {
    if (carriesOn(one, failure) || (isCondition && conditionRules.has(one.rule))) continue;
    if (isSet && (setRules.has(one.rule) || one.rule === "item")) continue;
    if (isExpression && expressionRules.has(one.rule)) continue;
    if (phrases.has("a model") && modelRules.has(one.rule)) continue;
    phrases.add(phrase(one, failure));
  }
  if (failure.complete) phrases.add("the next declaration");
  return either([...phrases]) || either(expectedWords(failure).map(quote));
}

const setRules = new Set(["member", "union"]);
const conditionRules = new Set(["unary", "atom", "pattern", "counted", "count", ...setRules]);
const expressionRules = new Set(["primary", "signed"]);
const modelRules = new Set(["mass", "model", "distribution"]);

function phrase({ type, rule }: Expected, { index }: Failure): string {
  if (rule === "count") return "a count";
  switch (type) {
    case Name:
      if ((rule === "zones" || rule === "missing") && index > 2) return "the name of a letter";
      return namesByRule[rule] ?? "a name";
    case Text:
      return "text in double quotes";
    case Whole:
      return "a whole number";
    case Numeral:
      return "a number";
    case placed.all:
      return "`all`";
    default:
      return quote(type.LABEL ?? type.name);
  }
}

function either(phrases: readonly string[]): string {
  if (phrases.length <= 1) return phrases.join("");
  return `${phrases.slice(0, -1).join(", ")} or ${phrases.at(-1)}`;
}
