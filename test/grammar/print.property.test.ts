// Canonical text never changes meaning: random trees are printed and read again, without and with comments and line breaks
// strewn between their tokens. FC_SEED chooses the seed; CI fixes it.

import fc from "fast-check";
import { expect, test } from "vitest";
import { lex } from "../../grammar/lex.ts";
import { parse } from "../../grammar/parse.ts";
import { print } from "../../grammar/print.ts";
import { makeSource } from "../../grammar/source.ts";
import type { FileTree } from "../../grammar/tree.ts";
import { seed } from "../oracle/arbitrary.ts";
import { fileTree, withoutSpans } from "./trees.ts";

const settings = { seed: seed(), numRuns: Number(process.env.FC_RUNS ?? 200) };

function read(text: string): FileTree {
  const { tree, diagnostics } = parse(makeSource("printed.tocsin", text));
  expect(diagnostics.map(({ message, span }) => `${message} at ${span.start} of ${text}`)).toEqual([]);
  return tree;
}

function meaning(tree: FileTree): unknown {
  return withoutSpans(tree.declarations);
}

function comments(tree: FileTree): string[] {
  return tree.comments.map((comment) => comment.text.trimEnd());
}

test("what was printed is read as the tree that was printed", () => {
  fc.assert(
    fc.property(fileTree, (tree) => {
      const text = print(tree);
      const again = read(text);
      expect(meaning(again)).toEqual(meaning(tree));
      expect(print(again)).toBe(text);
    }),
    settings,
  );
}, 300_000);

const gaps = fc.constantFrom(
  " ",
  "  ",
  "\n",
  "\n\n\n",
  "\r\n",
  " # aside\n",
  "\n# alone\n",
  "\n\n  # alone, apart  \n\n",
  "#tight\r\n",
  "\t#\n# two\n",
);

test("comments and blank lines anywhere change nothing, and all comments stay, in order", () => {
  fc.assert(
    fc.property(fileTree, fc.infiniteStream(gaps), fc.boolean(), (tree, stream, dense) => {
      const text = strew(print(tree), stream, dense);
      const first = read(text);
      expect(meaning(first)).toEqual(meaning(tree));
      const printed = print(first);
      const again = read(printed);
      expect(meaning(again)).toEqual(meaning(tree));
      expect(comments(again)).toEqual(comments(first));
      expect(print(again)).toBe(printed);
      expect(printed).not.toMatch(/[ \t]\n|\n\n\n|^\n|\r/);
    }),
    settings,
  );
}, 300_000);

/** The tokens of a text with other gaps between them, everywhere or here and there. */
function strew(text: string, stream: Iterator<string>, dense: boolean): string {
  let result = "";
  let n = 0;
  for (const token of lex(makeSource("printed.tocsin", text)).tokens) {
    const gap = dense || n++ % 5 === 0 ? stream.next().value : " ";
    result += gap + token.image;
  }
  return result + stream.next().value;
}
