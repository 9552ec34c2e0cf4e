/**
 * Source → tree and diagnostics: the entrance to everything that knows Chevrotain.
 *
 * Always gives a tree; declarations with an error in them are left out of it. Every mistake of a file is told in one run,
 * and one mistake makes one diagnostic: the lexer tells of what it cannot read (`lex.ts`), the file is cut into declarations
 * (`slices.ts`), and each is read by itself, with repairs (`reading.ts`). Linear in the text but for a bounded number of
 * errors; nesting is limited before anything recurses.
 */
import type { IToken } from "chevrotain";
import { type Diagnostic, diagnose, sortDiagnostics } from "./diagnostic.ts";
import { lex, mostMistakes } from "./lex.ts";
import { findMisread } from "./misread.ts";
import { type Reading, read } from "./reading.ts";
import { cutDeclarations, startsLine } from "./slices.ts";
import type { Source } from "./source.ts";
import type { FileTree } from "./tree.ts";

export type Parsed = { readonly tree: FileTree; readonly diagnostics: readonly Diagnostic[] };

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
  readAll(reading, cutDeclarations(source, tokens), inText);
  const misread = findMisread(reading.declarations);
  for (const { diagnostic } of misread) reading.diagnostics.push(diagnostic);
  const wrong = new Set(misread.map((one) => one.declaration));
  const declarations = reading.declarations.filter((one) => !wrong.has(one));
  const tree = { source, declarations, comments };
  return { tree, diagnostics: limit(outermost(sortDiagnostics(reading.diagnostics))) };
}

/**
 * Reads every declaration. One that ends too early and is followed on its line by another was probably one declaration
 * with a reserved word in it: nothing is told of the second.
 */
function readAll(reading: Reading, slices: readonly IToken[][], inText: readonly Diagnostic[]): void {
  const { source } = reading;
  let mistake = 0;
  let endsEarly = false;
  for (const [i, slice] of slices.entries()) {
    if (reading.diagnostics.length > mostMistakes) return;
    const end = slices[i + 1]?.[0]?.startOffset ?? source.text.length + 1;
    const first = mistake;
    while ((inText[mistake]?.span.start ?? end) < end) mistake++;
    const goesOn = endsEarly && slice[0] !== undefined && !startsLine(source, slice[0]);
    endsEarly = read(goesOn ? { ...reading, diagnostics: [] } : reading, slice, mistake > first);
  }
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
