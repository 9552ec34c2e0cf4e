/**
 * The vocabulary: every token type of the language, for the lexer and the parser.
 *
 * Three sorts of words. *Reserved* words are never names. *Placed* words (`when`, `on`, `from`, …) have a token type of
 * their own in the category of names: the parser may ask for the word or, anywhere else, take it as a name. All other
 * words are plain names. Lookalikes are mistakes that tell what was meant (`==`, `&&`, `≤`): each stands in the category of
 * the sign that was meant, so that the parser goes on undisturbed while `lex.ts` reports it. Numbers and strings with a
 * mistake in them are handled in the same way.
 */
import { createToken, type IToken, Lexer, type TokenType } from "chevrotain";

export const Name = createToken({ name: "Name", pattern: /[A-Za-z_][A-Za-z0-9_]*/ });

/** The words that begin a declaration; they stand nowhere else in the language. */
export const declarationWords = [
  "policy",
  "use",
  "let",
  "zones",
  "letters",
  "group",
  "assign",
  "rule",
  "signal",
  "clear",
  "missing",
  "blocks",
  "cadence",
  "process",
  "require",
  "expect",
  "allow",
] as const;

const innerWords = [
  "and",
  "or",
  "not",
  "then",
  "unless",
  "within",
  "any",
  "except",
  "restart",
  "continue",
  "quiet",
  "of",
  "gap",
  "separate",
  "overlapping",
] as const;

const placedWords = [
  "when",
  "on",
  "as",
  "from",
  "to",
  "by",
  "ar",
  "after",
  "before",
  "estimated",
  "subgroups",
  "under",
  "markov",
  "with",
  "all",
  "for",
  "until",
  "refuse",
  "skip",
  "break",
] as const;

export function isDeclarationWord(word: string): word is DeclarationWord {
  return (declarationWords as readonly string[]).includes(word);
}

export type DeclarationWord = (typeof declarationWords)[number];
export type ReservedWord = DeclarationWord | (typeof innerWords)[number];

/** Every word that cannot be a name. */
export const reservedWords: readonly ReservedWord[] = [...declarationWords, ...innerWords];

function wordTokens<Word extends string>(
  words: readonly Word[],
  categories: TokenType[],
): Record<Word, TokenType> {
  const entries = words.map((word) => [
    word,
    createToken({ name: word.toUpperCase(), pattern: word, longer_alt: Name, categories, label: word }),
  ]);
  return Object.fromEntries(entries) as Record<Word, TokenType>;
}

export const reserved = wordTokens(reservedWords, []);
export const placed = wordTokens(placedWords, [Name]);

const tokensByWord: ReadonlyMap<string, TokenType> = new Map(Object.entries({ ...reserved, ...placed }));

/** The token type of a word of the language. */
export function tokenOfWord(word: string): TokenType | undefined {
  return tokensByWord.get(word);
}

/** Any number; `Whole` is one written with digits alone. */
export const Numeral = createToken({ name: "Numeral", pattern: Lexer.NA });
export const Whole = createToken({
  name: "Whole",
  pattern: /\d+(?![A-Za-z0-9_]|\.(?!\.))/,
  categories: [Numeral],
});
const Decimal = createToken({
  name: "Decimal",
  pattern: /\d+(?:\.\d+)?(?:[eE][+-]?\d+)?(?![A-Za-z0-9_]|\.(?!\.))/,
  categories: [Numeral],
});
export const BadNumber = createToken({
  name: "BadNumber",
  pattern: /(?:\.\d|\d)(?:[eE][+-](?=\d)|\.(?!\.)|[A-Za-z0-9_])*/,
  categories: [Whole],
});

/** Text in double quotes on one line; `\"` and `\\` stand for a quote and a backslash. */
export const Text = createToken({ name: "Text", pattern: /"(?:[^"\\\r\n]|\\[^\r\n])*"/ });
export const OpenText = createToken({
  name: "OpenText",
  pattern: /"(?:[^"\\\r\n]|\\[^\r\n])*\\?/,
  categories: [Text],
});
/** Text in quotation marks of another kind. */
export const OtherText = createToken({
  name: "OtherText",
  pattern: /[\u201C\u201D\u201E\u2018\u2019'][^\r\n"\u201C\u201D\u2018\u2019']*["\u201C\u201D\u2018\u2019']/,
  categories: [Text],
});

function sign(name: string, text: string): TokenType {
  return createToken({ name, pattern: text, label: text });
}

export const signs = {
  rangeTo: sign("RangeTo", ".."),
  atMost: sign("AtMost", "<="),
  atLeast: sign("AtLeast", ">="),
  arrow: sign("Arrow", "->"),
  less: sign("Less", "<"),
  more: sign("More", ">"),
  equal: sign("Equal", "="),
  colon: sign("Colon", ":"),
  comma: sign("Comma", ","),
  openParen: sign("OpenParen", "("),
  closeParen: sign("CloseParen", ")"),
  openBrace: sign("OpenBrace", "{"),
  closeBrace: sign("CloseBrace", "}"),
  openBracket: sign("OpenBracket", "["),
  closeBracket: sign("CloseBracket", "]"),
  meet: sign("Meet", "&"),
  choice: sign("Choice", "|"),
  plus: sign("Plus", "+"),
  minus: sign("Minus", "-"),
  times: sign("Times", "*"),
  over: sign("Over", "/"),
  power: sign("Power", "^"),
  percent: sign("Percent", "%"),
  follows: sign("Follows", "~"),
  unknown: sign("Unknown", "?"),
} as const;

/** A mistaken sign: what it may stand for, and what to write instead. */
export type Lookalike = { readonly token: TokenType; readonly write: readonly string[] };

function lookalike(text: string, write: string, ...meant: TokenType[]): Lookalike {
  const token = createToken({ name: `Mistaken ${text}`, pattern: text, categories: meant });
  return { token, write: write.split(" ") };
}

export const lookalikes: readonly Lookalike[] = [
  lookalike("==", "=", signs.equal),
  lookalike(":=", "=", signs.equal),
  lookalike("!=", "not"),
  lookalike("!", "not", reserved.not),
  lookalike("&&", "and &", reserved.and, signs.meet),
  lookalike("||", "or |", reserved.or, signs.choice),
  lookalike("=<", "<=", signs.atMost),
  lookalike("=>", "-> >=", signs.arrow, signs.atLeast),
  lookalike("**", "^", signs.power),
  lookalike("...", "..", signs.rangeTo),
  lookalike("\u2026", "..", signs.rangeTo),
  lookalike("\u2264", "<=", signs.atMost),
  lookalike("\u2265", ">=", signs.atLeast),
  lookalike("\u2192", "->", signs.arrow),
  lookalike("\u2212", "-", signs.minus),
  lookalike("\u2013", "-", signs.minus),
  lookalike("\u00D7", "*", signs.times),
  lookalike("\u00B7", "*", signs.times),
  lookalike("\u00AC", "not", reserved.not),
  lookalike("\u2227", "and", reserved.and),
  lookalike("\u2228", "or", reserved.or),
];

/** A comment that begins with `//`, as in other languages; the parser never sees it. */
const OtherComment = createToken({ name: "OtherComment", pattern: /\/\/[^\r\n]*/, group: "mistakes" });
const Comment = createToken({ name: "Comment", pattern: /#[^\r\n]*/, group: "comments" });
const Blank = createToken({ name: "Blank", pattern: /[ \t\r\n]+/, group: Lexer.SKIPPED, line_breaks: true });

/** In the order they are tried: of words that begin alike the longest first. */
export const vocabulary: TokenType[] = [
  Blank,
  Comment,
  OtherComment,
  ...[...tokensByWord].sort(([a], [b]) => b.length - a.length).map(([, type]) => type),
  Name,
  Whole,
  Decimal,
  BadNumber,
  Numeral,
  Text,
  OtherText,
  OpenText,
  ...lookalikes.map((one) => one.token),
  ...Object.values(signs),
];

export const lookalikeOf: ReadonlyMap<TokenType, Lookalike> = new Map(
  lookalikes.map((one) => [one.token, one]),
);

/** Whether a token of one type may stand where the other is asked for. */
export function isA(type: TokenType, asked: TokenType): boolean {
  return type === asked || asked.categoryMatchesMap?.[type.tokenTypeIdx ?? -1] === true;
}

/** Whether a token is a word: a name, or a word of the language. */
export function isWord(token: IToken): boolean {
  return token.tokenType === Name || tokensByWord.get(token.image) === token.tokenType;
}

export function isReserved(token: IToken): boolean {
  return Object.hasOwn(reserved, token.image) && reserved[token.image as ReservedWord] === token.tokenType;
}
