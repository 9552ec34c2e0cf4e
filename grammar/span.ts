/** A half-open stretch of a source's text: `start <= end <= text.length`; the end of the input is `{n, n}`. */
import type { Source } from "./source.ts";

export type Span = { readonly source: Source; readonly start: number; readonly end: number };

/** The smallest span that covers both; they lie in one source. */
export function cover(first: Span, last: Span): Span {
  return {
    source: first.source,
    start: Math.min(first.start, last.start),
    end: Math.max(first.end, last.end),
  };
}

/** The text a span covers. */
export function spanText(span: Span): string {
  return span.source.text.slice(span.start, span.end);
}
