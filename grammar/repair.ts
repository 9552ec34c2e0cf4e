/**
 * A repair of a declaration that goes wrong at one token, so that the rest of it can be read: a token replaced, put in or
 * left out. Tried are the tokens that could stand there; taken is the repair after which the parse comes furthest, if it
 * comes to the end or well beyond the place (after Burke & Fisher 1987). What was repaired also tells what was meant.
 */
import type { IToken, TokenType } from "chevrotain";
import { expectedAfter, type Failure, reach } from "./attempt.ts";
import { asksFor, expectedWords, missing } from "./expectation.ts";
import { nearest } from "./spelling.ts";
import { tokenAt } from "./syntax-node.ts";
import {
  declarationWords,
  isReserved,
  isWord,
  Name,
  placed,
  reserved,
  signs,
  tokenOfWord,
} from "./tokens.ts";

export type Repair = {
  readonly kind: "spelling" | "replace" | "insert" | "remove" | "rename";
  /** Where in the tokens before the repair. */
  readonly index: number;
  /** What was put in place. */
  readonly type?: TokenType;
  readonly tokens: readonly IToken[];
};

/** Longer declarations are not repaired: every try costs a parse. */
const longest = 2000;
/** How many tokens beyond the place a repaired parse must come, unless it comes to the end. */
const margin = 3;

export function findRepair(tokens: readonly IToken[], failure: Failure): Repair | undefined {
  if (tokens.length > longest) return undefined;
  let best: Repair | undefined;
  let furthest = 0;
  for (const candidate of candidates(tokens, failure)) {
    const shift = candidate.tokens.length - tokens.length;
    const end = reach(candidate.tokens);
    const complete = end > candidate.tokens.length;
    const gain = complete ? Number.POSITIVE_INFINITY : end - shift - failure.index;
    if (gain >= margin && gain > furthest) {
      best = candidate;
      furthest = gain;
    }
    if (complete) break;
  }
  return best;
}

/** The likeliest first: of repairs that come equally far the first is taken. */
function* candidates(tokens: readonly IToken[], failure: Failure): Generator<Repair> {
  const { index } = failure;
  const found = tokens[index];
  const before = tokens[index - 1];
  if (found && isWord(found)) yield* respell(tokens, index, wordsAt(tokens, failure));
  if (before?.tokenType === Name && index > 1) {
    const words = expectedAfter(tokens.slice(0, index - 1)).map(({ type }) => type.LABEL ?? "");
    yield* respell(
      tokens,
      index - 1,
      words.filter((word) => /^[a-z]/.test(word)),
    );
  }
  if (found && isReserved(found) && asksFor(failure, Name)) yield replaced("rename", tokens, index, Name);
  const types = missing(failure).filter((type) => !failure.complete || type === signs.comma);
  const separators = types.filter((type) => separating.has(type));
  if (found && replaceable.has(found.tokenType))
    for (const type of separators) yield replaced("replace", tokens, index, type);
  const otherWord = otherWords[found?.image ?? ""];
  if (otherWord && types.includes(otherWord)) yield replaced("replace", tokens, index, otherWord);
  const twoNames = found?.tokenType === Name && tokens[index + 1]?.tokenType === Name;
  if (twoNames && types.includes(placed.when)) yield replaced("replace", tokens, index, placed.when);
  for (const type of separators) yield inserted(tokens, index, type);
  if (failure.expected.some(({ rule }) => rule === "operands"))
    yield inserted(tokens, index, signs.openParen);
  if (found) yield { kind: "remove", index, tokens: tokens.toSpliced(index, 1) };
  for (const type of types) if (type.LABEL === undefined) yield inserted(tokens, index, type);
}

/** Signs and words that stand between parts, or close them: what is most often left out. */
const separating = new Set<TokenType>([
  signs.equal,
  signs.colon,
  signs.comma,
  signs.arrow,
  signs.follows,
  signs.less,
  signs.atMost,
  signs.closeParen,
  signs.closeBrace,
  signs.closeBracket,
  placed.when,
  placed.on,
  placed.as,
  placed.from,
  placed.to,
  placed.by,
  placed.subgroups,
  placed.before,
  placed.after,
  placed.for,
  placed.until,
  reserved.of,
  reserved.within,
]);

/** Signs that are mistaken for one another. */
const replaceable = new Set<TokenType>([
  signs.equal,
  signs.colon,
  signs.comma,
  signs.arrow,
  signs.follows,
  signs.less,
  signs.more,
  signs.closeParen,
  signs.closeBrace,
  signs.closeBracket,
]);

/** Words of everyday speech for words of the language. */
const otherWords: Readonly<Record<string, TokenType>> = Object.assign(Object.create(null), {
  if: placed.when,
  where: placed.when,
  whenever: placed.when,
  upon: placed.on,
  at: placed.on,
  in: placed.on,
  step: placed.by,
});

/** Words that may have been meant by the word at a place. */
export function wordsAt(tokens: readonly IToken[], failure: Failure): string[] {
  const words = expectedWords(failure).filter((word) => /^[a-z]/.test(word));
  return failure.complete && tokens[failure.index]?.tokenType === Name
    ? [...words, ...declarationWords]
    : words;
}

function* respell(tokens: readonly IToken[], index: number, words: readonly string[]): Generator<Repair> {
  const meant = nearest(tokens[index]?.image ?? "", words);
  const type = meant && tokenOfWord(meant);
  if (type) yield replaced("spelling", tokens, index, type);
}

function replaced(kind: Repair["kind"], tokens: readonly IToken[], index: number, type: TokenType): Repair {
  const old = tokens[index];
  const token = tokenAt(type, old?.startOffset ?? 0, old?.image ?? "");
  return { kind, index, type, tokens: tokens.with(index, token) };
}

function inserted(tokens: readonly IToken[], index: number, type: TokenType): Repair {
  const before = tokens[index - 1];
  const token = tokenAt(type, before ? before.startOffset + before.image.length : 0, "");
  return { kind: "insert", index, type, tokens: tokens.toSpliced(index, 0, token) };
}
