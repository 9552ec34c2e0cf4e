// Reading CSV given as text or bytes, in chunks of any size.

import { type DataItem, type DataRow, readCsv } from "../../compiler/data/csv.ts";
import type { DataProblem } from "../../compiler/data/data-problem.ts";
import type { Wanted } from "../../compiler/data/header.ts";

export const X: Wanted = { statistics: [{ name: "x", kind: "zones" }] };

export async function* chunked(data: string | Uint8Array, size = 65536): AsyncGenerator<Uint8Array> {
  const bytes = typeof data === "string" ? new TextEncoder().encode(data) : data;
  for (let at = 0; at < bytes.length; at += size) yield bytes.subarray(at, at + size);
}

export type Read = { readonly rows: readonly DataRow[]; readonly problems: readonly DataProblem[] };

export async function collect(items: AsyncIterable<DataItem>): Promise<Read> {
  const rows: DataRow[] = [];
  let problems: readonly DataProblem[] = [];
  for await (const item of items) {
    if (problems.length > 0) throw new Error("something follows the problems");
    if (item.kind === "row") rows.push(item);
    else problems = item.problems;
    if (item.kind === "problems" && problems.length === 0) throw new Error("no problem among the problems");
  }
  return { rows, problems };
}

export function readAll(
  data: string | Uint8Array,
  wanted: Wanted = X,
  size?: number,
  mostRecordBytes?: number,
): Promise<Read> {
  const limits = mostRecordBytes === undefined ? {} : { mostRecordBytes };
  return collect(readCsv(chunked(data, size), wanted, limits));
}

/** Rows as `row:line values`, a missing value as `?`. */
export function shown(rows: readonly DataRow[]): string[] {
  return rows.map(
    ({ row, line, values }) => `${row}:${line} ${values.map((value) => value ?? "?").join(" ")}`,
  );
}
