/**
 * Alignment: like declarations on neighbouring lines stand in columns (`=` under `=`, `when` under `when`), and so do
 * comments at the ends of neighbouring lines. A blank line, a comment of its own or another kind of declaration ends a
 * block. A column is left alone where aligning it would make a line too long.
 */
import type { Item } from "./comments.ts";
import { flat, lineWidth, type Piece, widthOf } from "./layout.ts";

type DeclarationItem = Extract<Item, { kind: "declaration" }>;

/** The items with their pieces padded into columns. */
export function alignColumns(items: readonly Item[]): Item[] {
  const aligned: Item[] = [];
  let block: DeclarationItem[] = [];
  const close = () => {
    for (const item of alignBlock(block)) aligned.push(item);
    block = [];
  };
  for (const item of items) {
    const last = block.at(-1);
    if (item.kind === "comment" || item.inner.length > 0) {
      close();
      aligned.push(item);
      continue;
    }
    if (last && (item.blankBefore || item.declaration.kind !== last.declaration.kind)) close();
    block.push(item);
  }
  close();
  return aligned;
}

function alignBlock(block: readonly DeclarationItem[]): DeclarationItem[] {
  const rows = block.map((item) => item.pieces);
  const aligned = alignColumn(alignColumn(rows, 0), 1);
  return block.map((item, i) => ({ ...item, pieces: aligned[i] ?? item.pieces }));
}

/** A column that would begin further to the right is none. */
const mostIndented = 70;

type Rows = readonly (readonly Piece[])[];

/** Rows aligned at one column, unless that makes a line too long that was not. */
function alignColumn(rows: Rows, column: number): Rows {
  const starts = rows.map((row) => columnStart(row, column));
  const widths = rows.map((row, i) => widthOf(flat(row.slice(0, starts[i] ?? 0))));
  const widest = widths.reduce((a, b) => Math.max(a, b), 0);
  if (widest > mostIndented) return rows;
  const padded = rows.map((row, i) => padPiece(row, starts[i], widest - (widths[i] ?? 0)));
  const breaksNone = padded.every((row, i) => fitsLine(row) || !fitsLine(rows[i] ?? []));
  return breaksNone ? padded : rows;
}

function fitsLine(row: readonly Piece[]): boolean {
  return widthOf(flat(row)) <= lineWidth;
}

function padPiece(row: readonly Piece[], index: number | undefined, pad: number): readonly Piece[] {
  const piece = index === undefined ? undefined : row[index];
  return index === undefined || piece === undefined ? row : row.with(index, { ...piece, pad });
}

/** The index of the piece with which a column begins. */
function columnStart(row: readonly Piece[], column: number): number | undefined {
  let seen = 0;
  for (const [i, piece] of row.entries()) if (piece.column && seen++ === column) return i;
  return undefined;
}

/** Lines of a declaration, and the comment at the end of the last. */
export type Block = {
  readonly lines: readonly string[];
  readonly trailing?: string | undefined;
  readonly blankBefore: boolean;
};

/** Lines with their comments, those of neighbouring one-line declarations below one another. */
export function alignTrailing(blocks: readonly Block[]): Block[] {
  const result: Block[] = [];
  let from = 0;
  while (from < blocks.length) {
    let to = from + 1;
    while (to < blocks.length && continues(blocks[from]) && continues(blocks[to]) && !blocks[to]?.blankBefore)
      to++;
    const run = blocks.slice(from, to);
    const widest = run.reduce((width, { lines }) => Math.max(width, widthOf(lines.at(-1) ?? "")), 0);
    for (const { lines, trailing, blankBefore } of run) {
      const last = lines.at(-1) ?? "";
      const spaces = " ".repeat(2 + widest - widthOf(last));
      result.push({ lines: trailing ? lines.with(-1, last + spaces + trailing) : lines, blankBefore });
    }
    from = to;
  }
  return result;
}

function continues(block: Block | undefined): boolean {
  return block?.trailing !== undefined && block.lines.length === 1;
}
