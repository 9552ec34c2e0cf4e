/**
 * Recorded data as rows of readings: CSV in, one reading for each statistic out, by columns named in a header row.
 *
 * A numeric cell that is empty or `NaN` is a missing value, as is an empty category; what a missing value does is the
 * policy's affair. A line without anything is passed over, except in a table of one column, where it is an empty cell
 * (but not after the last row). The first fault ends the reading: all faults of that row are given, and the rows before
 * it have been. Streaming, in bounded memory, at the pace of whoever takes the rows.
 */
import { numberCell } from "./cells.ts";
import type { DataProblem } from "./data-problem.ts";
import { findColumns, type Places, type Wanted } from "./header.ts";
import { type Fault, type RawRecord, readRecords } from "./records.ts";

export type DataRow = {
  readonly kind: "row";
  /** The data row from 1, the header not counted. */
  readonly row: number;
  /** The line of the text from 1 on which it begins. */
  readonly line: number;
  /** One for each statistic: a number for zones, a text for letters, null for a missing value. */
  readonly values: readonly (number | string | null)[];
  /** The cells of the clock and of the stream as they are written; null where none was asked for. */
  readonly time: string | null;
  readonly stream: string | null;
};

export type DataItem = DataRow | { readonly kind: "problems"; readonly problems: readonly DataProblem[] };

const MOST_RECORD_BYTES = 2 ** 20;

type Limits = { /** 1 MiB unless given. */ readonly mostRecordBytes?: number };

/** Rows, and at most one item of problems, the last. Errors of the stream itself go through. */
export async function* readCsv(
  chunks: AsyncIterable<Uint8Array | string>,
  wanted: Wanted,
  { mostRecordBytes = MOST_RECORD_BYTES }: Limits = {},
): AsyncGenerator<DataItem, void, void> {
  let places: Places | null = null;
  let row = 0;
  /** Lines without anything of a one-column table, rows only if another row follows. */
  let blank: RawRecord[] = [];
  for await (const { records = [], fault } of readRecords(chunks, mostRecordBytes)) {
    for (const record of records) {
      if (places === null) {
        if (isBlank(record)) continue;
        const header = findColumns(record.cells, wanted, record.line);
        if (header.problems.length > 0) return yield { kind: "problems", problems: header.problems };
        places = header.places;
      } else if (isBlank(record)) {
        if (places.width === 1) blank.push(record);
      } else {
        for (const each of [...blank, record]) {
          const item = readRow(each, places, ++row);
          yield item;
          if (item.kind === "problems") return;
        }
        blank = [];
      }
    }
    if (fault !== undefined) return yield { kind: "problems", problems: [faultAt(fault, places && row + 1)] };
  }
  if (places === null) yield { kind: "problems", problems: [EMPTY] };
}

const EMPTY: DataProblem = {
  code: "data_empty",
  row: null,
  line: 1,
  column: null,
  what: "there is no header row: the data are empty",
  hint: "the first line names the columns, separated by commas",
};

function isBlank({ cells }: RawRecord): boolean {
  return cells.length === 1 && cells[0] === "";
}

function faultAt(fault: Fault, row: number | null): DataProblem {
  return { ...fault, row, column: null };
}

function readRow({ cells, line }: RawRecord, places: Places, row: number): DataItem {
  if (cells.length !== places.width) {
    return { kind: "problems", problems: [wrongCount(cells.length, places.width, row, line)] };
  }
  const problems: DataProblem[] = [];
  const values = places.statistics.map(({ column, place, number }) => {
    const cell = cells[place] ?? "";
    if (!number) return cell === "" ? null : cell;
    const found = numberCell(cell);
    if (found.value !== undefined) return found.value;
    problems.push({ code: "data_number", row, line, column, what: found.what, hint: found.hint });
    return null;
  });
  if (problems.length > 0) return { kind: "problems", problems };
  const { time, stream } = places;
  return {
    kind: "row",
    row,
    line,
    values,
    time: time === -1 ? null : (cells[time] ?? ""),
    stream: stream === -1 ? null : (cells[stream] ?? ""),
  };
}

function wrongCount(cells: number, width: number, row: number, line: number): DataProblem {
  const hint =
    cells > width
      ? "decimals follow a point, not a comma; a text with a comma in it stands in quotes"
      : "give every row a cell for every column; a missing value is an empty cell";
  const what = `this row has ${cells} ${cells === 1 ? "cell" : "cells"} where the header has ${width}`;
  return { code: "data_cells", row, line, column: null, what, hint };
}
