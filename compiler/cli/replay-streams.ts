/**
 * The detectors of a replay, one for each stream, and the state file that lets a later call go on where this one stopped.
 * A state file of another machine, another subgroup size or another way of telling streams apart is refused.
 */
import { existsSync } from "node:fs";
import { Detector, type OpenMachine, openMachine } from "../../runtime/index.ts";
import type { DataItem } from "../data/csv.ts";
import {
  type OpenSubgroups,
  readSubgroups,
  subgroupMeans,
  subgroupProblem,
  writeSubgroups,
} from "../data/subgroups.ts";
import { machineFile } from "../emit/machine-file.ts";
import type { Machine } from "../machine/automaton.ts";
import type { Policy } from "../policy.ts";
import { UsageError } from "./exit.ts";
import { demandWritable, readText, writeWhole } from "./files.ts";

const STATE_FORMAT = "tocsin-replay";
const STATE_VERSION = 1;

/** Bytes of a state file: a string cannot be much longer. */
const LARGEST_STATE = 2 ** 28;

/** Each stream keeps its last trials to explain its signals; this many fit a modest machine. */
const MOST_STREAMS = 50_000;

export type Streams = {
  /** The detector of a stream; null where streams are not told apart. */
  readonly detectorOf: (stream: string | null) => Detector;
  /** The rows, or where it was asked for the means of each subgroup of them. */
  readonly trials: (rows: AsyncIterable<DataItem>) => AsyncIterable<DataItem>;
  /** Raw rows in subgroups that are not full yet. */
  readonly unfinishedRows: () => number;
  /** Writes the state file, where there is one. */
  readonly save: () => void;
};

type Options = { subgroup?: number | undefined; stream?: string | undefined; state?: string | undefined };

/** Detectors at the start, or where the state file says. */
export function makeStreams(policy: Policy, machine: Machine, options: Options): Streams {
  const opened = open(policy, machine);
  const statistics = policy.alphabets.map(({ name, kind }) => ({ name, kind }));
  const problem =
    options.subgroup === undefined ? undefined : subgroupProblem({ statistics }, options.subgroup);
  if (problem) throw new UsageError(`--subgroup ${options.subgroup}: ${problem.what}; ${problem.hint}`);
  const detectors = new Map<string, Detector>();
  let subgroups: OpenSubgroups = new Map();
  const detectorOf = (stream: string | null) => {
    const known = detectors.get(stream ?? "");
    if (known) return known;
    if (detectors.size === MOST_STREAMS)
      throw new UsageError(
        `more than ${MOST_STREAMS.toLocaleString("en")} streams: replay the data in parts`,
      );
    const fresh = new Detector(opened, { why: true });
    detectors.set(stream ?? "", fresh);
    return fresh;
  };
  if (options.state !== undefined) {
    demandWritable(options.state);
    if (existsSync(options.state))
      subgroups = readState(options.state, opened, options, statistics.length, detectorOf);
  }
  return {
    detectorOf,
    trials: (rows) =>
      options.subgroup === undefined ? rows : subgroupMeans(rows, options.subgroup, subgroups),
    unfinishedRows: () => [...subgroups.values()].reduce((sum, rows) => sum + rows.length, 0),
    save: () => {
      if (options.state !== undefined)
        writeWhole(options.state, stateText(headOf(opened, options), detectors, subgroups, options.state));
    },
  };
}

function open(policy: Policy, machine: Machine): OpenMachine {
  const opened = openMachine(machineFile(policy, machine));
  if (!opened.machine) throw new Error(`the machine file was refused: ${JSON.stringify(opened.problems)}`);
  return opened.machine;
}

/** What a state file must say to be gone on from. */
function headOf(machine: OpenMachine, { subgroup, stream }: Options) {
  return {
    format: STATE_FORMAT,
    version: STATE_VERSION,
    machine: machine.id,
    subgroup: subgroup ?? null,
    stream: stream ?? null,
  };
}

/** The text of a state file, a stream a line; more than could be read again is refused. */
function* stateText(
  head: object,
  detectors: ReadonlyMap<string, Detector>,
  subgroups: OpenSubgroups,
  path: string,
): Generator<string, void, void> {
  const rest = JSON.stringify({ ...head, subgroups: writeSubgroups(subgroups) });
  let size = 2 * rest.length;
  yield `${rest.slice(0, -1)},"streams":[`;
  let separator = "\n";
  for (const [name, detector] of detectors) {
    const line = `${separator}${JSON.stringify([name, detector.snapshot()])}`;
    // Everything but names is ASCII; a name takes at most three bytes a unit.
    size += line.length + 2 * name.length;
    if (size > LARGEST_STATE)
      throw new UsageError(
        `${path}: the state of ${detectors.size} streams is too large to be kept in one file`,
      );
    yield line;
    separator = ",\n";
  }
  yield "\n]}\n";
}

/** Restores the detectors, and returns the subgroups that were not full. */
function readState(
  path: string,
  machine: OpenMachine,
  options: Options,
  statistics: number,
  detectorOf: (stream: string) => Detector,
): OpenSubgroups {
  const state = parseState(path);
  for (const [field, due] of Object.entries(headOf(machine, options)))
    if (state[field] !== due)
      throw new UsageError(`${path}: ${refusal(field)}; remove the file to begin anew`);
  const { streams } = state;
  const subgroups = readSubgroups(state.subgroups, statistics, options.subgroup ?? 1);
  if (!Array.isArray(streams) || !subgroups) throw new UsageError(`${path}: this is not a whole state file`);
  const seen = new Set<unknown>();
  for (const entry of streams as unknown[]) {
    const [name, snapshot] = Array.isArray(entry) ? (entry as unknown[]) : [];
    if (typeof name !== "string" || seen.has(name) || (options.stream === undefined && name !== ""))
      throw new UsageError(`${path}: this is not a whole state file`);
    seen.add(name);
    const [problem] = detectorOf(name).restore(snapshot);
    if (problem) throw new UsageError(`${path}: the state of stream "${name}" is refused: ${problem.what}`);
  }
  return subgroups;
}

function parseState(path: string): Record<string, unknown> {
  const { text } = readText(path, LARGEST_STATE);
  try {
    const state: unknown = JSON.parse(text);
    if (typeof state === "object" && state !== null && !Array.isArray(state))
      return state as Record<string, unknown>;
  } catch {
    // Said below, the same for every file that is no state file.
  }
  throw new UsageError(`${path}: this is no state file of tocsin replay`);
}

function refusal(field: string): string {
  switch (field) {
    case "machine":
      return "this is the state of another machine: the policy has changed since";
    case "subgroup":
      return "it was written with another --subgroup";
    case "stream":
      return "it was written with another --stream";
    default:
      return "this is no state file of this version of tocsin replay";
  }
}
