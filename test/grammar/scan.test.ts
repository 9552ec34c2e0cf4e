/** Our scanner against Chevrotain's lexer on the same vocabulary: the same tokens, groups and unreadable stretches. */
import { type IToken, Lexer } from "chevrotain";
import fc from "fast-check";
import { expect, it } from "vitest";
import { scan } from "../../grammar/scan.ts";
import { vocabulary } from "../../grammar/tokens.ts";
import { seed } from "../oracle/arbitrary.ts";

const lexer = new Lexer(vocabulary, { positionTracking: "onlyOffset" });

const shown = (tokens: readonly IToken[] = []) =>
  tokens.map(({ tokenType, image, startOffset }) => `${startOffset} ${tokenType.name} ${image}`);

it("scans every soup of pieces as Chevrotain's lexer does", () => {
  const pieces = fc.constantFrom(
    ..."policy let high gapx gap 12 0.5 1. .5 3.. 1e-4 5% 2x == <= < => ... .. // # \" \\ \n \r\n \t ? ~ ^ é ß 𝄞 ≤ → '".split(
      " ",
    ),
    '"a \\" b"',
    "# comment\n",
    " ",
    "\n",
  );
  fc.assert(
    fc.property(fc.array(fc.oneof(pieces, fc.string()), { maxLength: 30 }), (parts) => {
      const text = parts.join("");
      const ours = scan(text);
      const theirs = lexer.tokenize(text);
      expect(shown(ours.tokens)).toEqual(shown(theirs.tokens));
      for (const group of ["comments", "mistakes"])
        expect(shown(ours.groups[group])).toEqual(shown(theirs.groups[group]));
      expect(ours.errors).toEqual(theirs.errors.map(({ offset, length }) => ({ offset, length })));
    }),
    { numRuns: 5000, seed: seed() },
  );
});
