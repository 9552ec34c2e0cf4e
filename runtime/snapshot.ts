/**
 * Snapshots: where a detector stands, as a plain object that JSON carries unchanged. A snapshot names its machine by `id`
 * and is refused by any other; every field is checked before a detector takes it on. It is no proof: a snapshot altered
 * within its ranges is another place to go on from.
 */
import type { OpenMachine } from "./open.ts";
import {
  checkList,
  checkObject,
  checkWhole,
  checkWholes,
  note,
  type Problem,
  readJson,
  show,
} from "./problems.ts";
import { type Parts, startParts } from "./reasons.ts";

export const SNAPSHOT_FORMAT = "tocsin-snapshot";
export const SNAPSHOT_VERSION = 1;
/** Half of what a double counts exactly, so that as many again can be counted after a restore. */
const MOST_READINGS = 2 ** 52;

export type Snapshot = {
  readonly format: typeof SNAPSHOT_FORMAT;
  readonly version: typeof SNAPSHOT_VERSION;
  /** The `id` of the machine. */
  readonly machine: string;
  readonly state: number;
  /** Trials read. */
  readonly trial: number;
  /** Readings refused or skipped. */
  readonly passedOver: number;
  /** What is needed to say why, of a detector that is asked to. */
  readonly reasons: null | {
    readonly states: readonly number[];
    readonly completed: readonly number[];
    readonly rests: readonly number[];
    readonly untils: readonly number[];
    readonly afters: readonly number[];
    readonly since: readonly number[];
    readonly sinceAtLast: readonly number[];
    readonly place: number;
    readonly raises: number;
    /** The symbols of the last trials, oldest first; −1 for a broken one. */
    readonly symbols: readonly number[];
  };
};

/** What a detector takes on from a snapshot. */
export type Standing = {
  readonly state: number;
  readonly trial: number;
  readonly passedOver: number;
  readonly parts: Parts | null;
};

export function takeSnapshot(machine: OpenMachine, { state, trial, passedOver, parts }: Standing): Snapshot {
  return {
    format: SNAPSHOT_FORMAT,
    version: SNAPSHOT_VERSION,
    machine: machine.id,
    state,
    trial,
    passedOver,
    reasons: parts === null ? null : writeParts(parts, trial),
  };
}

function writeParts(parts: Parts, trial: number): Snapshot["reasons"] {
  const { states, completed, rests, untils, afters, since, sinceAtLast, place, raises, ring, kept } = parts;
  return {
    states: [...states],
    completed: [...completed],
    rests: [...rests],
    untils: [...untils],
    afters: [...afters],
    since: [...since],
    sinceAtLast: [...sinceAtLast],
    place,
    raises,
    symbols: Array.from({ length: kept }, (_, i) => ring[(trial - kept + i) % ring.length]!),
  };
}

/** Checks a snapshot given as an object or as JSON text; `remember` is null for a detector that is not asked why. */
export function checkSnapshot(
  machine: OpenMachine,
  snapshot: unknown,
  remember: number | null,
  problems: Problem[],
): Standing | undefined {
  const read = readJson(snapshot, problems);
  if (read === undefined || !isOfMachine(machine, read.json, problems)) return undefined;
  const fields = ["format", "version", "machine", "state", "trial", "passedOver", "reasons"] as const;
  const object = checkObject(read.json, "$", fields, problems);
  if (object === undefined) return undefined;
  const state = checkWhole(object.state, "$.state", 0, machine.tables.states - 1, problems);
  const trial = checkWhole(object.trial, "$.trial", 0, MOST_READINGS, problems);
  const passedOver = checkWhole(object.passedOver, "$.passedOver", 0, MOST_READINGS, problems);
  if (state === undefined || trial === undefined || passedOver === undefined) return undefined;
  if (remember === null) return { state, trial, passedOver, parts: null };
  if (object.reasons === null) {
    const what =
      "this snapshot was taken by a detector that was not asked why; one that is cannot go on from it";
    return note(problems, "no_reasons", "$.reasons", what);
  }
  const parts = checkParts(machine, object.reasons, trial, remember, problems);
  return parts === undefined ? undefined : { state, trial, passedOver, parts };
}

function isOfMachine(machine: OpenMachine, json: unknown, problems: Problem[]): boolean {
  const head = (json ?? {}) as {
    readonly format?: unknown;
    readonly version?: unknown;
    readonly machine?: unknown;
  };
  if (head.format !== SNAPSHOT_FORMAT) {
    const what = `this is not a snapshot: its format is ${show(head.format)}, not ${show(SNAPSHOT_FORMAT)}`;
    note(problems, "not_a_snapshot", "$.format", what);
    return false;
  }
  if (head.version !== SNAPSHOT_VERSION) {
    const what = `this snapshot is of version ${show(head.version)}; this detector reads ${SNAPSHOT_VERSION}`;
    note(problems, "wrong_version", "$.version", what);
    return false;
  }
  if (head.machine === machine.id) return true;
  const what = `this snapshot is of machine ${show(head.machine)}, not of policy "${machine.policy.name}", machine "${machine.id}"`;
  note(problems, "other_machine", "$.machine", what);
  return false;
}

const PARTS = [
  "states",
  "completed",
  "rests",
  "untils",
  "afters",
  "since",
  "sinceAtLast",
  "place",
  "raises",
  "symbols",
] as const;

function checkParts(
  machine: OpenMachine,
  value: unknown,
  trial: number,
  remember: number,
  problems: Problem[],
): Parts | undefined {
  const at = "$.reasons";
  const object = checkObject(value, at, PARTS, problems);
  if (object === undefined) return undefined;
  const { reasons } = machine;
  const parts = startParts(reasons, remember);
  const fill = (
    field: "states" | "completed" | "rests" | "untils" | "afters" | "since" | "sinceAtLast",
    least: number,
    mostAt: (i: number) => number,
  ): void => {
    const into = parts[field];
    const list = checkList(object[field], `${at}.${field}`, into.length, into.length, problems);
    list?.forEach((entry, i) => {
      into[i] = checkWhole(entry, `${at}.${field}[${i}]`, least, mostAt(i), problems) ?? 0;
    });
  };
  const machines = reasons.signals.flatMap((signal) =>
    signal.conditions.map((condition) => condition.machine),
  );
  fill("states", 0, (i) => machines[i]!.states - 1);
  fill("completed", 0, () => 1);
  fill("rests", 0, (j) => (reasons.signals[j]!.quietUntil ? 1 : reasons.signals[j]!.quietFor));
  fill("untils", 0, (j) => (reasons.signals[j]!.quietUntil?.states ?? 1) - 1);
  fill("afters", 0, (i) => reasons.clearAfter[i]!.states - 1);
  fill("since", 1, () => trial + 1);
  fill("sinceAtLast", 1, () => trial + 1);
  parts.place = checkWhole(object.place, `${at}.place`, 0, Math.max(reasons.block - 1, 0), problems) ?? 0;
  parts.raises = checkWhole(object.raises, `${at}.raises`, 0, 2 ** machine.signals.length - 1, problems) ?? 0;
  readSymbols(machine, object.symbols, trial, parts, problems);
  return problems.length > 0 ? undefined : parts;
}

/** Fills the ring with the last of the remembered symbols; where there are fewer than it could hold, that is known. */
function readSymbols(
  machine: OpenMachine,
  value: unknown,
  trial: number,
  parts: Parts,
  problems: Problem[],
): void {
  const list = checkList(value, "$.reasons.symbols", 0, trial, problems);
  if (list === undefined) return;
  const least = machine.missing === "break" ? -1 : 0;
  const most = machine.symbols - 1;
  const symbols = checkWholes(list, "$.reasons.symbols", least, most, Int32Array, list.length, problems);
  if (symbols === undefined) return;
  const size = parts.ring.length;
  parts.kept = Math.min(symbols.length, size);
  for (let back = 1; back <= parts.kept; back++) {
    parts.ring[(trial - back) % size] = symbols[symbols.length - back]!;
  }
}
