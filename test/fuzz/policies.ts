// The fuzz loop of policies: a text comes in, and whatever it is, the answer is a policy or diagnostics that lie in their
// text, in bounded time. What parses is printed and parsed again; a sample of what compiles is built, checked, emitted and
// opened. A breach names the execution, so that the count and the seed find it again, and shows the text.

import { checkPolicy, isLibrary } from "../../compiler/check/check.ts";
import { compile } from "../../compiler/compile.ts";
import { machineFile } from "../../compiler/emit/machine-file.ts";
import { findingsOf } from "../../compiler/review/findings.ts";
import { type Diagnostic, hasErrors } from "../../grammar/diagnostic.ts";
import { parse } from "../../grammar/parse.ts";
import { print } from "../../grammar/print.ts";
import { renderDiagnostic } from "../../grammar/render.ts";
import { makeSource } from "../../grammar/source.ts";
import { openMachine } from "../../runtime/index.ts";
import { type Beat, type Fuzzed, type Random, seeded } from "../runtime/fuzz.ts";
import { BASE, DECLARATIONS, LIBRARY, NAMES, NUMBERS, WORDS } from "./corpus.ts";

const PATH = "policy.tocsin";
/** Machines of the sample are small: what is large is tried elsewhere. */
const MOST_STATES = 500;

/** One of so many executions that could be looks closer: at the rendering, the spans of the tree, the printed text. */
const LOOK = 8;
/** One of so many policies without an error is built. */
const BUILD = 250;

const pick = <T>(from: readonly T[], random: Random): T => from[random(from.length)] as T;

/** A few declarations beside the base, in any order; now and then without it or in part. */
function someDeclarations(random: Random): string {
  const lines = random(8) === 0 ? BASE.filter(() => random(2) === 0) : ["policy f", ...BASE];
  for (let left = random(4); left > 0; left--)
    lines.splice(random(lines.length + 1), 0, pick(DECLARATIONS, random));
  return lines.join(random(6) === 0 ? " " : "\n");
}

const TOKEN = /\s+|[A-Za-z_][A-Za-z0-9_]*|[0-9.]+(?:e-?[0-9]+)?%?|"[^"\n]*"|<=|->|\.\.|./gsu;

/** The text with a token left out, doubled, exchanged, replaced, or one put in. */
function changeToken(text: string, random: Random): string {
  const tokens = text.match(TOKEN) ?? [];
  const at = random(tokens.length + 1);
  switch (random(6)) {
    case 0:
      tokens.splice(at, 1 + random(2));
      break;
    case 1:
      tokens.splice(at, 0, ...tokens.slice(at, at + 1 + random(8)));
      break;
    case 2:
      tokens.splice(at, 0, ...tokens.splice(random(tokens.length + 1), 1 + random(3)));
      break;
    case 3:
      tokens.splice(at, 1, pick(WORDS, random));
      break;
    case 4:
      tokens.splice(at, 0, " ", pick(WORDS, random), " ");
      break;
    default:
      tokens.length = at;
  }
  return tokens.join("");
}

/** A number for some numbers, a name for some names: the text stays in order, and its meaning changes. */
function changeMeaning(text: string, random: Random): string {
  return text.replace(/\b\w+\b/g, (word) =>
    random(12) > 0 ? word : pick(/^\d/.test(word) ? NUMBERS : NAMES, random),
  );
}

/** The text with one character changed, left out or put in. */
function changeCharacter(text: string, random: Random): string {
  const at = random(text.length + 1);
  const code = random(random(8) === 0 ? 65_536 : 128);
  const put = random(3) === 0 ? "" : String.fromCharCode(code);
  return text.slice(0, at) + put + text.slice(at + random(2));
}

function soup(random: Random): string {
  const gap = [" ", " ", "\n", ""];
  return Array.from({ length: random(16) }, () => pick(WORDS, random) + pick(gap, random)).join("");
}

function noise(random: Random): string {
  const limit = random(2) === 0 ? 128 : 65_536;
  return String.fromCharCode(...Array.from({ length: random(60) }, () => random(limit)));
}

/** How often a text is changed: most are near enough to a policy to be read to their end. */
const CHANGES = [0, 0, 1, 1, 1, 2, 3];

/** A text to try. */
function draw(random: Random): string {
  const way = random(16);
  if (way === 0) return noise(random);
  if (way === 1) return soup(random);
  let text = someDeclarations(random);
  if (way < 8) return changeMeaning(text, random);
  for (let left = pick(CHANGES, random); left > 0; left--) {
    text = random(4) === 0 ? changeCharacter(text, random) : changeToken(text, random);
  }
  return text;
}

function demand(holds: boolean, what: string): void {
  if (!holds) throw new Error(what);
}

/** Every place lies in its text. */
function judgeSpans(diagnostics: readonly Diagnostic[]): void {
  for (const { code, span, related = [] } of diagnostics)
    for (const { source, start, end } of [span, ...related.map((other) => other.span)])
      demand(
        Number.isInteger(start) && start >= 0 && start <= end && end <= source.text.length,
        `${code} lies at ${start} to ${end} of ${source.text.length}`,
      );
}

/** The spans of a tree are within those of what holds them. */
function judgeTree(value: unknown, start: number, end: number): void {
  if (typeof value !== "object" || value === null) return;
  const { span } = value as { span?: { start: number; end: number } };
  if (span)
    demand(
      span.start >= start && span.start < span.end && span.end <= end,
      `a tree at ${span.start} to ${span.end}`,
    );
  for (const [key, part] of Object.entries(value))
    if (key !== "span" && key !== "source") judgeTree(part, span?.start ?? start, span?.end ?? end);
}

const FOUL = /\p{Cc}|undefined|NaN|\[object/u;

/** Parsing, and for what has no syntax error, printing and parsing again. */
function judgeParse(text: string): void {
  const source = makeSource(PATH, text);
  const { tree, diagnostics } = parse(source);
  judgeSpans(diagnostics);
  judgeTree(tree.declarations, 0, source.text.length);
  if (hasErrors(diagnostics)) return;
  const canonical = print(tree);
  const again = parse(makeSource(PATH, canonical));
  demand(again.diagnostics.length === 0, `what was printed has errors: ${JSON.stringify(canonical)}`);
  demand(print(again.tree) === canonical, `printing twice differs: ${JSON.stringify(canonical)}`);
}

/** The whole way of a policy that may have a machine. */
function judgeMachine(text: string): void {
  const compilation = compile(text, { path: PATH, read: readLibrary, mostStates: MOST_STATES });
  const { policy, machine } = compilation;
  judgeSpans(findingsOf(compilation, MOST_STATES));
  if (!policy || !machine) return;
  const { problems } = openMachine(JSON.parse(JSON.stringify(machineFile(policy, machine))));
  demand(problems.length === 0, `its machine file is refused: ${JSON.stringify(problems)}`);
}

function readLibrary(path: string): string | null {
  return path === "lib.tocsin" ? LIBRARY : null;
}

/** Whether the text was a policy without an error; throws when something is amiss. */
function judge(text: string, random: Random): boolean {
  const read = (path: string) => (path === PATH ? text : readLibrary(path));
  const { value, diagnostics } = checkPolicy(PATH, read);
  judgeSpans(diagnostics);
  demand(value !== undefined || hasErrors(diagnostics), "neither a policy nor an error");
  if (random(LOOK) === 0) {
    judgeParse(text);
    for (const diagnostic of diagnostics)
      demand(
        !FOUL.test(renderDiagnostic(diagnostic).replace(/[\n\t]/g, "")),
        `"${diagnostic.code}" is shown foully`,
      );
  }
  if (value === undefined || isLibrary(value) || hasErrors(diagnostics)) return false;
  if (random(BUILD) === 0) judgeMachine(text);
  return true;
}

export function fuzzPolicies(count: number, seed: number, beat: Beat = () => {}): Fuzzed {
  const random = seeded(seed);
  let accepted = 0;
  for (let i = 0; i < count; i++) {
    const text = draw(random);
    beat(i);
    try {
      if (judge(text, random)) accepted++;
    } catch (error) {
      throw new Error(`execution ${i} of seed ${seed}: ${JSON.stringify(text)}`, { cause: error });
    }
  }
  return { count, seed, accepted };
}
