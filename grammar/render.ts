/**
 * A diagnostic as text for people: a header with its code and place, the message, the line of the text with the place
 * underlined, what to write instead, and the other places, each with its line.
 *
 *     error[syntax] fill.tocsin:4:12
 *       expected `=`, found `3`
 *       4: rule heavy 3 high
 *                     ^
 *       hint: put `=` before `3`
 *
 * Columns are counted in code points; tabs are kept, above and below; of a long line only the part around the place is
 * shown. Characters that could act on a terminal are replaced by a sign of the same width. Colour comes from the caller.
 */
import type { Diagnostic } from "./diagnostic.ts";
import { positionAt } from "./source.ts";
import type { Span } from "./span.ts";

/** How kinds of text are painted; each function adds colour to a text and nothing else. */
export type Paint = Partial<
  Record<"error" | "warning" | "note" | "strong" | "quiet", (text: string) => string>
>;

export type RenderOptions = {
  readonly paint?: Paint;
  /** Code points of a source line that are shown at most; 100 unless told. */
  readonly width?: number;
};

/** The text of a diagnostic, without a line break at its end. */
export function renderDiagnostic(diagnostic: Diagnostic, options: RenderOptions = {}): string {
  const { severity, code, span, message, hint, related = [] } = diagnostic;
  const { paint = {}, width = 100 } = options;
  const colour = paint[severity] ?? plain;
  const quiet = paint.quiet ?? plain;
  const lines = [
    `${colour(`${severity}[${code}]`)} ${quiet(place(span))}`,
    `  ${(paint.strong ?? plain)(harmless(message))}`,
    ...excerpt(span, width, colour, quiet),
  ];
  if (hint !== undefined) lines.push(`  hint: ${harmless(hint)}`);
  for (const other of related) {
    lines.push(`  see ${quiet(place(other.span))}: ${harmless(other.message)}`);
    lines.push(...excerpt(other.span, width, paint.note ?? plain, quiet));
  }
  return lines.join("\n");
}

function plain(text: string): string {
  return text;
}

function place({ source, start }: Span): string {
  const { line, column } = positionAt(source, start);
  return `${harmless(source.path)}:${line}:${column}`;
}

/** The line a span begins on, and its underline; a span that goes on beyond its line is underlined to the end. */
function excerpt(span: Span, width: number, colour: Painter, quiet: Painter): string[] {
  const { text, lineStarts } = span.source;
  const { line } = positionAt(span.source, span.start);
  const lineStart = lineStarts[line - 1] ?? 0;
  const lineEnd = endOfLine(text, lineStart, lineStarts[line] ?? text.length);
  const start = Math.min(span.start, lineEnd);
  const end = Math.max(start, Math.min(span.end, lineEnd));
  const nearStart = Math.max(lineStart, start - 2 * width);
  const nearEnd = Math.min(lineEnd, Math.min(end, start + 2 * width) + 2 * width);
  const points = [...text.slice(nearStart, nearEnd)];
  const from = [...text.slice(nearStart, start)].length;
  const to = from + Math.max(1, [...text.slice(start, Math.min(end, nearEnd))].length);
  const { first, last } = view(points.length, from, to, width);
  const gutter = `  ${line}: `;
  const before = first > 0 || nearStart > lineStart ? "…" : "";
  const after = last < points.length || nearEnd < lineEnd ? "…" : "";
  const shift = points.slice(first, from).map((point) => (point === "\t" ? "\t" : " "));
  const indent = " ".repeat(gutter.length + before.length) + shift.join("");
  const marks = "^".repeat(Math.max(1, Math.min(to, last) - from));
  return [
    quiet(gutter) + before + points.slice(first, last).map(harmless).join("") + after,
    indent + colour(marks),
  ];
}

function endOfLine(text: string, start: number, next: number): number {
  let end = next;
  while (end > start && (text[end - 1] === "\n" || text[end - 1] === "\r")) end--;
  return end;
}

type Painter = (text: string) => string;

/** The part of a line that is shown: all of it if it fits, else the place with as much before and after it. */
function view(length: number, from: number, to: number, width: number): { first: number; last: number } {
  if (length <= width) return { first: 0, last: length };
  const middle = Math.floor((from + Math.min(to, from + width)) / 2);
  const first = Math.max(0, Math.min(from, middle - Math.floor(width / 2), length - width));
  return { first, last: Math.min(length, first + width) };
}

const acting = /[\p{Cc}\p{Cs}\u2028\u2029\u200E\u200F\u061C\u202A-\u202E\u2066-\u2069\uFEFF]/gu;

/** Control characters as their pictures, others that act on what is shown as a replacement character; tabs stay. */
function harmless(text: string): string {
  return text.replace(acting, (character) => {
    if (character === "\t") return character;
    const code = character.charCodeAt(0);
    return code < 32 ? String.fromCharCode(0x2400 + code) : "\uFFFD";
  });
}
