/**
 * The tables of a machine file, checked and laid flat for stepping. Successors are kept as offsets of their rows
 * (`state * columns`), so that one addition finds an entry: `next[offset + column]`. Every successor is the offset of a
 * row and every column is below `columns`, so stepping needs no check of its own.
 */
import { checkObject, checkWhole, checkWholes, note, type Problem } from "./problems.ts";

export type Tables = {
  readonly states: number;
  readonly columns: number;
  /** By symbol. */
  readonly columnOf: Int32Array;
  /** By offset + column: the offset of the successor. */
  readonly next: Int32Array;
  /** By offset + column: the bit set of signals raised, below 2^31. */
  readonly raises: Int32Array;
  /** By state: the offset where a broken trial leads; null where no trial can break. */
  readonly broken: Int32Array | null;
};

/** Offsets fit 32 bits, signed. */
const MOST_ENTRIES = 2 ** 31 - 1;

export function checkTables(
  value: unknown,
  shape: { readonly symbols: number; readonly signals: number; readonly breaks: "must" | "may" | "never" },
  problems: Problem[],
): Tables | undefined {
  const at = "$.tables";
  const fields = ["states", "columns", "columnOf", "next", "raises", "broken"] as const;
  const object = checkObject(value, at, fields, problems);
  if (object === undefined) return undefined;
  const states = checkWhole(object.states, `${at}.states`, 1, MOST_ENTRIES, problems);
  const columns = checkWhole(object.columns, `${at}.columns`, 1, shape.symbols, problems);
  if (states === undefined || columns === undefined) return undefined;
  const entries = states * columns;
  if (entries > MOST_ENTRIES) {
    const what = `${states} states of ${columns} columns are more than ${MOST_ENTRIES} entries`;
    return note(problems, "too_many", at, what);
  }
  const symbols = shape.symbols;
  const columnOf = checkWholes(
    object.columnOf,
    `${at}.columnOf`,
    0,
    columns - 1,
    Int32Array,
    symbols,
    problems,
  );
  const next = checkWholes(object.next, `${at}.next`, 0, states - 1, Int32Array, entries, problems);
  const most = 2 ** shape.signals - 1;
  const raises = checkWholes(object.raises, `${at}.raises`, 0, most, Int32Array, entries, problems);
  const broken = checkBroken(object.broken, `${at}.broken`, states, shape.breaks, problems);
  if (columnOf === undefined || next === undefined || raises === undefined || broken === undefined)
    return undefined;
  for (let i = 0; i < next.length; i++) next[i] = next[i]! * columns;
  if (broken !== null) for (let i = 0; i < states; i++) broken[i] = broken[i]! * columns;
  return { states, columns, columnOf, next, raises, broken };
}

function checkBroken(
  value: unknown,
  where: string,
  states: number,
  breaks: "must" | "may" | "never",
  problems: Problem[],
): Int32Array | null | undefined {
  if (value === null && breaks !== "must") return null;
  if (breaks === "never")
    return note(problems, "wrong_type", where, 'null is due here: "missing" is not "break"');
  return checkWholes(value, where, 0, states - 1, Int32Array, states, problems);
}
