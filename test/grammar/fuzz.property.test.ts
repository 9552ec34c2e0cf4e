// Any text at all: parsing never throws, takes bounded time, and everything it says lies inside the text and in order.
// FC_SEED chooses the seed; CI fixes it.

import { readdirSync, readFileSync } from "node:fs";
import { join } from "node:path";
import fc from "fast-check";
import { expect, test } from "vitest";
import { sortDiagnostics } from "../../grammar/diagnostic.ts";
import { lex } from "../../grammar/lex.ts";
import { type Parsed, parse } from "../../grammar/parse.ts";
import { print } from "../../grammar/print.ts";
import { renderDiagnostic } from "../../grammar/render.ts";
import { makeSource } from "../../grammar/source.ts";
import { lookalikes, placed, reservedWords, signs } from "../../grammar/tokens.ts";
import { seed } from "../oracle/arbitrary.ts";
import { withoutSpans } from "./trees.ts";

const settings = { seed: seed(), numRuns: Number(process.env.FC_RUNS ?? 300) };
const EXAMPLES = join(import.meta.dirname, "../../examples");
const GOLDEN = join(import.meta.dirname, "../golden/syntax");

function policies(folder: string): string[] {
  const names = readdirSync(folder, { recursive: true, encoding: "utf8" });
  return names.filter((one) => one.endsWith(".tocsin")).map((one) => readFileSync(join(folder, one), "utf8"));
}
const texts = [...policies(EXAMPLES), ...policies(GOLDEN)];

/** Parses a text and fails if what comes out is not sound. */
function soundly(text: string): Parsed {
  const begun = process.cpuUsage().user;
  const source = makeSource("any.tocsin", text);
  const parsed = parse(source);
  const { tree, diagnostics } = parsed;
  for (const diagnostic of diagnostics) {
    const places = [diagnostic, ...(diagnostic.related ?? [])].map(({ span }) => span);
    for (const { start, end } of places) {
      expect(start).toBeGreaterThanOrEqual(0);
      expect(end).toBeGreaterThanOrEqual(start);
      expect(end).toBeLessThanOrEqual(source.text.length);
    }
    expect(renderDiagnostic(diagnostic).replace(/[\n\t]/g, "")).not.toMatch(/\p{Cc}|undefined|NaN/u);
  }
  expect(diagnostics).toEqual(sortDiagnostics(diagnostics));
  checkSpans(tree.declarations, 0, source.text.length);
  expect((process.cpuUsage().user - begun) / 1e6).toBeLessThan(5);
  return parsed;
}

/** Spans are numbers, inside those of what holds them. */
function checkSpans(value: unknown, start: number, end: number): void {
  if (typeof value !== "object" || value === null) return;
  const { span } = value as { span?: { start: number; end: number } };
  if (span) {
    expect(
      span.start >= start && span.start < span.end && span.end <= end,
      JSON.stringify(withoutSpans(value)),
    ).toBe(true);
  }
  for (const [key, part] of Object.entries(value))
    if (key !== "span" && key !== "source") checkSpans(part, span?.start ?? start, span?.end ?? end);
}

test("random characters", () => {
  const character = fc.oneof(
    fc.string({ unit: "binary", minLength: 1, maxLength: 1 }),
    fc.constantFrom(...' \n\t\r"\\#.0123456789eE%()[]{}<>=-+*/^&|~?,:;ab_é'),
  );
  fc.assert(
    fc.property(fc.array(character, { maxLength: 200 }), (characters) => {
      soundly(characters.join(""));
    }),
    settings,
  );
}, 300_000);

const word = fc.oneof(
  fc.constantFrom(...reservedWords, ...Object.keys(placed)),
  fc.constantFrom(...Object.values(signs).map((one) => one.LABEL ?? "")),
  fc.constantFrom(...lookalikes.map((one) => String(one.token.PATTERN))),
  fc.constantFrom(
    "high",
    "low",
    "3",
    "0.5",
    "1e9",
    "5%",
    ".5",
    "3x",
    '"a"',
    '"',
    "# c\n",
    "\n",
    "\n\n",
    "// c\n",
    "$",
  ),
);

test("random words and signs", () => {
  fc.assert(
    fc.property(fc.array(fc.tuple(word, fc.constantFrom(" ", " ", "\n", "")), { maxLength: 80 }), (words) => {
      soundly(words.map(([one, gap]) => one + gap).join(""));
    }),
    settings,
  );
}, 300_000);

/** A change of one token of a text. */
const change = fc.record({
  at: fc.nat(1000),
  how: fc.constantFrom("remove", "double", "swap", "replace", "put in", "cut off"),
  word,
});

function changed(text: string, { at, how, word: other }: { at: number; how: string; word: string }): string {
  const { tokens } = lex(makeSource("changed.tocsin", text));
  const index = at % Math.max(1, tokens.length);
  const token = tokens[index];
  if (!token) return text;
  const start = token.startOffset;
  const end = start + token.image.length;
  const next = tokens[index + 1];
  const nextEnd = next ? next.startOffset + next.image.length : end;
  switch (how) {
    case "remove":
      return text.slice(0, start) + text.slice(end);
    case "double":
      return `${text.slice(0, end)} ${token.image}${text.slice(end)}`;
    case "swap":
      return `${text.slice(0, start)}${next?.image ?? ""} ${token.image}${text.slice(nextEnd)}`;
    case "replace":
      return text.slice(0, start) + other + text.slice(end);
    case "put in":
      return `${text.slice(0, start)} ${other} ${text.slice(start)}`;
    default:
      return text.slice(0, start + (at % token.image.length));
  }
}

test("policies with a few words changed", () => {
  fc.assert(
    fc.property(
      fc.constantFrom(...texts),
      fc.array(change, { minLength: 1, maxLength: 4 }),
      (text, changes) => {
        const { tree, diagnostics } = soundly(changes.reduce(changed, text));
        if (diagnostics.length > 0) return;
        const again = parse(makeSource("again.tocsin", print(tree)));
        expect(again.diagnostics).toEqual([]);
        expect(withoutSpans(again.tree.declarations)).toEqual(withoutSpans(tree.declarations));
      },
    ),
    settings,
  );
}, 300_000);

test("one word changed in one declaration: told of near the place, and not ten times", () => {
  fc.assert(
    fc.property(fc.constantFrom(...policies(EXAMPLES)), change, (text, one) => {
      const { tree } = parse(makeSource("whole.tocsin", text));
      const after = soundly(changed(text, one));
      if (one.how === "cut off" || /["#\n/'\u201c]/.test(one.word)) return;
      expect(after.diagnostics.length, changed(text, one)).toBeLessThan(5);
      if (after.diagnostics.length === 0 || [...reservedWords, "cut"].some((word) => word === one.word))
        return;
      expect(after.tree.declarations.length).toBeGreaterThanOrEqual(tree.declarations.length - 3);
    }),
    settings,
  );
}, 300_000);
