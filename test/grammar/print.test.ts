// Canonical text of parts, and of the policies of the project. Whole files in every layout are in test/golden/format/.

import { readdirSync, readFileSync } from "node:fs";
import { join } from "node:path";
import { expect, test } from "vitest";
import { parse } from "../../grammar/parse.ts";
import { conditionText, expressionText, print, setText } from "../../grammar/print.ts";
import { makeSource } from "../../grammar/source.ts";
import type { ConditionTree, PatternTree, SetTree } from "../../grammar/tree.ts";
import { withoutSpans } from "./trees.ts";

const EXAMPLES = join(import.meta.dirname, "../../examples");

test("parts have a text of their own, on one line whatever their length", () => {
  const text = `rule r = ${"(a  and not(b)) or ".repeat(30)}[ a 2 b ]\ngroup g = {a,b}except any\nlet x=(1+2)*3`;
  const [rule, group, number] = parse(makeSource("policy.tocsin", text)).tree.declarations;
  if (rule?.kind !== "rule" || group?.kind !== "group" || number?.kind !== "let")
    throw new Error("wrong kinds");
  expect(conditionText(rule.condition)).toBe(`${"a and not b or ".repeat(30)}[a 2 b]`);
  expect(setText(group.set)).toBe("{a, b} except any");
  expect(expressionText(number.value)).toBe("(1 + 2) * 3");
});

const source = makeSource("made.tocsin", "");
const span = { source, start: 0, end: 0 };
const named = (text: string): SetTree => ({ kind: "named", name: { text, span }, span });
const [a, b, c] = [named("a"), named("b"), named("c")];
const letters = (set: SetTree): PatternTree => ({ kind: "letters", set, span });

test("trees that no text makes keep their meaning", () => {
  const except: SetTree = { kind: "except", left: a, right: b, span };
  expect(setText({ kind: "meet", left: except, right: c, span })).toBe("{a except b} & c");
  expect(setText({ kind: "except", left: a, right: except, span })).toBe("a except {a except b}");
  const ab: PatternTree = { kind: "sequence", items: [letters(a), letters(b)], span };
  const choice: PatternTree = { kind: "choice", options: [letters(a), letters(b)], span };
  const pattern = (one: PatternTree): ConditionTree => ({ kind: "pattern", pattern: one, span });
  expect(conditionText(pattern({ kind: "sequence", items: [ab, letters(c)], span }))).toBe("[(a b) c]");
  expect(conditionText(pattern({ kind: "choice", options: [choice, letters(c)], span }))).toBe(
    "[(a | b) | c]",
  );
});

const examples = readdirSync(EXAMPLES, { recursive: true, encoding: "utf8" }).filter((one) =>
  one.endsWith(".tocsin"),
);

test.each(examples)("%s is read without a word, and printed without a change of meaning", (name) => {
  const first = parse(makeSource(name, readFileSync(join(EXAMPLES, name), "utf8")));
  expect(first.diagnostics).toEqual([]);
  const text = print(first.tree);
  const second = parse(makeSource(name, text));
  expect(second.diagnostics).toEqual([]);
  expect(withoutSpans(second.tree.declarations)).toEqual(withoutSpans(first.tree.declarations));
  expect(second.tree.comments.map((one) => one.text)).toEqual(first.tree.comments.map((one) => one.text));
  expect(print(second.tree)).toBe(text);
});

test("there are examples", () => {
  expect(examples.length).toBeGreaterThan(3);
});
