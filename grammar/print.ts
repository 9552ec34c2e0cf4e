/**
 * Tree → canonical text. Its form depends on the tree, its comments and its blank lines alone: printing what was printed
 * changes nothing, and the tree that is read from it is the tree that was printed. Comments keep their place, at most one
 * blank line stays between declarations, parentheses without an effect go, numbers stay as they were written.
 *
 * A file with syntax errors must not be printed back: its tree lacks the declarations that are wrong. Linear.
 */
import { alignColumns, alignTrailing, type Block } from "./columns.ts";
import { type Item, itemsOf } from "./comments.ts";
import { fill, flat, type Piece } from "./layout.ts";
import { putCondition, putSet } from "./print-condition.ts";
import { putExpression } from "./print-expression.ts";
import type { ConditionTree, Expression, FileTree, SetTree } from "./tree.ts";

/** The canonical text of a file. */
export function print(tree: FileTree): string {
  const blocks = alignTrailing(alignColumns(itemsOf(tree)).map(blockOf));
  const lines: string[] = [];
  for (const block of blocks) {
    if (block.blankBefore) lines.push("");
    for (const line of block.lines) lines.push(line);
  }
  return lines.map((line) => `${line}\n`).join("");
}

/** The canonical text of a condition, by which it is known when it has no name. */
export function conditionText(condition: ConditionTree): string {
  const out: Piece[] = [];
  putCondition(out, condition, 1);
  return flat(out);
}

/** The canonical text of a SET. */
export function setText(set: SetTree): string {
  const out: Piece[] = [];
  putSet(out, set, 1);
  return flat(out);
}

/** The canonical text of an expression. */
export function expressionText(expression: Expression): string {
  const out: Piece[] = [];
  putExpression(out, expression, { open: true });
  return flat(out);
}

function blockOf(item: Item): Block {
  const { blankBefore } = item;
  if (item.kind === "comment") return { lines: [item.text], blankBefore };
  return { lines: linesOf(item), trailing: item.trailing, blankBefore };
}

/** Lines of a declaration; a comment inside ends its line, or has one of its own. */
function linesOf({ pieces, inner }: Extract<Item, { kind: "declaration" }>): string[] {
  const lines: string[] = [];
  let from = 0;
  for (const comment of inner) {
    for (const line of fillFrom(pieces, from, comment.index)) lines.push(line);
    if (comment.ownLine) lines.push(`  ${comment.text}`);
    else lines.push(`${lines.pop() ?? ""}  ${comment.text}`);
    from = comment.index;
  }
  for (const line of fillFrom(pieces, from, pieces.length)) lines.push(line);
  return lines;
}

function fillFrom(pieces: readonly Piece[], from: number, to: number): string[] {
  return from < to ? fill(pieces.slice(from, to), from > 0) : [];
}
