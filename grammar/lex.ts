/**
 * Text → tokens and comments, and every mistake that shows in the text alone (`text-mistakes.ts`). A mistaken token stays
 * in the stream as what was meant, so that the parser goes on; characters without a meaning are left out. `suspect` holds
 * the tokens told of here and those that may look wrong because of them: at these the parser's opinion is worth nothing.
 * Linear in the length of the text.
 */
import type { IToken } from "chevrotain";
import type { Diagnostic } from "./diagnostic.ts";
import { scan } from "./scan.ts";
import { beginsDeclaration, startsLine } from "./slices.ts";
import type { Source } from "./source.ts";
import { tokenAt, tokenSpan } from "./syntax-node.ts";
import { foreignName, garbage, hiddenCharacters, mistakes, otherComment } from "./text-mistakes.ts";
import { BadNumber, Name, OpenText, reserved, tokenOfWord, Whole } from "./tokens.ts";
import type { Comment } from "./tree.ts";

export type Lexed = {
  readonly tokens: readonly IToken[];
  readonly comments: readonly Comment[];
  readonly diagnostics: readonly Diagnostic[];
  readonly suspect: ReadonlySet<IToken>;
};

/** Mistakes told of one file; the first to be reached ends the search for more. */
export const mostMistakes = 1000;

/** What has been told so far. */
type Findings = { readonly diagnostics: Diagnostic[]; readonly suspect: Set<IToken> };

export function lex(source: Source): Lexed {
  const { tokens: read, errors: unread, groups } = scan(source.text);
  const errors = unread.slice(0, mostMistakes + 1);
  const findings: Findings = { diagnostics: [], suspect: new Set() };
  const tokens = findMistakes(
    source,
    errors.length === 0 ? read : mend(source, read, errors, findings),
    findings,
  );
  const comments = (groups.comments ?? []).map((at) => ({ text: at.image, span: tokenSpan(source, at) }));
  const aside = [
    (groups.mistakes ?? []).map((token) => otherComment(tokenSpan(source, token))),
    comments.flatMap((comment) => hiddenCharacters(source, comment.text, comment.span.start)),
  ].flat();
  return { tokens, comments, diagnostics: findings.diagnostics.concat(aside), suspect: findings.suspect };
}

/**
 * Tells of mistaken tokens; a number and the word glued to it come out as two tokens. Tokens are given their ends, which
 * the lexer leaves out when it counts offsets only, and from which nodes have theirs.
 */
function findMistakes(
  source: Source,
  tokens: readonly IToken[],
  { diagnostics, suspect }: Findings,
): IToken[] {
  const result: IToken[] = [];
  let declaration: IToken | undefined;
  for (const token of tokens) {
    if (beginsDeclaration(token)) declaration = token;
    const inRequire = declaration?.tokenType === reserved.require;
    const found = diagnostics.length > mostMistakes ? [] : mistakes(source, token, inRequire);
    for (const diagnostic of found) diagnostics.push(diagnostic);
    const pieces = token.tokenType === BadNumber ? unglue(token) : [token];
    for (const piece of pieces) {
      piece.endOffset = piece.startOffset + piece.image.length - 1;
      result.push(piece);
      if (found.length > 0) suspect.add(piece);
    }
    if (token.tokenType === OpenText) passOverLine(source, result, diagnostics, suspect);
  }
  return result;
}

/** `15min` as `15` and `min`. */
function unglue(token: IToken): IToken[] {
  const [, digits, word] = /^(\d+)([A-Za-z_]\w*)$/.exec(token.image) ?? [];
  if (digits === undefined || word === undefined) return [token];
  const type = tokenOfWord(word) ?? Name;
  return [tokenAt(Whole, token.startOffset, digits), tokenAt(type, token.startOffset + digits.length, word)];
}

/** A quotation mark too few may have turned the text of the whole line inside out: only the last mistake of it counts. */
function passOverLine(
  source: Source,
  tokens: readonly IToken[],
  diagnostics: Diagnostic[],
  suspect: Set<IToken>,
): void {
  let lineStart = 0;
  for (let i = tokens.length - 1; i >= 0; i--) {
    const token = tokens[i];
    if (!token) break;
    suspect.add(token);
    lineStart = token.startOffset;
    if (startsLine(source, token)) break;
  }
  while ((diagnostics.at(-2)?.span.start ?? -1) >= lineStart) diagnostics.splice(-2, 1);
}

/** Tokens with the stretches the lexer could not read: letters become (part of) a name, anything else is left out. */
function mend(
  source: Source,
  tokens: readonly IToken[],
  errors: readonly { offset: number; length: number }[],
  { diagnostics, suspect }: Findings,
): IToken[] {
  const mended: IToken[] = [];
  const foreign = new Set<IToken>();
  let afterGarbage = false;
  for (const { start, text, token } of piecesOf(source, tokens, errors)) {
    const last = mended.at(-1);
    const touches = last !== undefined && last.startOffset + last.image.length === start;
    const isWord = /^[\p{L}\p{M}\p{N}_]/u.test(text);
    if (touches && isWord && /^[\p{L}_]/u.test(last.image) && (!token || foreign.has(last))) {
      foreign.delete(last);
      mended[mended.length - 1] = tokenAt(Name, last.startOffset, last.image + text);
      foreign.add(mended.at(-1) as IToken);
    } else if (token || isWord) {
      const kept = token ?? tokenAt(Name, start, text);
      mended.push(kept);
      if (!token) foreign.add(kept);
      if (afterGarbage) suspect.add(kept);
    } else {
      diagnostics.push(garbage({ source, start, end: start + text.length }, text));
    }
    afterGarbage = !token && !isWord;
  }
  for (const token of foreign) {
    suspect.add(token);
    diagnostics.push(foreignName(tokenSpan(source, token), token.image));
  }
  return mended;
}

type Piece = { readonly start: number; readonly text: string; readonly token?: IToken };

const stretch = /[\p{L}\p{M}\p{N}]+|[^\p{L}\p{M}\p{N}]+/gu;

/** Tokens and stretches in the order of the text, a stretch cut where letters meet other characters. */
function piecesOf(
  source: Source,
  tokens: readonly IToken[],
  errors: readonly { offset: number; length: number }[],
): Piece[] {
  const stretches: Piece[] = [];
  for (const { offset, length } of errors)
    for (const match of source.text.slice(offset, offset + length).matchAll(stretch)) {
      if (stretches.length > mostMistakes) break;
      stretches.push({ start: offset + match.index, text: match[0] });
    }
  const pieces = tokens.map((token): Piece => ({ start: token.startOffset, text: token.image, token }));
  return pieces.concat(stretches).sort((a, b) => a.start - b.start);
}
