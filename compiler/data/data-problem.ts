/**
 * What can be wrong with recorded data: the code, the place as a person counts it, the fault with the values, and what to
 * do about it. Mistakes in data are handed on as values, never thrown.
 */

/** Words, never reused. */
export type DataCode =
  | "data_empty"
  | "data_encoding"
  | "data_column_missing"
  | "data_column_twice"
  | "data_quote"
  | "data_record_long"
  | "data_cells"
  | "data_number"
  | "data_subgroups";

export type DataProblem = {
  readonly code: DataCode;
  /** The data row from 1, the header not counted; null where the fault is not in one. */
  readonly row: number | null;
  /** The line of the text from 1 on which the row begins, or null. */
  readonly line: number | null;
  readonly column: string | null;
  /** What is wrong, one sentence with the values. */
  readonly what: string;
  /** What to write or do instead. */
  readonly hint: string;
};

/** A cell or a name as it may stand in a message: quoted, its odd characters escaped, cut to forty. */
export function quoted(text: string): string {
  return text.length > 40 ? `${JSON.stringify(text.slice(0, 40))}…` : JSON.stringify(text);
}
