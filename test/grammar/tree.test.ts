// What a text becomes: how operators group, which words may be names, what each part spans.

import { describe, expect, test } from "vitest";
import { parse } from "../../grammar/parse.ts";
import { makeSource } from "../../grammar/source.ts";
import { spanText } from "../../grammar/span.ts";
import { placed, reservedWords } from "../../grammar/tokens.ts";
import type { ConditionTree, Declaration, Expression, PatternTree, SetTree } from "../../grammar/tree.ts";
import { withoutSpans } from "./trees.ts";

function declarationsOf(text: string): readonly Declaration[] {
  const { tree, diagnostics } = parse(makeSource("policy.tocsin", text));
  expect(diagnostics.map((one) => one.message)).toEqual([]);
  return tree.declarations;
}

function only<Kind extends Declaration["kind"]>(
  text: string,
  kind: Kind,
): Extract<Declaration, { kind: Kind }> {
  const [declaration, ...others] = declarationsOf(text);
  expect(others).toEqual([]);
  expect(declaration?.kind).toBe(kind);
  return declaration as Extract<Declaration, { kind: Kind }>;
}

/** Every operation in brackets. */
function ofExpression(tree: Expression): string {
  switch (tree.kind) {
    case "number":
      return tree.text + (tree.percent ? "%" : "");
    case "reference":
      return tree.name.text;
    case "call":
      return `${tree.name.text}<${tree.operands.map(ofExpression).join(" ")}>`;
    case "negate":
      return `[-${ofExpression(tree.operand)}]`;
    case "binary":
      return `[${ofExpression(tree.left)}${tree.operator}${ofExpression(tree.right)}]`;
  }
}

function ofSet(tree: SetTree): string {
  switch (tree.kind) {
    case "any":
      return "any";
    case "named":
      return tree.name.text;
    case "union":
      return `{${tree.members.map(ofSet).join(" ")}}`;
    case "meet":
      return `[${ofSet(tree.left)}&${ofSet(tree.right)}]`;
    case "except":
      return `[${ofSet(tree.left)}\\${ofSet(tree.right)}]`;
  }
}

function ofPattern(tree: PatternTree): string {
  switch (tree.kind) {
    case "choice":
      return `[${tree.options.map(ofPattern).join("|")}]`;
    case "sequence":
      return `[${tree.items.map(ofPattern).join(" ")}]`;
    case "letters":
      return ofSet(tree.set);
    case "repeat":
      return `${tree.least}-${tree.most ?? "*"}:${ofPattern(tree.operand)}`;
  }
}

function ofCondition(tree: ConditionTree): string {
  const count = (k: { kind: string; text?: string; name?: { text: string } }) => k.text ?? k.name?.text ?? "";
  switch (tree.kind) {
    case "set":
      return ofSet(tree.set);
    case "run":
      return `run ${count(tree.count)} ${ofSet(tree.set)}`;
    case "weakRun":
      return `run ${count(tree.count)} ${ofSet(tree.set)} gap ${count(tree.gap)} ${tree.failures ? ofSet(tree.failures) : "-"}`;
    case "scan":
      return `scan ${count(tree.count)} ${count(tree.window)} ${ofSet(tree.set)}`;
    case "pattern":
      return `pattern ${ofPattern(tree.pattern)}`;
    case "separate":
    case "overlapping":
      return `${tree.kind} ${count(tree.count)} (${ofCondition(tree.operand)})`;
    case "not":
      return `not (${ofCondition(tree.operand)})`;
    case "then":
    case "unless":
      return `(${ofCondition(tree.left)} ${tree.kind}${tree.within ? count(tree.within) : ""} ${ofCondition(tree.right)})`;
    case "and":
    case "or":
      return `(${ofCondition(tree.left)} ${tree.kind} ${ofCondition(tree.right)})`;
  }
}

test.each([
  ["1", "1"],
  ["5%", "5%"],
  ["5 %", "5%"],
  ["1.50e-3", "1.50e-3"],
  ["a - b - c", "[[a-b]-c]"],
  ["a + b*c/d", "[a+[[b*c]/d]]"],
  ["-a^b", "[-[a^b]]"],
  ["a^-b^c", "[a^[-[b^c]]]"],
  ["a^b^c", "[a^[b^c]]"],
  ["-a*b", "[[-a]*b]"],
  ["a*-b", "[a*[-b]]"],
  ["--a", "[-[-a]]"],
  ["(a + b)*c", "[[a+b]*c]"],
  ["f(a, -b, g(1))", "f<a [-b] g<1>>"],
  ["upper(normal(0, 1), 5%)", "upper<normal<0 1> 5%>"],
  ["a-1", "[a-1]"],
])("expression %s", (text, expected) => {
  expect(ofExpression(only(`let x = ${text}`, "let").value)).toBe(expected);
});

test.each([
  ["any", "any"],
  ["a & b & c", "[[a&b]&c]"],
  ["a except b except c", "[[a\\b]\\c]"],
  ["a & b except c & d", "[[a&b]\\[c&d]]"],
  ["{a, b & c, {any}}", "{a [b&c] {any}}"],
  ["{a except b} & c", "[{[a\\b]}&c]"],
])("SET %s", (text, expected) => {
  expect(ofSet(only(`group x = ${text}`, "group").set)).toBe(expected);
});

test.each([
  ["a", "a"],
  ["3 a", "run 3 a"],
  ["k a", "run k a"],
  ["3 a & b except c", "run 3 [[a&b]\\c]"],
  ["3 a gap 1", "run 3 a gap 1 -"],
  ["k a gap r of b & c", "run k a gap r [b&c]"],
  ["2 of 3 a", "scan 2 3 a"],
  ["k of m {a, b}", "scan k m {a b}"],
  ["[a 2 b]", "pattern [a 2-2:b]"],
  ["[0..3 a 1.. b | c]", "pattern [[0-3:a 1-*:b]|c]"],
  ["[1..b]", "pattern 1-*:b"],
  ["[(a b) (c | d | (e | f))]", "pattern [a b [c|d|e|f]]"],
  ["[2 (a b)]", "pattern 2-2:[a b]"],
  ["[a & b c except d]", "pattern [[a&b] [c\\d]]"],
  ["2 separate 3 a", "separate 2 (run 3 a)"],
  ["k overlapping (a or b)", "overlapping k ((a or b))"],
  ["2 separate 3 overlapping a", "separate 2 (overlapping 3 (a))"],
  ["a or b and c or d", "((a or (b and c)) or d)"],
  ["not a and not not b", "(not (a) and not (not (b)))"],
  ["not 2 separate a", "not (separate 2 (a))"],
  ["a then b then c within 5", "((a then b) then5 c)"],
  ["a then b within 5 then c", "((a then5 b) then c)"],
  ["a unless b within 3 then c", "((a unless3 b) then c)"],
  ["not a then b and c", "((not (a) then b) and c)"],
  ["a then (b then c within 2) within k", "(a thenk (b then2 c))"],
  ["(a or b) and c", "((a or b) and c)"],
  ["3 a gap 2 then b within 5", "(run 3 a gap 2 - then5 b)"],
])("condition %s", (text, expected) => {
  expect(ofCondition(only(`rule x = ${text}`, "rule").condition)).toBe(expected);
});

describe("names", () => {
  test.each([...Object.keys(placed), "normal", "min", "s", "pi", "states", "_", "Rule"])(
    "%s may be a name",
    (word) => {
      const text = `let ${word} = ${word} + 1
      zones ${word}: ${word} < ${word} <= ${word}
      group g = {${word}, ${word} & ${word}}
      assign ${word} -> ${word}
      rule ${word} = ${word} ${word} then 3 ${word} gap ${word} of ${word} or [${word} 2 ${word}]
      signal ${word} when ${word} restart quiet until ${word}
      clear before ${word} clear after ${word}
      missing ${word}: as ${word}
      blocks of ${word}
      cadence 1 ${word}
      process ${word}(${word} from ${word} to ${word} by ${word}): ${word} ~ ${word}(${word}) ar ${word} with ${word} ${word}
      process p: ${word} ~ markov {${word} -> {${word}, ${word} ${word}}}
      require ${word}(${word}, ${word} after ${word}, ${word}) = ${word} within ${word}
      expect any on ${word} 2 ${word} (${word}, ?) -> {${word}}
      allow ${word} "reason"`;
      expect(declarationsOf(text)).toHaveLength(16);
    },
  );

  test.each(reservedWords)("%s may not", (word) => {
    const { tree, diagnostics } = parse(makeSource("policy.tocsin", `let ${word} = 1`));
    expect(tree.declarations).toEqual([]);
    expect(diagnostics).toHaveLength(1);
    expect(diagnostics[0]?.message).toBe(`\`${word}\` is a word of the language and cannot be a name`);
  });

  test("`all` is a signal nowhere but a word in an expectation", () => {
    expect(only("expect all on all", "expect").expectation).toEqual({ kind: "all" });
    expect(withoutSpans(only("expect any on a", "expect").expectation)).toEqual({
      kind: "signal",
      name: { text: "any" },
    });
  });
});

test("every declaration has its parts", () => {
  const text = `policy p "title" use "lib.tocsin"
    missing skip missing x: as gone
    letters v: a = "A", b
    cadence 1.5 min
    process q: x ~ normal(0, 1) estimated from m subgroups of 5 under r(1)
    require states <= 20
    expect quiet on 3 (a, ?) -> {s, t} ? -> s
    allow code "why"`;
  const name = (word: string) => ({ text: word });
  const number = (digits: string) => ({ kind: "number", text: digits, percent: false });
  expect(withoutSpans(declarationsOf(text))).toEqual([
    { kind: "policy", name: name("p"), title: { value: "title" } },
    { kind: "use", path: { value: "lib.tocsin" } },
    { kind: "missing", response: "skip" },
    { kind: "missingAs", statistic: name("x"), letter: name("gone") },
    {
      kind: "letters",
      name: name("v"),
      letters: [{ name: name("a"), text: { value: "A" } }, { name: name("b") }],
    },
    { kind: "cadence", amount: number("1.5"), unit: name("min") },
    {
      kind: "process",
      name: name("q"),
      sweeps: [],
      laws: [
        {
          statistic: name("x"),
          model: {
            kind: "distribution",
            name: name("normal"),
            operands: [number("0"), number("1")],
            estimated: {
              subgroups: { kind: "named", name: name("m") },
              size: { kind: "literal", text: "5" },
              under: { name: name("r"), operands: [number("1")] },
            },
          },
        },
      ],
    },
    {
      kind: "require",
      measure: { name: name("states") },
      requirement: { kind: "bound", comparison: "<=", value: number("20") },
    },
    {
      kind: "expect",
      expectation: { kind: "quiet" },
      trials: [
        { count: { text: "3" }, letters: [name("a"), null], tuple: true, raises: [name("s"), name("t")] },
        { letters: [null], tuple: false, raises: [name("s")] },
      ],
    },
    { kind: "allow", code: name("code"), reason: { value: "why" } },
  ]);
});

test("spans hold exactly what they name", () => {
  const text = '\uFEFF# über\n  rule r = (a or b) and 3 c gap 1  # after\nletters v: a = "\\"x\\\\"';
  const [rule, letters] = declarationsOf(text);
  expect(rule && spanText(rule.span)).toBe("rule r = (a or b) and 3 c gap 1");
  if (rule?.kind !== "rule" || rule.condition.kind !== "and") throw new Error("not a rule");
  expect(spanText(rule.name.span)).toBe("r");
  expect(spanText(rule.condition.span)).toBe("(a or b) and 3 c gap 1");
  expect(spanText(rule.condition.left.span)).toBe("a or b");
  expect(spanText(rule.condition.right.span)).toBe("3 c gap 1");
  if (letters?.kind !== "letters") throw new Error("not letters");
  expect(letters.letters[0]?.text?.value).toBe('"x\\');
});

test("comments are kept as written, without their line breaks", () => {
  const { tree } = parse(makeSource("policy.tocsin", "# one\r\nlet a = 1 #two  \n#\n# last"));
  expect(tree.comments.map((comment) => comment.text)).toEqual(["# one", "#two  ", "#", "# last"]);
  expect(tree.comments.map((comment) => spanText(comment.span))).toEqual(["# one", "#two  ", "#", "# last"]);
});

test.each(["", " \n\t\r\n", "# only a comment"])("%j is an empty library", (text) => {
  expect(declarationsOf(text)).toEqual([]);
});

test("declarations with mistakes are left out, the others stay", () => {
  const text = "let a = 1\nlet b 2\nlet c = 3; let d = 4\nrule = a\nlet e = .5\nlet f = 6";
  const { tree, diagnostics } = parse(makeSource("policy.tocsin", text));
  expect(diagnostics).toHaveLength(4);
  expect(tree.declarations.map((one) => (one.kind === "let" ? one.name.text : one.kind))).toEqual([
    "a",
    "d",
    "f",
  ]);
});
