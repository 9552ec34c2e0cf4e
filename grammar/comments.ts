/**
 * Where the comments of a file stand in its canonical text. The file becomes a list of items: declarations and comments on
 * lines of their own, each with or without a blank line before it. A comment after a declaration on its line stays there;
 * one inside a declaration stays between the pieces where it was, on its own line or at the end of one, but never before
 * a comma or a closing bracket. If no piece is left after it, it follows the declaration, as it will be read next time.
 */
import type { Piece } from "./layout.ts";
import { declarationPieces } from "./print-declaration.ts";
import type { Comment, Declaration, FileTree } from "./tree.ts";

/** A comment inside a declaration, before the piece at `index`. */
export type InnerComment = { readonly index: number; readonly text: string; readonly ownLine: boolean };

export type Item =
  | { readonly kind: "comment"; readonly text: string; readonly blankBefore: boolean }
  | {
      readonly kind: "declaration";
      readonly declaration: Declaration;
      readonly pieces: readonly Piece[];
      readonly inner: readonly InnerComment[];
      readonly trailing?: string;
      readonly blankBefore: boolean;
    };

/** Declarations and comments in the order of the text. */
export function itemsOf({ source, declarations, comments }: FileTree): Item[] {
  const { text } = source;
  const items: Item[] = [];
  let end = 0;
  let next = 0;
  const upTo = (offset: number): Comment[] => {
    const first = next;
    while ((comments[next]?.span.start ?? Infinity) < offset) next++;
    return comments.slice(first, next);
  };
  const putOwnLine = (comment: Comment): void => {
    const blankBefore = items.length > 0 && hasBlankLine(text.slice(end, comment.span.start));
    items.push({ kind: "comment", text: comment.text.trimEnd(), blankBefore });
    end = Math.max(end, comment.span.end);
  };
  for (const [i, declaration] of declarations.entries()) {
    for (const comment of upTo(declaration.span.start)) putOwnLine(comment);
    const blankBefore = items.length > 0 && hasBlankLine(text.slice(end, declaration.span.start));
    const pieces = declarationPieces(declaration);
    const within = placeInner(text, pieces, upTo(declaration.span.end));
    const line = Math.min(endOfLine(text, declaration.span.end), declarations[i + 1]?.span.start ?? Infinity);
    const after = within.left.concat(upTo(line));
    const [first] = after;
    const trailing = first && (first.span.start > declaration.span.end || !startsLine(text, first));
    items.push({
      kind: "declaration",
      declaration,
      pieces,
      inner: within.inner,
      ...(trailing && { trailing: first.text.trimEnd() }),
      blankBefore,
    });
    end = Math.max(end, declaration.span.end, trailing ? first.span.end : 0);
    for (const comment of trailing ? after.slice(1) : after) putOwnLine(comment);
    if (i === declarations.length - 1) for (const comment of upTo(Infinity)) putOwnLine(comment);
  }
  if (declarations.length === 0) for (const comment of comments) putOwnLine(comment);
  return items;
}

/** The place of each comment inside a declaration; `left` are those after which no piece stands. */
function placeInner(text: string, pieces: readonly Piece[], comments: readonly Comment[]) {
  const inner: InnerComment[] = [];
  const left: Comment[] = [];
  const places = comments.length > 0 ? placesOf(text, pieces, comments) : [];
  let index = 0;
  for (const comment of comments) {
    while (index < pieces.length && (places[index] ?? 0) < comment.span.start) index++;
    while (/^[,)\]}]$/.test(pieces[index]?.text ?? "")) index++;
    const ownLine = startsLine(text, comment) || inner.at(-1)?.index === index;
    if (index === pieces.length) left.push(comment);
    else inner.push({ index, text: comment.text.trimEnd(), ownLine });
  }
  return { inner, left };
}

/**
 * Where each piece stands in the source; -1 where that is unknown. The tree has no place for most signs and words: they
 * are looked for between the pieces that have one, outside comments.
 */
function placesOf(text: string, pieces: readonly Piece[], comments: readonly Comment[]): number[] {
  const nextPlaces: number[] = [];
  let next = text.length;
  for (const { at } of pieces.toReversed()) {
    nextPlaces.push(next);
    next = at ?? next;
  }
  let from = next;
  return pieces.map(({ text: word, at }) => {
    const next = nextPlaces.pop() ?? text.length;
    const found = at ?? findOutside(text, word, from, next, comments);
    if (found !== -1) from = found + word.length;
    return found;
  });
}

function findOutside(
  text: string,
  word: string,
  from: number,
  to: number,
  comments: readonly Comment[],
): number {
  for (let at = text.indexOf(word, from); at !== -1 && at < to; at = text.indexOf(word, at + 1)) {
    const comment = comments[lastBefore(comments, at)];
    if (comment === undefined || comment.span.end <= at) return at;
    at = comment.span.end - 1;
  }
  return -1;
}

/** The last comment that begins at an offset or before it. */
function lastBefore(comments: readonly Comment[], offset: number): number {
  let low = -1;
  let high = comments.length - 1;
  while (low < high) {
    const middle = Math.ceil((low + high) / 2);
    if ((comments[middle]?.span.start ?? Infinity) <= offset) low = middle;
    else high = middle - 1;
  }
  return low;
}

function startsLine(text: string, comment: Comment): boolean {
  let i = comment.span.start - 1;
  while (text[i] === " " || text[i] === "\t") i--;
  return i < 0 || text[i] === "\n" || text[i] === "\r";
}

function endOfLine(text: string, from: number): number {
  let i = from;
  while (i < text.length && text[i] !== "\n" && text[i] !== "\r") i++;
  return i;
}

function hasBlankLine(between: string): boolean {
  return /(?:\r\n|\r|\n)[ \t]*(?:\r\n|\r|\n)/.test(between);
}
