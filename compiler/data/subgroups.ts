/**
 * Subgroups: raw rows in, the means of each n consecutive rows of a stream out, as rows again. The mean of a subgroup with
 * any missing value is missing. A subgroup not yet full is no trial; it is kept, by stream, to be reported or to go on from.
 *
 * Means are correct to double accuracy whatever the size: sums carry their own rounding (Neumaier 1974). ±∞ make a mean of
 * ±∞, and both together a missing one.
 */
import type { DataItem, DataRow } from "./csv.ts";
import type { DataProblem } from "./data-problem.ts";
import type { Wanted } from "./header.ts";

/** JSON has no infinities; in a subgroup that is kept they are words. */
type Kept = number | "Infinity" | "-Infinity" | null;

/** Subgroups not full yet, by stream (`""` where streams are not kept apart): by row, by statistic. */
export type OpenSubgroups = Map<string, (readonly Kept[])[]>;

export const MOST_IN_SUBGROUP = 10_000;

/** Why subgroup means cannot be had of these statistics; nothing when they can. */
export function subgroupProblem(wanted: Wanted, size: number): DataProblem | undefined {
  const place = { code: "data_subgroups", row: null, line: null, column: null } as const;
  const category = wanted.statistics.find(({ kind }) => kind === "letters");
  if (category !== undefined) {
    const what = `"${category.name}" is read as categories, of which there is no mean`;
    return { ...place, what, hint: "leave out the subgroups, or give the means as data" };
  }
  if (Number.isInteger(size) && size >= 1 && size <= MOST_IN_SUBGROUP) return undefined;
  const what = `a subgroup of ${size} rows`;
  return { ...place, what, hint: `give a whole number from 1 to ${MOST_IN_SUBGROUP}` };
}

/**
 * A row for each full subgroup, numbered and timed as its last raw row. Goes on from the subgroups in `open`, and leaves
 * there those that are not full at the end. Problems pass through.
 */
export async function* subgroupMeans(
  items: AsyncIterable<DataItem>,
  size: number,
  open: OpenSubgroups,
): AsyncGenerator<DataItem, void, void> {
  for await (const item of items) {
    const mean = item.kind === "row" ? gather(item, size, open) : item;
    if (mean !== null) yield mean;
  }
}

/** Adds a row to the subgroup of its stream, and gives the subgroup's mean when that fills it. */
function gather(item: DataRow, size: number, open: OpenSubgroups): DataRow | null {
  const stream = item.stream ?? "";
  const rows = open.get(stream) ?? [];
  rows.push(item.values.map(keep));
  if (rows.length < size) {
    open.set(stream, rows);
    return null;
  }
  open.delete(stream);
  return { ...item, values: item.values.map((_, i) => meanOf(rows.map((row) => numberOf(row[i] ?? null)))) };
}

function keep(value: number | string | null): Kept {
  if (typeof value !== "number" || Number.isNaN(value)) return null;
  return Number.isFinite(value) ? value : value > 0 ? "Infinity" : "-Infinity";
}

function numberOf(kept: Kept): number | null {
  return typeof kept === "string" ? Number(kept) : kept;
}

/** The mean, or null when a value is missing or there is no mean. */
export function meanOf(values: readonly (number | null)[]): number | null {
  let sum = 0;
  let lost = 0;
  for (const value of values) {
    if (value === null) return null;
    const next = sum + value;
    lost += Math.abs(sum) >= Math.abs(value) ? sum - next + value : value - next + sum;
    sum = next;
  }
  if (Number.isFinite(sum)) return (sum + lost) / values.length;
  return infiniteMean(values as readonly number[]);
}

/** The sum left the doubles: because a value is infinite, or because large ones add up to more than there is. */
function infiniteMean(values: readonly number[]): number | null {
  const mean = values.reduce((total, value) => total + value / values.length, 0);
  return Number.isNaN(mean) ? null : mean;
}

/** Subgroups kept by an earlier run, from JSON nobody vouches for; nothing when they are not of these statistics and size. */
export function readSubgroups(kept: unknown, statistics: number, size: number): OpenSubgroups | undefined {
  if (!Array.isArray(kept)) return undefined;
  const open: OpenSubgroups = new Map();
  for (const entry of kept as readonly unknown[]) {
    if (!Array.isArray(entry) || entry.length !== 2) return undefined;
    const [stream, rows] = entry as readonly unknown[];
    if (typeof stream !== "string" || open.has(stream) || !Array.isArray(rows)) return undefined;
    if (rows.length < 1 || rows.length >= size || !rows.every((row) => isRow(row, statistics)))
      return undefined;
    open.set(stream, [...rows]);
  }
  return open;
}

function isRow(row: unknown, statistics: number): row is readonly Kept[] {
  return Array.isArray(row) && row.length === statistics && row.every(isKept);
}

function isKept(value: unknown): value is Kept {
  if (typeof value === "number") return Number.isFinite(value);
  return value === null || value === "Infinity" || value === "-Infinity";
}

/** The same, to be written as JSON. */
export function writeSubgroups(
  open: OpenSubgroups,
): readonly (readonly [string, readonly (readonly Kept[])[]])[] {
  return [...open];
}
