/**
 * The policy in its parts, stepped beside the machine so that a raise can be explained: each condition's own small machine,
 * the quiet times, the place in the block, and the last symbols read. One trial, in order: `clear before`; every signal
 * steps; what was raised clears as it declares, then quiet times begin; `clear after`; the block's edge. The raises found
 * here must equal those of the machine, which is the product of these parts.
 *
 * Trials are numbered from 1. A step costs O(conditions) and allocates nothing.
 */
import type { FormulaInFile } from "./machine-file.ts";
import type { ConditionMachine, Reasons, SignalReasons } from "./open-reasons.ts";

/** Stands among the remembered symbols for a broken trial. */
export const BROKEN = -1;

export type Parts = {
  readonly reasons: Reasons;
  /** By condition, those of all signals laid end to end: the state of its machine. */
  readonly states: Int32Array;
  /** By condition: 1 where it completed at the last trial. */
  readonly completed: Uint8Array;
  /** By signal: how many trials its condition still rests; 1 while it rests until a condition holds. */
  readonly rests: Int32Array;
  /** By signal: the state of the condition it is quiet until. */
  readonly untils: Int32Array;
  /** By `clear after` condition: its state. */
  readonly afters: Int32Array;
  /** By signal: the first trial its condition's memory reaches back to. */
  readonly since: Float64Array;
  /** The same as it stood when the last trial was read, before anything raised cleared it. */
  readonly sinceAtLast: Float64Array;
  /** The symbols of the last trials; trial t stands at (t − 1) modulo the length. */
  readonly ring: Int32Array;
  /** How many trials the ring holds. */
  kept: number;
  /** Trials since the block began. */
  place: number;
  /** The signals raised at the last trial. */
  raises: number;
};

export function startParts(reasons: Reasons, remember: number): Parts {
  const signals = reasons.signals.length;
  const conditions = reasons.signals.reduce((sum, signal) => sum + signal.conditions.length, 0);
  return {
    reasons,
    states: new Int32Array(conditions),
    completed: new Uint8Array(conditions),
    rests: new Int32Array(signals),
    untils: new Int32Array(signals),
    afters: new Int32Array(reasons.clearAfter.length),
    since: new Float64Array(signals).fill(1),
    sinceAtLast: new Float64Array(signals).fill(1),
    ring: new Int32Array(remember),
    kept: 0,
    place: 0,
    raises: 0,
  };
}

/** Reads trial `trial`, and returns the set of signals raised. */
export function stepParts(parts: Parts, symbol: number, trial: number): number {
  const { reasons } = parts;
  const column = reasons.columnOf[symbol]!;
  remember(parts, symbol, trial);
  if (reasons.clearBefore[column] === 1) clearParts(parts, trial);
  parts.sinceAtLast.set(parts.since);
  parts.completed.fill(0);
  let raises = 0;
  let restarts = false;
  for (let j = 0; j < reasons.signals.length; j++) {
    const signal = reasons.signals[j]!;
    if (parts.rests[j]! > 0) {
      rest(parts, signal, j, column, trial);
    } else if (watch(parts, signal, column)) {
      raises |= 1 << j;
      if (signal.response === "restart") restarts = true;
    }
  }
  let ends = false;
  for (let i = 0; i < reasons.clearAfter.length; i++) {
    if (stepOne(reasons.clearAfter[i]!, reasons.columns, parts.afters, i, column)) ends = true;
  }
  if (raises !== 0) respond(parts, raises, restarts, trial + 1);
  if (ends) clearParts(parts, trial + 1);
  else advancePlace(parts, trial + 1);
  parts.raises = raises;
  return raises;
}

/** A trial with a missing value, under `missing break`: memory clears, quiet times and the place in the block go on. */
export function breakParts(parts: Parts, trial: number): void {
  remember(parts, BROKEN, trial);
  parts.completed.fill(0);
  parts.raises = 0;
  forgetAll(parts, trial + 1);
  for (const [j, signal] of parts.reasons.signals.entries()) {
    if (signal.quietFor > 0 && parts.rests[j]! > 0) parts.rests[j] = parts.rests[j]! - 1;
  }
  advancePlace(parts, trial + 1);
}

/** Everything as at the start; `next` is the number of the first trial to be read. */
export function clearParts(parts: Parts, next: number): void {
  forgetAll(parts, next);
  parts.rests.fill(0);
  parts.place = 0;
}

function remember(parts: Parts, symbol: number, trial: number): void {
  parts.ring[(trial - 1) % parts.ring.length] = symbol;
  if (parts.kept < parts.ring.length) parts.kept++;
}

function stepOne(
  machine: ConditionMachine,
  columns: number,
  states: Int32Array,
  at: number,
  column: number,
): boolean {
  const entry = states[at]! * columns + column;
  states[at] = machine.next[entry]!;
  return machine.completes[entry] === 1;
}

/** Steps the conditions of a watching signal; true when it is raised. */
function watch(parts: Parts, signal: SignalReasons, column: number): boolean {
  const { columns } = parts.reasons;
  for (let i = 0; i < signal.conditions.length; i++) {
    const at = signal.first + i;
    if (stepOne(signal.conditions[i]!.machine, columns, parts.states, at, column)) parts.completed[at] = 1;
  }
  return holds(signal.formula, parts.completed, signal.first);
}

/** Lets a quiet signal rest for this trial; it watches again, from clear memory, on the trial after its last one. */
function rest(parts: Parts, signal: SignalReasons, j: number, column: number, trial: number): void {
  if (signal.quietUntil === null) {
    parts.rests[j] = parts.rests[j]! - 1;
  } else if (stepOne(signal.quietUntil, parts.reasons.columns, parts.untils, j, column)) {
    parts.rests[j] = 0;
    parts.untils[j] = 0;
  }
  if (parts.rests[j] === 0) parts.since[j] = trial + 1;
}

/** What was raised clears as it declares: all clearing first, then every quiet time of a raised signal begins. */
function respond(parts: Parts, raises: number, restarts: boolean, next: number): void {
  if (restarts) {
    forgetAll(parts, next);
    parts.rests.fill(0);
  }
  const { signals } = parts.reasons;
  for (let j = 0; j < signals.length; j++) {
    if ((raises & (1 << j)) === 0) continue;
    const signal = signals[j]!;
    const quiet = signal.quietUntil !== null ? 1 : signal.quietFor;
    if (signal.response === "continue" && quiet === 0) continue;
    parts.states.fill(0, signal.first, signal.first + signal.conditions.length);
    parts.since[j] = next;
    parts.rests[j] = quiet;
    parts.untils[j] = 0;
  }
}

/** Memory of every condition clears; quiet times and the place in the block stay. */
function forgetAll(parts: Parts, next: number): void {
  parts.states.fill(0);
  parts.untils.fill(0);
  parts.afters.fill(0);
  parts.since.fill(next);
}

function advancePlace(parts: Parts, next: number): void {
  if (parts.reasons.block === 0) return;
  parts.place++;
  if (parts.place < parts.reasons.block) return;
  parts.place = 0;
  forgetAll(parts, next);
}

/** Whether a formula holds, given which conditions completed. */
export function holds(formula: FormulaInFile, completed: Uint8Array, first: number): boolean {
  if (typeof formula === "number") return completed[first + formula] === 1;
  if ("not" in formula) return !holds(formula.not, completed, first);
  if ("and" in formula) {
    for (const operand of formula.and) if (!holds(operand, completed, first)) return false;
    return true;
  }
  for (const operand of formula.or) if (holds(operand, completed, first)) return true;
  return false;
}
