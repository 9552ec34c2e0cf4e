/**
 * The tokens of one declaration → the declaration, or what is wrong with it. A declaration that goes wrong is repaired at
 * that token and read on; where no repair helps, the rest is passed over in silence. Tokens the lexer has told of are not
 * told of again. A line that seems to begin a declaration with its first word misspelt is read as that declaration, whose
 * mistakes are told but which is not kept.
 */
import type { IToken } from "chevrotain";
import { attempt, type Failure } from "./attempt.ts";
import { buildDeclaration } from "./build.ts";
import { type Diagnostic, diagnose } from "./diagnostic.ts";
import { expectedWords } from "./expectation.ts";
import { type Lexed, mostMistakes } from "./lex.ts";
import { findTooDeep, mostNesting, mostOperators } from "./nesting.ts";
import { quote } from "./quote.ts";
import { findRepair } from "./repair.ts";
import { beginsDeclaration, cutAtMisspelt, startsLine } from "./slices.ts";
import type { Source } from "./source.ts";
import { nearest } from "./spelling.ts";
import { describe } from "./syntax-error.ts";
import { tokenAt, tokenSpan } from "./syntax-node.ts";
import { declarationWords, isDeclarationWord, isWord, tokenOfWord } from "./tokens.ts";
import type { Declaration } from "./tree.ts";

/** What is read from a file; declarations and diagnostics grow. */
export type Reading = {
  readonly source: Source;
  readonly suspect: Lexed["suspect"];
  readonly declarations: Declaration[];
  readonly diagnostics: Diagnostic[];
};

/** Repairs of one declaration. */
const mostRepairs = 20;

/**
 * Reads the tokens from one word of a declaration to the next, `hasMistake` when one in them has been told of. True when
 * the last thing told is that the declaration ends too early.
 */
export function read(reading: Reading, slice: readonly IToken[], hasMistake: boolean): boolean {
  const { source, declarations, diagnostics } = reading;
  if (isTooDeep(reading, slice)) return false;
  const { node } = attempt(slice);
  if (node) {
    if (!hasMistake) declarations.push(buildDeclaration({ source, node }));
    return false;
  }
  let endsEarly = false;
  for (const part of cutAtMisspelt(source, slice)) {
    if (diagnostics.length > mostMistakes) return false;
    const [first] = part;
    if (beginsDeclaration(first)) endsEarly = readDeclaration(reading, part, hasMistake);
    else if (first) endsEarly = readUnknown(reading, part, first);
  }
  return endsEarly;
}

/** A word that begins no declaration: the one that was meant is read on, else all up to the next declaration is skipped. */
function readUnknown(reading: Reading, tokens: readonly IToken[], first: IToken): boolean {
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
  if (!type) return false;
  return readDeclaration(reading, tokens.with(0, tokenAt(type, first.startOffset, first.image)), true);
}

/** Reads one declaration, repairing what goes wrong in it. */
function readDeclaration(reading: Reading, slice: readonly IToken[], hasMistake: boolean): boolean {
  const { source, suspect, declarations, diagnostics } = reading;
  let tokens = slice;
  let broken = hasMistake;
  for (let repairs = 0; repairs <= mostRepairs; repairs++) {
    const { node, failure } = attempt(tokens);
    if (node && !broken) declarations.push(buildDeclaration({ source, node }));
    if (node) return false;
    const token = tokens[failure.index];
    if (token && beginsLine(source, token, failure)) {
      const { node: whole } = attempt(tokens.slice(0, failure.index));
      if (whole && !broken) declarations.push(buildDeclaration({ source, node: whole }));
      return readUnknown(reading, tokens.slice(failure.index), token);
    }
    broken = true;
    const repair = findRepair(tokens, failure);
    const known = token !== undefined && suspect.has(token);
    const diagnostic = known ? undefined : describe({ source, tokens, failure, repair });
    if (diagnostic) diagnostics.push(diagnostic);
    if (!repair) return token === undefined;
    tokens = repair.tokens;
  }
  return false;
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
