/**
 * Cuts the tokens of a file into declarations: each begins with its reserved word and ends where the next begins. A word
 * of a declaration that stands where it cannot begin one (`rule signal = …`, `3 group`) is a misused word and stays inside.
 */
import type { IToken, TokenType } from "chevrotain";
import type { Source } from "./source.ts";
import { nearest } from "./spelling.ts";
import {
  type DeclarationWord,
  declarationWords,
  isA,
  isWord,
  Name,
  Numeral,
  placed,
  reserved,
  signs,
  Text,
} from "./tokens.ts";

const beginning = new Set<TokenType>(declarationWords.map((word) => reserved[word]));

/** What may stand second in a declaration, where that is not a name. */
const secondTokens: Partial<Record<DeclarationWord, readonly TokenType[]>> = {
  use: [Text],
  assign: [Name, reserved.any, signs.openBrace],
  clear: [placed.before, placed.after],
  blocks: [reserved.of],
  cadence: [Numeral],
  expect: [Name, reserved.any, reserved.quiet],
};

export function beginsDeclaration(token: IToken | undefined): boolean {
  return token !== undefined && beginning.has(token.tokenType);
}

/** Whether nothing but blanks stands before a token on its line. */
export function startsLine(source: Source, token: IToken): boolean {
  return indent(source, token) !== undefined;
}

/** How many blanks stand before a token that is the first on its line. */
function indent(source: Source, token: IToken): number | undefined {
  for (let i = token.startOffset - 1; i >= 0; i--) {
    const character = source.text[i];
    if (character === "\n" || character === "\r") return token.startOffset - 1 - i;
    if (character !== " " && character !== "\t") return undefined;
  }
  return token.startOffset;
}

/**
 * Cuts the tokens of a declaration that goes wrong before each line that seems to begin another one: two words, the first
 * a misspelt word of a declaration, as far to the left as the line with which they all begin.
 */
export function cutAtMisspelt(source: Source, slice: readonly IToken[]): IToken[][] {
  const parts: IToken[][] = [];
  let part: IToken[] | undefined;
  const left = slice[0] && indent(source, slice[0]);
  for (const [i, token] of slice.entries()) {
    const next = slice[i + 1];
    const twoWords = isWord(token) && next !== undefined && isWord(next);
    const begins = twoWords && indent(source, token) === left && nearest(token.image, declarationWords);
    if (begins || part === undefined) {
      part = [];
      parts.push(part);
    }
    part.push(token);
  }
  return parts;
}

export function cutDeclarations(source: Source, tokens: readonly IToken[]): IToken[][] {
  const slices: IToken[][] = [];
  let slice: IToken[] | undefined;
  for (const [i, token] of tokens.entries()) {
    const begins = beginsDeclaration(token) && !(slice && isMisused(source, slice, token, tokens[i + 1]));
    if (begins || slice === undefined) {
      slice = [];
      slices.push(slice);
    }
    slice.push(token);
  }
  return slices;
}

/** A word that follows on the same line and has nothing after it that its declaration could go on with. */
function isMisused(
  source: Source,
  slice: readonly IToken[],
  token: IToken,
  next: IToken | undefined,
): boolean {
  if (startsLine(source, token)) return false;
  if (slice.length === 1 && beginsDeclaration(slice[0])) return true;
  const expected = secondTokens[token.image as DeclarationWord] ?? [Name];
  return next === undefined || !expected.some((type) => isA(next.tokenType, type));
}
