/**
 * The text of one file, and the way from an offset to what people count in.
 * Offsets are UTF-16 code units from 0, as JavaScript strings have them; lines and columns are counted from 1, columns in
 * code points, and appear only where something is shown to a person or a tool.
 */
export type Source = {
  /** How the file was named by whoever asked for it; shown as is. */
  readonly path: string;
  readonly text: string;
  /** Offset of the first code unit of every line. */
  readonly lineStarts: readonly number[];
};

export type Position = { readonly line: number; readonly column: number };

const BYTE_ORDER_MARK = "\uFEFF";

/** Makes a source; a byte order mark at the start is not part of the text. */
export function makeSource(path: string, content: string): Source {
  const text = content.startsWith(BYTE_ORDER_MARK) ? content.slice(1) : content;
  const lineStarts = [0];
  for (let i = 0; i < text.length; i++) {
    const c = text.charCodeAt(i);
    if (c === 10 || (c === 13 && text.charCodeAt(i + 1) !== 10)) lineStarts.push(i + 1);
  }
  return { path, text, lineStarts };
}

/** Line and column of an offset; an offset beyond the text is taken as its end. */
export function positionAt(source: Source, offset: number): Position {
  const at = Math.max(0, Math.min(offset, source.text.length));
  let low = 0;
  let high = source.lineStarts.length - 1;
  while (low < high) {
    const middle = (low + high + 1) >> 1;
    if ((source.lineStarts[middle] ?? 0) <= at) low = middle;
    else high = middle - 1;
  }
  const lineStart = source.lineStarts[low] ?? 0;
  return { line: low + 1, column: countCodePoints(source.text, lineStart, at) + 1 };
}

function countCodePoints(text: string, start: number, end: number): number {
  let count = 0;
  for (let i = start; i < end; i++) {
    const isSecondHalf = i > start && (text.charCodeAt(i) & 0xfc00) === 0xdc00;
    if (!isSecondHalf || (text.charCodeAt(i - 1) & 0xfc00) !== 0xd800) count++;
  }
  return count;
}
