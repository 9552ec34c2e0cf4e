/**
 * Opening a machine file: JSON text, or its value, in; a machine ready to run out, or refusals that name the place. Every
 * index and number is checked before anything uses it and everything is copied, so that a detector can step without
 * checks and a later change of the value does no harm. Never throws on any text or JSON value; cost is linear in its size.
 *
 * What cannot be told from the file alone is not checked: that the tables are those of the policy, that the parts under
 * `reasons` raise what the tables raise, that `id` is the digest it says. See the trust model in `format.md`.
 */
import { MACHINE_FORMAT, MACHINE_VERSION, MOST_SIGNALS, MOST_SYMBOLS } from "./machine-file.ts";
import { checkReasons, type Reasons } from "./open-reasons.ts";
import {
  checkDistinct,
  checkList,
  checkName,
  checkObject,
  checkText,
  checkWord,
  note,
  type Problem,
  readJson,
  show,
} from "./problems.ts";
import { checkStatistic, type Statistic } from "./statistics.ts";
import { checkTables, type Tables } from "./tables.ts";

/** A machine whose every number has been checked; made by `openMachine` alone. */
export type OpenMachine = {
  readonly policy: { readonly name: string; readonly title: string | null; readonly source: string };
  readonly id: string;
  /** In declared order; the first varies slowest in a symbol. */
  readonly statistics: readonly Statistic[];
  readonly missing: "refuse" | "skip" | "break";
  readonly signals: readonly string[];
  /** The number of combinations of letters. */
  readonly symbols: number;
  readonly tables: Tables;
  readonly reasons: Reasons;
};

/** Exactly one of the two: a machine, or at least one problem. */
export type Opened =
  | { readonly machine: OpenMachine; readonly problems: readonly [] }
  | { readonly machine?: undefined; readonly problems: readonly Problem[] };

const FIELDS = [
  "format",
  "version",
  "policy",
  "id",
  "statistics",
  "missing",
  "signals",
  "tables",
  "reasons",
] as const;

/** Opens a machine file given as text, or as the value its JSON stands for. */
export function openMachine(file: unknown): Opened {
  const problems: Problem[] = [];
  const read = readJson(file, problems);
  if (read === undefined || !isOurs(read.json, problems)) return { problems };
  const object = checkObject(read.json, "$", FIELDS, problems);
  const machine = object && checkMachine(object, problems);
  return machine === undefined || problems.length > 0 ? { problems } : { machine, problems: [] };
}

/** The gate: a file of another kind or version is refused before anything else is looked at. */
function isOurs(json: unknown, problems: Problem[]): boolean {
  const { format, version } = (json ?? {}) as { readonly format?: unknown; readonly version?: unknown };
  if (format !== MACHINE_FORMAT) {
    const what = `this is not a machine file: its format is ${show(format)}, not ${show(MACHINE_FORMAT)}`;
    note(problems, "not_a_machine", "$.format", what);
    return false;
  }
  if (version === MACHINE_VERSION) return true;
  const what = `this file is of version ${show(version)}; this detector reads ${MACHINE_VERSION}`;
  note(problems, "wrong_version", "$.version", what);
  return false;
}

function checkMachine(
  object: Readonly<Record<(typeof FIELDS)[number], unknown>>,
  problems: Problem[],
): OpenMachine | undefined {
  const policy = checkPolicy(object.policy, problems);
  const id = checkDigest(object.id, "$.id", problems);
  const missing = checkWord(object.missing, "$.missing", ["refuse", "skip", "break"], problems);
  const signals = checkSignals(object.signals, problems);
  const statistics = checkStatistics(object.statistics, problems);
  if (statistics === undefined || signals === undefined || missing === undefined) return undefined;
  const symbols = statistics.reduce((product, { letters }) => product * letters.length, 1);
  if (symbols > MOST_SYMBOLS) {
    const what = `the letters make ${symbols} combinations; at most ${MOST_SYMBOLS} fit a symbol`;
    return note(problems, "too_many", "$.statistics", what);
  }
  const standIns = statistics.every((statistic) => statistic.missing >= 0);
  const breaks = missing !== "break" ? "never" : standIns ? "may" : "must";
  const tables = checkTables(object.tables, { symbols, signals: signals.length, breaks }, problems);
  const reasons = checkReasons(object.reasons, { symbols, signals: signals.length }, problems);
  if (policy === undefined || id === undefined || tables === undefined || reasons === undefined)
    return undefined;
  return { policy, id, statistics, missing, signals, symbols, tables, reasons };
}

function checkPolicy(value: unknown, problems: Problem[]): OpenMachine["policy"] | undefined {
  const object = checkObject(value, "$.policy", ["name", "title", "source"], problems);
  if (object === undefined) return undefined;
  const name = checkName(object.name, "$.policy.name", problems);
  const source = checkDigest(object.source, "$.policy.source", problems);
  const { title } = object;
  if (title !== null && typeof title !== "string") {
    note(problems, "wrong_type", "$.policy.title", `a text or null is due here, not ${show(title)}`);
    return undefined;
  }
  return name === undefined || source === undefined ? undefined : { name, title, source };
}

function checkDigest(value: unknown, where: string, problems: Problem[]): string | undefined {
  const text = checkText(value, where, problems);
  if (text === undefined || /^[0-9a-f]{64}$/.test(text)) return text;
  return note(problems, "bad_text", where, "64 hexadecimal digits in lower case are due here");
}

function checkSignals(value: unknown, problems: Problem[]): readonly string[] | undefined {
  const list = checkList(value, "$.signals", 0, MOST_SIGNALS, problems);
  const names = list?.map((name, j) => checkName(name, `$.signals[${j}]`, problems));
  if (names === undefined || !names.every((name) => name !== undefined)) return undefined;
  checkDistinct(names, (j) => `$.signals[${j}]`, problems);
  return names;
}

function checkStatistics(value: unknown, problems: Problem[]): readonly Statistic[] | undefined {
  const list = checkList(value, "$.statistics", 1, Infinity, problems);
  const statistics = list?.map((entry, i) => checkStatistic(entry, `$.statistics[${i}]`, problems));
  if (statistics === undefined || !statistics.every((entry) => entry !== undefined)) return undefined;
  const names = statistics.map((statistic) => statistic.name);
  checkDistinct(names, (i) => `$.statistics[${i}].name`, problems);
  return statistics;
}
