/**
 * The header row: which cell of a row belongs to which statistic. Columns are found by name, exactly; a name that is not
 * there is reported with the names that are and the one that was probably meant.
 */
import { nearest } from "../../grammar/spelling.ts";
import { type DataProblem, quoted } from "./data-problem.ts";

/** What is wanted of a table of recorded data. */
export type Wanted = {
  readonly statistics: readonly {
    readonly name: string;
    readonly kind: "zones" | "letters";
    /** The name of its column; the statistic's own unless given. */
    readonly column?: string;
  }[];
  /** The column of a clock, carried along as it is written. */
  readonly time?: string | undefined;
  /** The column that keeps streams apart. */
  readonly stream?: string | undefined;
};

/** Where to look in a row; −1 where nothing was asked for. */
export type Places = {
  readonly width: number;
  readonly statistics: readonly {
    readonly column: string;
    readonly place: number;
    readonly number: boolean;
  }[];
  readonly time: number;
  readonly stream: number;
};

export function findColumns(
  names: readonly string[],
  wanted: Wanted,
  line: number,
): { readonly places: Places; readonly problems: readonly DataProblem[] } {
  const problems: DataProblem[] = [];
  const find = (column: string, purpose: string): number => {
    const place = names.indexOf(column);
    if (place === -1) problems.push(notThere(column, purpose, names, line));
    else if (names.indexOf(column, place + 1) !== -1) problems.push(thereTwice(column, line));
    return place;
  };
  const statistics = wanted.statistics.map(({ name, kind, column = name }) => ({
    column,
    place: find(column, `statistic "${name}"`),
    number: kind === "zones",
  }));
  const time = wanted.time === undefined ? -1 : find(wanted.time, "the clock");
  const stream = wanted.stream === undefined ? -1 : find(wanted.stream, "the streams");
  return { places: { width: names.length, statistics, time, stream }, problems };
}

function notThere(column: string, purpose: string, names: readonly string[], line: number): DataProblem {
  const shown = names.slice(0, 20).map(quoted).join(", ");
  const more = names.length > 20 ? ` and ${names.length - 20} more` : "";
  const what = `there is no column ${quoted(column)} for ${purpose}; the columns are ${shown}${more}`;
  return {
    code: "data_column_missing",
    row: null,
    line,
    column,
    what,
    hint: hintFor(column, purpose, names),
  };
}

function hintFor(column: string, purpose: string, names: readonly string[]): string {
  const only = names.length === 1 ? (names[0] ?? "") : "";
  if (only.includes(";")) return "the cells seem to be separated by semicolons: separate them by commas";
  if (only.includes("\t")) return "the cells seem to be separated by tabs: separate them by commas";
  if (names.every((name) => /^[+-]?[0-9.]/.test(name))) {
    return "the first line must be a header that names the columns";
  }
  const meant = nearest(column, names) ?? names.find((name) => name.toLowerCase() === column.toLowerCase());
  if (meant !== undefined) return `did you mean ${quoted(meant)}?`;
  return purpose.startsWith("statistic")
    ? "name the column of the statistic, as in `--column STATISTIC=NAME`, or rename it in the file"
    : "name one of these columns";
}

function thereTwice(column: string, line: number): DataProblem {
  const what = `two columns are called ${quoted(column)}`;
  return { code: "data_column_twice", row: null, line, column, what, hint: "rename one of them" };
}
