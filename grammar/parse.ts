/**
 * Source → tree and diagnostics: the entrance to everything that knows Chevrotain.
 *
 * Always gives a tree; declarations with an error in them are left out of it. Every mistake of a file is told in one run:
 * the file is cut into declarations (`slices.ts`), and a declaration that goes wrong is repaired at that token and read on
 * (`repair.ts`). Where no repair helps, the rest of the declaration is passed over in silence, and tokens that the lexer
 * has told of are not told of again; so one mistake makes one diagnostic. Linear in the text but for a bounded number of
 * errors; nesting is limited before anything recurses.
 */
import type { IToken } from "chevrotain";
import { attempt, type Failure } from "./attempt.ts";
import { buildDeclaration } from "./build.ts";
import { type Diagnostic, diagnose, sortDiagnostics } from "./diagnostic.ts";
import { expectedWords } from "./expectation.ts";
import { type Lexed, lex, mostMistakes } from "./lex.ts";
import { findMisread } from "./misread.ts";
import { findTooDeep, mostNesting, mostOperators } from "./nesting.ts";
import { quote } from "./quote.ts";
import { findRepair } from "./repair.ts";
import { beginsDeclaration, cutAtMisspelt, cutDeclarations, startsLine } from "./slices.ts";
import type { Source } from "./source.ts";
import { nearest } from "./spelling.ts";
import { describe } from "./syntax-error.ts";
import { tokenAt, tokenSpan } from "./syntax-node.ts";
import { declarationWords, isDeclarationWord, isWord, tokenOfWord } from "./tokens.ts";
import type { Declaration, FileTree } from "./tree.ts";

export type Parsed = { readonly tree: FileTree; readonly diagnostics: readonly Diagnostic[] };

/** Repairs of one declaration. */
const mostRepairs = 20;

type Reading = {
  readonly source: Source;
  readonly suspect: Lexed["suspect"];
  readonly declarations: Declaration[];
  readonly diagnostics: Diagnostic[];
};

/** The tree of a text, and every syntax error in it. */
export function parse(source: Source): Parsed {
  const nul = source.text.indexOf("\0");
  if (nul !== -1) {
    const span = { source, start: nul, end: nul + 1 };
    const diagnostic = diagnose("not_text", span, "the file holds a NUL character, so it is not text");
    return { tree: { source, declarations: [], comments: [] }, diagnostics: [diagnostic] };
  }
  const { tokens, comments, diagnostics, suspect } = lex(source);
  const inText = sortDiagnostics(diagnostics);
  const reading: Reading = { source, suspect, declarations: [], diagnostics: [...inText] };
  const slices = cutDeclarations(source, tokens);
  let mistake = 0;
  for (const [i, slice] of slices.entries()) {
    if (reading.diagnostics.length > mostMistakes) break;
    const end = slices[i + 1]?.[0]?.startOffset ?? source.text.length + 1;
    const first = mistake;
    while ((inText[mistake]?.span.start ?? end) < end) mistake++;
    read(reading, slice, mistake > first);
  }
  const misread = findMisread(reading.declarations);
  for (const { diagnostic } of misread) reading.diagnostics.push(diagnostic);
  const wrong = new Set(misread.map((one) => one.declaration));
  const declarations = reading.declarations.filter((one) => !wrong.has(one));
  const tree = { source, declarations, comments };
  return { tree, diagnostics: limit(outermost(sortDiagnostics(reading.diagnostics))) };
}

/** Without the mistakes inside a stretch that is wrong as a whole, such as text without its quotes. */
function outermost(diagnostics: readonly Diagnostic[]): readonly Diagnostic[] {
  let end = 0;
  return diagnostics.filter(({ span }) => {
    const inside = span.start < end && span.end <= end;
    end = Math.max(end, span.end);
    return !inside;
  });
}

function limit(diagnostics: readonly Diagnostic[]): readonly Diagnostic[] {
  const last = diagnostics[mostMistakes - 1];
  if (!last || diagnostics.length === mostMistakes) return diagnostics;
  const message = `the file has more than ${mostMistakes - 1} syntax errors; those from here on are not shown`;
  return [...diagnostics.slice(0, mostMistakes - 1), diagnose("syntax", last.span, message)];
}

/** Reads the tokens from one word of a declaration to the next. */
function read(reading: Reading, slice: readonly IToken[], hasMistake: boolean): void {
  const { source, declarations, diagnostics } = reading;
  if (isTooDeep(reading, slice)) return;
  const { node } = attempt(slice);
  if (node) {
    if (!hasMistake) declarations.push(buildDeclaration({ source, node }));
    return;
  }
  for (const part of cutAtMisspelt(source, slice)) {
    if (diagnostics.length > mostMistakes) return;
    const [first] = part;
    if (beginsDeclaration(first)) readDeclaration(reading, part, hasMistake);
    else if (first) readUnknown(reading, part, first);
  }
}

/** A word that begins no declaration: the one that was meant is read on, else all up to the next declaration is skipped. */
function readUnknown(reading: Reading, tokens: readonly IToken[], first: IToken): void {
  const { source, suspect, diagnostics } = reading;
  const meant = isWord(first) ? nearest(first.image, declarationWords) : undefined;
  const type = meant && tokenOfWord(meant);
  if (!suspect.has(first)) {
    const hint = meant
      ? `did you mean ${quote(meant)}?`
      : "a declaration begins with a word such as `let`, `zones`, `rule` or `signal`";
    const message = `${quote(first.image)} begins no declaration`;
    diagnostics.push(diagnose("syntax", tokenSpan(source, first), message, { hint }));
  }
  if (type) readDeclaration(reading, tokens.with(0, tokenAt(type, first.startOffset, first.image)), true);
}

/** Reads one declaration, repairing what goes wrong in it. */
function readDeclaration(reading: Reading, slice: readonly IToken[], hasMistake: boolean): void {
  const { source, suspect, declarations, diagnostics } = reading;
  let tokens = slice;
  let broken = hasMistake;
  for (let repairs = 0; repairs <= mostRepairs; repairs++) {
    const { node, failure } = attempt(tokens);
    if (node && !broken) declarations.push(buildDeclaration({ source, node }));
    if (node) return;
    const token = tokens[failure.index];
    if (token && beginsLine(source, token, failure)) {
      const { node: whole } = attempt(tokens.slice(0, failure.index));
      if (whole && !broken) declarations.push(buildDeclaration({ source, node: whole }));
      readUnknown(reading, tokens.slice(failure.index), token);
      return;
    }
    broken = true;
    const repair = findRepair(tokens, failure);
    const known = token !== undefined && suspect.has(token);
    const diagnostic = known ? undefined : describe({ source, tokens, failure, repair });
    if (diagnostic) diagnostics.push(diagnostic);
    if (!repair) return;
    tokens = repair.tokens;
  }
}

/** Whether a whole declaration is followed by a word on a line of its own that cannot carry it on. */
function beginsLine(source: Source, token: IToken, failure: Failure): boolean {
  if (!failure.complete || !isWord(token) || !startsLine(source, token)) return false;
  const meant = nearest(token.image, [...expectedWords(failure), ...declarationWords]);
  return meant === undefined || isDeclarationWord(meant);
}

function isTooDeep({ source, diagnostics }: Reading, slice: readonly IToken[]): boolean {
  const found = findTooDeep(slice);
  if (!found) return false;
  const nesting = found.limit === "nesting";
  diagnostics.push(
    diagnose(
      "nesting_too_deep",
      tokenSpan(source, found.token),
      nesting
        ? `nested deeper than ${mostNesting} at this place`
        : `a chain of more than ${mostOperators} operators`,
      { hint: "give a part of it a name of its own with `rule`, `group` or `let`" },
    ),
  );
  return true;
}
