/**
 * A place where a declaration goes wrong → a diagnostic in plain words: what was found, what was expected, and what was
 * probably meant. The likely mistakes come first, each a small function that knows one; the general sentence comes last.
 */
import type { IToken, TokenType } from "chevrotain";
import type { Failure } from "./attempt.ts";
import { type Code, type Diagnostic, diagnose } from "./diagnostic.ts";
import { asksFor, expectation, expectedWords } from "./expectation.ts";
import { quote } from "./quote.ts";
import { type Repair, wordsAt } from "./repair.ts";
import { beginsDeclaration, startsLine } from "./slices.ts";
import type { Source } from "./source.ts";
import { cover, type Span, spanText } from "./span.ts";
import { nearest } from "./spelling.ts";
import { tokenSpan } from "./syntax-node.ts";
import { isA, isReserved, isWord, Name, Numeral, placed, reserved, signs, Text, Whole } from "./tokens.ts";

/** One failed parse, and the repair that lets it go on, if there is one. */
export type Place = {
  readonly source: Source;
  readonly tokens: readonly IToken[];
  readonly failure: Failure;
  readonly repair: Repair | undefined;
};

type Complaint = {
  readonly message: string;
  readonly code?: Code;
  readonly span?: Span;
  readonly hint?: string | undefined;
  readonly related?: readonly { readonly span: Span; readonly message: string }[];
};

const likelyMistakes: readonly ((place: Place) => Complaint | undefined)[] = [
  respelledBefore,
  responseUnknown,
  reasonMissing,
  reservedAsName,
  chainDownwards,
  bracketOpen,
  bracketUnopened,
  countAfterItem,
  commaBetween,
  repeatSign,
  countWithPoint,
  textWithoutQuotes,
];

/** The diagnostic of a failed parse; nothing where the failure follows from a repair. */
export function describe(place: Place): Diagnostic | undefined {
  const open = openBracket(place);
  if (open?.image === "" && asksFor(place.failure, closerOf.get(open.tokenType) ?? Name)) return undefined;
  for (const mistake of likelyMistakes) {
    const complaint = mistake(place);
    if (complaint) return toDiagnostic(place, complaint);
  }
  return toDiagnostic(place, {
    message: `expected ${expectation(place.failure)}, found ${found(place)}`,
    hint: misspelt(place) ?? formHint(place) ?? repairHint(place) ?? misplaced(place) ?? goesOnWith(place),
  });
}

function toDiagnostic(place: Place, { message, code, span, hint, related }: Complaint): Diagnostic {
  const at = span ?? placeSpan(place);
  return diagnose(code ?? "syntax", at, message, { ...(hint && { hint }), ...(related && { related }) });
}

/** The token that cannot stand there; where there is none, the end of the declaration. */
function placeSpan({ source, tokens, failure }: Place): Span {
  const token = tokens[failure.index];
  if (token) return tokenSpan(source, token);
  const last = tokens.at(-1);
  const end = last ? tokenSpan(source, last).end : source.text.length;
  return { source, start: end, end };
}

function found({ tokens, failure }: Place): string {
  const token = tokens[failure.index];
  return token ? quote(token.image) : "the end of the declaration";
}

function before({ tokens, failure }: Place, back = 1): IToken | undefined {
  return tokens[failure.index - back];
}

function at({ tokens, failure }: Place): IToken | undefined {
  return tokens[failure.index];
}

/** `heavy adn light`: the wrong word was taken for a name, and only the next one stands out. */
function respelledBefore(place: Place): Complaint | undefined {
  const { repair, failure, source, tokens } = place;
  if (repair?.kind !== "spelling" || repair.index !== failure.index - 1) return undefined;
  const wrong = tokens[repair.index];
  if (!wrong) return undefined;
  const span = tokenSpan(source, wrong);
  return { span, message: `${quote(wrong.image)} cannot stand here`, hint: didYouMean(repair.type) };
}

/** `missing ignore`: a name could only be a statistic, and nobody meant that. */
function responseUnknown({ source, tokens, failure }: Place): Complaint | undefined {
  const [word, response] = tokens;
  if (word?.tokenType !== reserved.missing || failure.index !== 2 || tokens.length > 2 || !response)
    return undefined;
  return {
    span: tokenSpan(source, response),
    message: `expected \`refuse\`, \`skip\` or \`break\`, found ${quote(response.image)}`,
    hint: `to make missing values a letter, write \`missing ${response.image}: as LETTER\``,
  };
}

function didYouMean(type: TokenType | undefined): string | undefined {
  return type?.LABEL && `did you mean ${quote(type.LABEL)}?`;
}

function reasonMissing(place: Place): Complaint | undefined {
  const [first, code] = place.tokens;
  if (first?.tokenType !== reserved.allow || place.failure.index !== 2 || !code) return undefined;
  const reason = at(place) ? undefined : tokenSpan(place.source, first);
  return {
    code: "allow_reason",
    ...(reason && { span: cover(reason, tokenSpan(place.source, code)) }),
    message: `the allowance of ${quote(code.image)} gives no reason in double quotes`,
    hint: `write \`allow ${code.image} "why this is accepted"\``,
  };
}

function reservedAsName(place: Place): Complaint | undefined {
  const token = at(place);
  if (!token || !isReserved(token) || !asksFor(place.failure, Name)) return undefined;
  if (asksFor(place.failure, reserved.any) && !beginsDeclaration(token)) return undefined;
  const message = `${quote(token.image)} is a word of the language and cannot be a name`;
  return { message, hint: "pick another name" };
}

function chainDownwards(place: Place): Complaint | undefined {
  const token = at(place);
  if (place.tokens[0]?.tokenType !== reserved.zones || !token) return undefined;
  if (!isA(token.tokenType, signs.more) && !isA(token.tokenType, signs.atLeast)) return undefined;
  const hint = "write the chain the other way round, as in `low < 1.5 <= high`";
  return { message: "the chain of zones goes from the lowest letter to the highest", hint };
}

const closerOf = new Map<TokenType, TokenType>([
  [signs.openParen, signs.closeParen],
  [signs.openBrace, signs.closeBrace],
  [signs.openBracket, signs.closeBracket],
]);
const closers = new Set(closerOf.values());

/** The innermost bracket that is open at the place. */
function openBracket({ tokens, failure }: Place): IToken | undefined {
  const open: IToken[] = [];
  for (const token of tokens.slice(0, failure.index)) {
    if (closerOf.has(token.tokenType)) open.push(token);
    else if (closers.has(token.tokenType)) open.pop();
  }
  return open.at(-1);
}

function bracketOpen(place: Place): Complaint | undefined {
  const open = openBracket(place);
  const closer = open && closerOf.get(open.tokenType);
  if (!open || !closer || !asksFor(place.failure, closer)) return undefined;
  const token = at(place);
  const wrong = token && closers.has(token.tokenType);
  const inserted = place.repair?.kind === "insert" && place.repair.type === closer;
  if (token && !wrong && !inserted && !isReserved(token)) return undefined;
  const sign = quote(closer.LABEL ?? "");
  const related = [{ span: tokenSpan(place.source, open), message: `${quote(open.image)} is opened here` }];
  const hint = wrong ? `write ${sign} instead of ${found(place)}` : `put ${sign} ${where(place)}`;
  return { message: `expected ${sign} to close ${quote(open.image)}, found ${found(place)}`, hint, related };
}

function where(place: Place): string {
  const token = at(place);
  return token ? `before ${quote(token.image)}` : "at the end";
}

function bracketUnopened(place: Place): Complaint | undefined {
  const token = at(place);
  if (!token || !closers.has(token.tokenType) || openBracket(place)) return undefined;
  if (!place.failure.complete) return undefined;
  return { message: `${quote(token.image)} closes a bracket that was never opened`, hint: "remove it" };
}

const setEnds = new Set<TokenType>([Name, reserved.any, signs.closeBrace]);

/** `high 3` in a rule, a pattern or the trials of an expectation. */
function countAfterItem(place: Place): Complaint | undefined {
  const token = at(place);
  const last = before(place);
  const countIsLast = last?.tokenType === Whole && !(token && isWord(token) && !isReserved(token));
  const count = token?.tokenType === Whole ? token : countIsLast ? last : undefined;
  const item = count === token ? last : before(place, 2);
  if (!count || !item || ![...setEnds].some((type) => isA(item.tokenType, type))) return undefined;
  const asksForItem = place.failure.expected.some(({ rule }) => rule === "member" || rule === "place");
  if (!asksForItem && !(place.failure.complete && asksFor(place.failure, signs.meet))) return undefined;
  const braces = item.tokenType === signs.closeBrace ? "{…}" : item.image;
  const message = "a count stands before what it counts, not after";
  return {
    message,
    span: tokenSpan(place.source, count),
    hint: `write ${quote(`${count.image} ${braces}`)}`,
  };
}

/** `high, low` in a pattern or the trials of an expectation. */
function commaBetween(place: Place): Complaint | undefined {
  if (at(place)?.tokenType !== signs.comma) return undefined;
  const asked = place.failure.expected.find(({ rule }) => rule === "item" || rule === "trial");
  if (!asked) return undefined;
  const what = asked.rule === "item" ? "the items of a pattern" : "trials";
  return { message: `${what} stand side by side, without commas`, hint: "leave it out" };
}

/** `high*`, `high+`, `high?`, `high{2}` in a pattern. */
function repeatSign(place: Place): Complaint | undefined {
  const token = at(place);
  const open = openBracket(place);
  const item = before(place, open?.tokenType === signs.openBrace ? 2 : 1);
  const counts = new Map<TokenType | undefined, string>([
    [signs.times, "0.."],
    [signs.plus, "1.."],
    [signs.unknown, "0..1"],
  ]);
  const inBraces =
    open?.tokenType === signs.openBrace && open === before(place) && token?.tokenType === Whole;
  const count = inBraces ? token.image : open ? counts.get(token?.tokenType) : undefined;
  if (!count || !item || !setEnds.has(item.tokenType)) return undefined;
  const inPattern = place.tokens
    .slice(0, place.failure.index)
    .some((one) => one.tokenType === signs.openBracket);
  if (!inPattern) return undefined;
  return {
    message: `${inBraces ? quote(`{${count}`) : found(place)} is not how a pattern repeats an item`,
    hint: `a count stands before its item: write ${quote(`${count} ${item.image}`)}`,
  };
}

function countWithPoint(place: Place): Complaint | undefined {
  const token = at(place);
  if (!token || !isA(token.tokenType, Numeral) || isA(token.tokenType, Whole)) return undefined;
  if (!asksFor(place.failure, Whole) || asksFor(place.failure, Numeral)) return undefined;
  return {
    message: `a count is a whole number, not ${quote(token.image)}`,
    hint: "write it with digits alone",
  };
}

function textWithoutQuotes(place: Place): Complaint | undefined {
  const token = at(place);
  if (!token || !asksFor(place.failure, Text) || !isWord(token)) return undefined;
  const word = place.tokens[0]?.tokenType;
  if (word !== reserved.policy && word !== reserved.use && word !== reserved.letters) return undefined;
  if (misspelt(place)) return undefined;
  const { source, tokens } = place;
  const others = tokens.slice(place.failure.index + 1);
  const nextLine = others.findIndex((one) => startsLine(source, one));
  const last = (nextLine === -1 ? others : others.slice(0, nextLine)).at(-1) ?? token;
  const span = cover(tokenSpan(source, token), tokenSpan(source, last));
  const message = `expected text in double quotes, found ${quote(spanText(span))}`;
  return { span, message, hint: 'put it in double quotes: `"…"`' };
}

function misspelt(place: Place): string | undefined {
  const token = at(place);
  if (!token || !isWord(token)) return undefined;
  const meant = nearest(token.image, wordsAt(place.tokens, place.failure));
  return meant && `did you mean ${quote(meant)}?`;
}

function repairHint(place: Place): string | undefined {
  const { repair } = place;
  const sign = repair?.type?.LABEL && quote(repair.type.LABEL);
  if (repair?.type === signs.less || repair?.type === signs.atMost) return undefined;
  if (repair?.kind === "insert" && sign) return `put ${sign} ${where(place)}`;
  if (repair?.kind === "replace" && sign) return `write ${sign} instead of ${found(place)}`;
  return undefined;
}

/** Forms whose parts are easily forgotten, by the word that is missing and the rule that asks for it. */
const forms: readonly { readonly type: TokenType; readonly rule: string; readonly hint: string }[] = [
  { type: placed.by, rule: "sweep", hint: "a parameter goes in steps, as in `delta from 0 to 3 by 0.25`" },
  { type: reserved.within, rule: "require", hint: "an equality has a tolerance, as in `= 370 within 5%`" },
  { type: reserved.within, rule: "link", hint: "write how many trials B has, as in `A unless B within 5`" },
  { type: placed.before, rule: "clear", hint: "write `clear before SET` or `clear after CONDITION`" },
  { type: placed.until, rule: "quiet", hint: "write `quiet for 20` or `quiet until CONDITION`" },
  { type: placed.refuse, rule: "missing", hint: "write `refuse`, `skip` or `break`, or `STAT: as LETTER`" },
];

function formHint(place: Place): string | undefined {
  if (place.failure.complete) return undefined;
  const { expected } = place.failure;
  return forms.find(({ type, rule }) => expected.some((one) => one.type === type && one.rule === rule))?.hint;
}

/** Where the words stand that are not names. */
const placesOfWords: Readonly<Record<string, string>> = {
  restart: "`restart` stands in a `signal`, after its condition",
  continue: "`continue` stands in a `signal`, after its condition",
  quiet: "`quiet for` and `quiet until` stand at the end of a `signal`",
  gap: "`gap` stands after the SET of a run, as in `3 high gap 1`",
  of: "`of` stands in `2 of 3 high` and in `3 high gap 1 of low`",
  within: "`within` stands after `then` and `unless`, and in `require … = VALUE within …`",
  separate: "`separate` stands between a count and a rule, as in `2 separate heavy`",
  overlapping: "`overlapping` stands between a count and a rule, as in `2 overlapping heavy`",
  except: "`except` stands between two SETs",
  not: "`not` stands before a condition",
};

function misplaced(place: Place): string | undefined {
  const token = at(place);
  return token && isReserved(token) ? placesOfWords[token.image] : undefined;
}

/** After a whole declaration: what it could go on with. */
function goesOnWith(place: Place): string | undefined {
  if (!place.failure.complete || !at(place)) return undefined;
  const words = [...new Set(expectedWords(place.failure))].filter((word) => !["any", "{"].includes(word));
  if (words.length === 0) return undefined;
  return `the declaration may go on with ${words.map(quote).join(", ")}`;
}
