/**
 * Mistakes that show in the text alone, before any grammar: characters outside the language, malformed numbers and text,
 * signs of other languages. Each function makes the diagnostic of one of them.
 */
import type { IToken } from "chevrotain";
import { type Diagnostic, diagnose } from "./diagnostic.ts";
import { quote } from "./quote.ts";
import type { Source } from "./source.ts";
import type { Span } from "./span.ts";
import { tokenSpan } from "./syntax-node.ts";
import { BadNumber, lookalikeOf, OpenText, OtherText, Text } from "./tokens.ts";

/** What is wrong with one token; in a requirement some mistakes mean something else. */
export function mistakes(source: Source, token: IToken, inRequire: boolean): Diagnostic[] {
  const span = tokenSpan(source, token);
  switch (token.tokenType) {
    case Text:
      return [...badEscapes(source, token), ...hiddenCharacters(source, token.image, token.startOffset)];
    case OpenText:
      return [
        diagnose("unterminated_string", span, "the text is not closed on the line it begins on", {
          hint: 'end it with `"`',
        }),
      ];
    case OtherText:
      return [
        diagnose("syntax", span, "text stands in plain double quotes", {
          hint: `write \`"${token.image.slice(1, -1)}"\``,
        }),
      ];
    case BadNumber:
      return [badNumber(span, token.image)];
    default: {
      const lookalike = lookalikeOf.get(token.tokenType);
      if (!lookalike) return [];
      const { write } = lookalike;
      const fitting = write.filter((sign) => write.length === 1 || sign !== (inRequire ? "->" : ">="));
      const hint = `write ${fitting.map(quote).join(" or ")}`;
      const [code, what] =
        token.image.length === 1
          ? (["unexpected_character", "character"] as const)
          : (["syntax", "sign"] as const);
      return [diagnose(code, span, `${quote(token.image)} is not a ${what} of the language`, { hint })];
    }
  }
}

function badNumber(span: Span, image: string): Diagnostic {
  if (/^\.\d+(?:[eE][+-]?\d+)?$/.test(image))
    return diagnose("bad_number", span, `${quote(image)} lacks a digit before the point`, {
      hint: `write ${quote(`0${image}`)}`,
    });
  if (/^\d+\.$/.test(image))
    return diagnose("bad_number", span, `${quote(image)} lacks a digit after the point`, {
      hint: `write ${quote(image.slice(0, -1))} or ${quote(`${image}0`)}`,
    });
  if (/^\d[\d_]*(?:\.\d[\d_]*)?$/.test(image))
    return diagnose("bad_number", span, `${quote(image)} is not a number`, {
      hint: `write ${quote(image.replaceAll("_", ""))}`,
    });
  const glued = /^(\d+(?:\.\d+)?)(?!x[\dA-Fa-f]+$)([A-Za-z]\w*)$/.exec(image);
  if (glued)
    return diagnose("bad_number", span, `a letter stands straight after the number in ${quote(image)}`, {
      hint: `put a space between them: ${quote(`${glued[1]} ${glued[2]}`)}`,
    });
  return diagnose("bad_number", span, `${quote(image)} is not a number`, {
    hint: "numbers are written as `12`, `0.05`, `1e-4` or `5%`",
  });
}

function badEscapes(source: Source, token: IToken): Diagnostic[] {
  const found: Diagnostic[] = [];
  for (const match of token.image.matchAll(/\\(?:["\\]|([^"\\]))/gu)) {
    if (match[1] === undefined) continue;
    const start = token.startOffset + match.index;
    const span = { source, start, end: start + match[0].length };
    const hint =
      'in text, `\\"` is a quotation mark and `\\\\` a backslash; nothing else begins with a backslash';
    found.push(diagnose("syntax", span, `${quote(match[0])} has no meaning in text`, { hint }));
  }
  return found;
}

/** Control characters, halves of surrogate pairs, and characters that change the order in which text is shown. */
const hidden = /(?:(?!\t)[\p{Cc}\p{Cs}\u202A-\u202E\u2066-\u2069\uFEFF])+/gu;

export function hiddenCharacters(source: Source, text: string, offset: number): Diagnostic[] {
  return [...text.matchAll(hidden)].map((match) => {
    const start = offset + match.index;
    const span = { source, start, end: start + match[0].length };
    return diagnose(
      "unexpected_character",
      span,
      `${quote(match[0])} cannot be seen by who reads the policy`,
      {
        hint: "remove it",
      },
    );
  });
}

const garbageHints: Readonly<Record<string, string>> = {
  ";": "no sign is needed there: a declaration ends where the next one begins",
  ".": "a point stands only in a number, with a digit on both sides",
  "'": 'text stands in double quotes: `"…"`',
  "\u00A0": "it looks like a space; type a plain one",
};

/** Characters that begin nothing. */
export function garbage(span: Span, text: string): Diagnostic {
  const hint = garbageHints[text.slice(0, 1)];
  const what = [...text].length > 1 ? "are not characters" : "is not a character";
  return diagnose(
    "unexpected_character",
    span,
    `${quote(text)} ${what} of the language`,
    hint ? { hint } : {},
  );
}

/** A word with letters beyond A to Z. */
export function foreignName(span: Span, word: string): Diagnostic {
  return diagnose("unexpected_character", span, `${quote(word)} is not a name`, {
    hint: "a name is made of the letters A to Z and a to z, digits and `_`",
  });
}

/** A comment that begins with `//`. */
export function otherComment(span: Span): Diagnostic {
  return diagnose("syntax", { ...span, end: span.start + 2 }, "`//` begins no comment", {
    hint: "a comment begins with `#`",
  });
}
