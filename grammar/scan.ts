/**
 * Text → raw tokens, by the vocabulary: at each place the first type that matches, words whole. What matches nothing is told
 * as stretches. The same as Chevrotain's own lexer on the same vocabulary (a test compares them), without its set-up, which
 * would be a third of a cold start.
 */
import { createTokenInstance, type IToken, Lexer, type TokenType } from "chevrotain";
import { Name, tokenOfWord, vocabulary } from "./tokens.ts";

export type Scanned = {
  readonly tokens: IToken[];
  /** Tokens the parser never sees, by the group of their type. */
  readonly groups: Readonly<Record<string, IToken[]>>;
  /** Stretches that begin no token. */
  readonly errors: readonly { readonly offset: number; readonly length: number }[];
};

type Matcher = { readonly type: TokenType; readonly text: string | null; readonly pattern: RegExp | null };

const word = /[A-Za-z_][A-Za-z0-9_]*/y;

/** All types but words, in order; patterns match at a place only. */
const matchers: readonly Matcher[] = vocabulary.flatMap((type) => {
  const pattern = type.PATTERN;
  if (type === Name || (typeof pattern === "string" && tokenOfWord(pattern) === type)) return [];
  if (typeof pattern === "string") return { type, text: pattern, pattern: null };
  const source = pattern instanceof RegExp && pattern.source !== "NOT_APPLICABLE" ? pattern.source : null;
  return source === null ? [] : { type, text: null, pattern: new RegExp(source, "y") };
});

/** By first character: the types that may begin with it. */
const candidates = new Map<string, readonly Matcher[]>();

function candidatesFor(first: string): readonly Matcher[] {
  const known = candidates.get(first);
  if (known) return known;
  const found = matchers.filter(({ text }) => text === null || text[0] === first);
  candidates.set(first, found);
  return found;
}

/** Splits a text; linear in its length. */
export function scan(text: string): Scanned {
  const tokens: IToken[] = [];
  const groups: Record<string, IToken[]> = {};
  const errors: { offset: number; length: number }[] = [];
  for (let at = 0; at < text.length; ) {
    const { type, end } = tokenAt(text, at);
    if (type === null) {
      const last = errors.at(-1);
      if (last && last.offset + last.length === at) last.length++;
      else errors.push({ offset: at, length: 1 });
    } else if (type.GROUP !== Lexer.SKIPPED) {
      const list = type.GROUP === undefined ? tokens : groupOf(groups, `${type.GROUP}`);
      list.push(createTokenInstance(type, text.slice(at, end), at, end - 1, NaN, NaN, NaN, NaN));
    }
    at = end;
  }
  return { tokens, groups, errors };
}

function groupOf(groups: Record<string, IToken[]>, name: string): IToken[] {
  const known = groups[name] ?? [];
  groups[name] = known;
  return known;
}

function tokenAt(text: string, at: number): { type: TokenType | null; end: number } {
  word.lastIndex = at;
  if (word.test(text)) {
    const end = word.lastIndex;
    return { type: tokenOfWord(text.slice(at, end)) ?? Name, end };
  }
  for (const { type, text: exact, pattern } of candidatesFor(text[at] as string)) {
    if (exact !== null) {
      if (text.startsWith(exact, at)) return { type, end: at + exact.length };
    } else if (pattern) {
      pattern.lastIndex = at;
      if (pattern.test(text)) return { type, end: pattern.lastIndex };
    }
  }
  return { type: null, end: at + 1 };
}
