/**
 * Canonical text as pieces, and pieces as lines. A piece is a word, sign, name, number or text that is never broken. It
 * knows where it came from (so that comments find their place), whether it clings to the piece before it, and whether a
 * line may break before it: at a break of level 1 sooner than at one of level 2. A declaration that fits stays on one
 * line; one that does not is filled from its outermost breaks, and only what is still too long is broken within. What
 * comes out depends on the pieces alone, so that printing twice gives the same text.
 */

export type Piece = {
  readonly text: string;
  /** Offset in the source, where the tree tells it. */
  readonly at?: number;
  /** Written without a space before it. */
  readonly tight?: boolean;
  /** A line may break before it; 1 is the outermost. */
  readonly breakLevel?: number;
  /** Begins a column: in a block of like declarations these stand below one another. */
  readonly column?: "single" | "double";
  /** Spaces put before it beyond its own, to stand in its column. */
  readonly pad?: number;
};

export const lineWidth = 100;
const continuation = "  ";

/** Length in code points. */
export function widthOf(text: string): number {
  let width = 0;
  for (const _ of text) width++;
  return width;
}

/** Pieces on one line. */
export function flat(pieces: readonly Piece[]): string {
  return pieces.map((piece, i) => (i === 0 ? piece.text : spaceBefore(piece) + piece.text)).join("");
}

function spaceBefore({ tight, column, pad = 0 }: Piece): string {
  return " ".repeat((tight ? 0 : column === "double" ? 2 : 1) + pad);
}

/** Pieces on as few lines as they need; all but the first (or all, after a comment) are indented. */
export function fill(pieces: readonly Piece[], continued = false): string[] {
  const lines = [continued ? continuation : ""];
  place(lines, pieces, true);
  return lines;
}

/** Adds pieces to the last line or, from a break on, to new ones; `isFirst` when nothing stands on the line yet. */
function place(lines: string[], pieces: readonly Piece[], isFirst: boolean): void {
  const [first] = pieces;
  if (!first) return;
  const line = lines.at(-1) ?? "";
  const whole = line + (isFirst ? "" : spaceBefore(first)) + flat(pieces);
  const segments = innerBreaks(pieces);
  if (widthOf(whole) <= lineWidth || (segments === undefined && (isFirst || !first.breakLevel))) {
    lines[lines.length - 1] = whole;
  } else if (!isFirst && first.breakLevel) {
    lines.push(continuation);
    place(lines, pieces, true);
  } else {
    placeSegments(lines, segments ?? [], isFirst);
  }
}

/** Segments side by side; after one that had to be broken itself the next begins a line. */
function placeSegments(lines: string[], segments: readonly Piece[][], isFirst: boolean): void {
  let wasBroken = false;
  for (const [i, segment] of segments.entries()) {
    if (wasBroken) lines.push(continuation);
    const begun: number = lines.length;
    place(lines, segment, wasBroken || (i === 0 && isFirst));
    const movedDown: number = i > 0 && !wasBroken && lines.length > begun ? 1 : 0;
    wasBroken = i > 0 && lines.length - begun > movedDown;
  }
}

/** The pieces cut at their outermost breaks; nothing where they have none after the first. */
function innerBreaks(pieces: readonly Piece[]): Piece[][] | undefined {
  const levels = pieces.slice(1).map((piece) => piece.breakLevel ?? 0);
  const outermost = levels.reduce((least, level) => (level > 0 && level < least ? level : least), Infinity);
  if (outermost === Infinity) return undefined;
  const segments: Piece[][] = [];
  for (const [i, piece] of pieces.entries()) {
    if (i === 0 || piece.breakLevel === outermost) segments.push([]);
    segments.at(-1)?.push(piece);
  }
  return segments;
}
