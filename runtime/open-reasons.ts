/**
 * The reasons of a machine file, checked: the policy in its parts, each condition a small machine of its own. After this
 * every index is in its range and every formula is at most `DEEPEST` operators deep, so `reasons.ts` steps unchecked.
 */
import type { FormulaInFile } from "./machine-file.ts";
import type { Problem } from "./problems.ts";
import {
  checkList,
  checkObject,
  checkText,
  checkWhole,
  checkWholes,
  checkWord,
  note,
  show,
} from "./problems.ts";

export type ConditionMachine = {
  readonly states: number;
  /** `next[state * columns + column]`. */
  readonly next: Int32Array;
  /** 1 where the transition completes the condition, same index. */
  readonly completes: Uint8Array;
};

export type SignalReasons = {
  /** Where this signal's conditions begin among those of all signals laid end to end. */
  readonly first: number;
  readonly conditions: readonly { readonly name: string; readonly machine: ConditionMachine }[];
  readonly formula: FormulaInFile;
  readonly response: "own" | "restart" | "continue";
  /** Trials of rest after a raise; 0 for none. */
  readonly quietFor: number;
  readonly quietUntil: ConditionMachine | null;
};

export type Reasons = {
  readonly columns: number;
  readonly columnOf: Int32Array;
  readonly signals: readonly SignalReasons[];
  /** By column: 1 where memory clears before the trial is read. */
  readonly clearBefore: Uint8Array;
  readonly clearAfter: readonly ConditionMachine[];
  /** Trials in a batch; 0 for no batches. */
  readonly block: number;
};

const DEEPEST = 1000;
const MOST_TRIALS = 2 ** 31 - 1;

export function checkReasons(
  value: unknown,
  shape: { readonly symbols: number; readonly signals: number },
  problems: Problem[],
): Reasons | undefined {
  const at = "$.reasons";
  const fields = [
    "columns",
    "columnOf",
    "automata",
    "signals",
    "clearBefore",
    "clearAfter",
    "block",
  ] as const;
  const object = checkObject(value, at, fields, problems);
  if (object === undefined) return undefined;
  const columns = checkWhole(object.columns, `${at}.columns`, 1, shape.symbols, problems);
  if (columns === undefined) return undefined;
  const { symbols, signals: count } = shape;
  const columnOf = checkWholes(
    object.columnOf,
    `${at}.columnOf`,
    0,
    columns - 1,
    Int32Array,
    symbols,
    problems,
  );
  const clearBefore = checkWholes(
    object.clearBefore,
    `${at}.clearBefore`,
    0,
    1,
    Uint8Array,
    columns,
    problems,
  );
  const { block } = object;
  const trials = block === null ? 0 : checkWhole(block, `${at}.block`, 1, MOST_TRIALS, problems);
  const automata = checkAutomata(object.automata, `${at}.automata`, columns, problems);
  if (automata === undefined) return undefined;
  const clears = checkList(object.clearAfter, `${at}.clearAfter`, 0, Infinity, problems);
  const clearAfter = clears?.map((index, i) => pick(automata, index, `${at}.clearAfter[${i}]`, problems));
  const list = checkList(object.signals, `${at}.signals`, count, count, problems);
  if (list === undefined || columnOf === undefined || clearBefore === undefined || trials === undefined)
    return undefined;
  const signals: SignalReasons[] = [];
  let first = 0;
  for (const [j, entry] of list.entries()) {
    const signal = checkSignal(entry, `${at}.signals[${j}]`, first, automata, problems);
    if (signal === undefined) continue;
    signals.push(signal);
    first += signal.conditions.length;
  }
  if (signals.length < count || clearAfter === undefined || !allThere(clearAfter)) return undefined;
  return { columns, columnOf, signals, clearBefore, clearAfter, block: trials };
}

function allThere<T>(list: readonly (T | undefined)[]): list is readonly T[] {
  return list.every((entry) => entry !== undefined);
}

function checkAutomata(
  value: unknown,
  where: string,
  columns: number,
  problems: Problem[],
): readonly ConditionMachine[] | undefined {
  const list = checkList(value, where, 0, Infinity, problems);
  const automata = list?.map((entry, i): ConditionMachine | undefined => {
    const at = `${where}[${i}]`;
    const object = checkObject(entry, at, ["states", "next", "completes"], problems);
    if (object === undefined) return undefined;
    const states = checkWhole(object.states, `${at}.states`, 1, Math.floor(MOST_TRIALS / columns), problems);
    if (states === undefined) return undefined;
    const entries = states * columns;
    const next = checkWholes(object.next, `${at}.next`, 0, states - 1, Int32Array, entries, problems);
    const completes = checkWholes(object.completes, `${at}.completes`, 0, 1, Uint8Array, entries, problems);
    return next === undefined || completes === undefined ? undefined : { states, next, completes };
  });
  return automata !== undefined && allThere(automata) ? automata : undefined;
}

function pick(
  automata: readonly ConditionMachine[],
  index: unknown,
  where: string,
  problems: Problem[],
): ConditionMachine | undefined {
  if (automata.length === 0) return note(problems, "out_of_range", where, "the list of automata is empty");
  const checked = checkWhole(index, where, 0, automata.length - 1, problems);
  return checked === undefined ? undefined : automata[checked];
}

function checkSignal(
  value: unknown,
  where: string,
  first: number,
  automata: readonly ConditionMachine[],
  problems: Problem[],
): SignalReasons | undefined {
  const object = checkObject(value, where, ["conditions", "formula", "response", "quiet"], problems);
  if (object === undefined) return undefined;
  const list = checkList(object.conditions, `${where}.conditions`, 1, Infinity, problems);
  const conditions = list?.map((entry, i) => {
    const at = `${where}.conditions[${i}]`;
    const condition = checkObject(entry, at, ["name", "automaton"], problems);
    if (condition === undefined) return undefined;
    const name = checkText(condition.name, `${at}.name`, problems);
    const machine = pick(automata, condition.automaton, `${at}.automaton`, problems);
    return name === undefined || machine === undefined ? undefined : { name, machine };
  });
  if (conditions === undefined) return undefined;
  const formula = checkFormula(object.formula, `${where}.formula`, conditions.length, 0, problems);
  const responses = ["own", "restart", "continue"] as const;
  const response = checkWord(object.response, `${where}.response`, responses, problems);
  const quiet = checkQuiet(object.quiet, `${where}.quiet`, automata, problems);
  if (!allThere(conditions) || formula === undefined || response === undefined || quiet === undefined)
    return undefined;
  return { first, conditions, formula, response, ...quiet };
}

function checkQuiet(
  value: unknown,
  where: string,
  automata: readonly ConditionMachine[],
  problems: Problem[],
): Pick<SignalReasons, "quietFor" | "quietUntil"> | undefined {
  if (value === null) return { quietFor: 0, quietUntil: null };
  if (typeof value === "object" && "for" in value) {
    const object = checkObject(value, where, ["for"], problems);
    const quietFor = object && checkWhole(object.for, `${where}.for`, 1, MOST_TRIALS, problems);
    return quietFor === undefined ? undefined : { quietFor, quietUntil: null };
  }
  const object = checkObject(value, where, ["until"], problems);
  const quietUntil = object && pick(automata, object.until, `${where}.until`, problems);
  return quietUntil === undefined ? undefined : { quietFor: 0, quietUntil };
}

/** A copy of the formula; operands of `and` and `or` are at least one. */
function checkFormula(
  value: unknown,
  where: string,
  conditions: number,
  depth: number,
  problems: Problem[],
): FormulaInFile | undefined {
  if (depth > DEEPEST)
    return note(problems, "too_deep", "$.reasons.signals", `a formula nests more than ${DEEPEST} deep`);
  if (typeof value === "number") return checkWhole(value, where, 0, conditions - 1, problems);
  const operator = typeof value === "object" && value !== null ? Object.keys(value)[0] : undefined;
  if (operator !== "and" && operator !== "or" && operator !== "not") {
    const what = `an index of a condition, or an object "and", "or" or "not", is due here, not ${show(value)}`;
    return note(problems, "wrong_type", where, what);
  }
  const object = checkObject(value, where, [operator], problems);
  if (object === undefined) return undefined;
  const at = `${where}.${operator}`;
  if (operator === "not") {
    const operand = checkFormula(object[operator], at, conditions, depth + 1, problems);
    return operand === undefined ? undefined : { not: operand };
  }
  const list = checkList(object[operator], at, 1, Infinity, problems);
  const operands = list?.map((entry, i) =>
    checkFormula(entry, `${at}[${i}]`, conditions, depth + 1, problems),
  );
  if (operands === undefined || !allThere(operands)) return undefined;
  return operator === "and" ? { and: operands } : { or: operands };
}
