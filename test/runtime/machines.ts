// Machine files for the tests: some written by hand, and a builder that multiplies the parts of a policy into tables by
// reading decisions one sentence at a time on plain objects. The builder is the slow twin of `runtime/reasons.ts`; it
// shares no code with it and does not minimise.

import type {
  AutomatonInFile,
  FormulaInFile,
  MachineFile,
  ReasonsInFile,
  StatisticInFile,
  TablesInFile,
} from "../../runtime/machine-file.ts";

type Mutable<T> = { -readonly [K in keyof T]: T[K] };
export type Draft = Mutable<MachineFile>;

/** `low < 0 <= high`. */
export const LOW_HIGH: StatisticInFile = {
  name: "x",
  kind: "zones",
  letters: ["low", "high"],
  cuts: [{ at: 0, exact: "0", owner: "above" }],
  missing: null,
};

/** `letters v: good, bad = "NOK"`. */
export const GOOD_BAD: StatisticInFile = {
  name: "v",
  kind: "letters",
  letters: ["good", "bad"],
  texts: [null, "NOK"],
  missing: null,
};

/** Zones with cuts −3, −2, …, 3: eight letters. */
export const EIGHT_ZONES: StatisticInFile = {
  name: "x",
  kind: "zones",
  letters: ["n4", "n3", "n2", "n1", "p1", "p2", "p3", "p4"],
  cuts: [-3, -2, -1, 0, 1, 2, 3].map((at) => ({ at, exact: `${at}`, owner: at < 0 ? "below" : "above" })),
  missing: null,
};

/** Completes at a trial of column `column`. */
export function oneOf(column: number, columns: number): AutomatonInFile {
  const completes = Array.from({ length: columns }, (_, c) => (c === column ? 1 : 0));
  return { states: 1, next: completes.map(() => 0), completes };
}

/** Completes at the k-th and every later trial of column `column` in a row. */
export function runOf(k: number, column: number, columns: number): AutomatonInFile {
  const next: number[] = [];
  const completes: number[] = [];
  for (let state = 0; state < k; state++) {
    for (let c = 0; c < columns; c++) {
      next.push(c === column ? Math.min(state + 1, k - 1) : 0);
      completes.push(c === column && state === k - 1 ? 1 : 0);
    }
  }
  return { states: k, next, completes };
}

type SignalSketch = Partial<ReasonsInFile["signals"][number]>;

/** Reasons over as many columns as symbols, with what is not said left out of the policy. */
export function reasonsOf(
  symbols: number,
  automata: readonly AutomatonInFile[],
  signals: readonly SignalSketch[],
  more: Partial<ReasonsInFile> = {},
): ReasonsInFile {
  return {
    columns: symbols,
    columnOf: Array.from({ length: symbols }, (_, s) => s),
    automata,
    signals: signals.map((signal) => ({
      conditions: automata.map((_, i) => ({ name: `rule${i}`, automaton: i })),
      formula: 0,
      response: "own",
      quiet: null,
      ...signal,
    })),
    clearBefore: Array.from({ length: symbols }, () => 0),
    clearAfter: [],
    block: null,
    ...more,
  };
}

/** A machine file of these parts, its tables multiplied out. */
export function fileOf(
  statistics: readonly StatisticInFile[],
  reasons: ReasonsInFile,
  missing: MachineFile["missing"] = "refuse",
): Draft {
  return {
    format: "tocsin-machine",
    version: 1,
    policy: { name: "made_by_hand", title: "For the tests", source: "ab".repeat(32) },
    id: "0123456789abcdef".repeat(4),
    statistics,
    missing,
    signals: reasons.signals.map((_, j) => `s${j}`),
    tables: multiply(reasons, missing === "break"),
    reasons,
  };
}

/** `signal s0 when 2 high`, written out: two states, low clears, the second high raises. */
export function twoInARow(missing: MachineFile["missing"] = "refuse"): Draft {
  const reasons = reasonsOf(2, [{ states: 2, next: [0, 1, 0, 1], completes: [0, 0, 0, 1] }], [{}]);
  const tables: TablesInFile = {
    states: 2,
    columns: 2,
    columnOf: [0, 1],
    next: [0, 1, 0, 0],
    raises: [0, 0, 0, 1],
    broken: missing === "break" ? [0, 0] : null,
  };
  return { ...fileOf([LOW_HIGH], reasons, missing), tables };
}

/** What is remembered of the past, as a plain object. */
type Memory = {
  readonly conditions: readonly (readonly number[])[];
  readonly rests: readonly number[];
  readonly untils: readonly number[];
  readonly afters: readonly number[];
  readonly place: number;
};

function start(reasons: ReasonsInFile): Memory {
  return {
    conditions: reasons.signals.map((signal) => signal.conditions.map(() => 0)),
    rests: reasons.signals.map(() => 0),
    untils: reasons.signals.map(() => 0),
    afters: reasons.clearAfter.map(() => 0),
    place: 0,
  };
}

function evaluate(formula: FormulaInFile, values: readonly boolean[]): boolean {
  if (typeof formula === "number") return values[formula]!;
  if ("not" in formula) return !evaluate(formula.not, values);
  if ("and" in formula) return formula.and.every((operand) => evaluate(operand, values));
  return formula.or.some((operand) => evaluate(operand, values));
}

/** Clears memory but neither quiet times nor the place in the block. */
function forget(reasons: ReasonsInFile, { rests, place }: Memory): Memory {
  return { ...start(reasons), rests, place };
}

function edge(reasons: ReasonsInFile, memory: Memory): Memory {
  if (reasons.block === null) return memory;
  const place = memory.place + 1;
  return place === reasons.block ? { ...forget(reasons, memory), place: 0 } : { ...memory, place };
}

/** One trial by the order that the language gives it. */
function trial(reasons: ReasonsInFile, before: Memory, column: number): { after: Memory; raises: number } {
  const go = (automaton: number, state: number): [number, boolean] => {
    const { next, completes } = reasons.automata[automaton]!;
    const at = state * reasons.columns + column;
    return [next[at]!, completes[at] === 1];
  };
  const from = reasons.clearBefore[column] === 1 ? start(reasons) : before;
  const raised: boolean[] = [];
  let memory: Memory = { ...from };
  for (const [j, signal] of reasons.signals.entries()) {
    const zero = signal.conditions.map(() => 0);
    raised.push(false);
    if (from.rests[j]! > 0) {
      let rest = from.rests[j]! - 1;
      let until = 0;
      if (signal.quiet !== null && "until" in signal.quiet) {
        const [next, done] = go(signal.quiet.until, from.untils[j]!);
        rest = done ? 0 : 1;
        until = done ? 0 : next;
      }
      memory = {
        ...memory,
        conditions: memory.conditions.with(j, zero),
        rests: memory.rests.with(j, rest),
        untils: memory.untils.with(j, until),
      };
    } else {
      const stepped = signal.conditions.map(({ automaton }, i) => go(automaton, from.conditions[j]![i]!));
      raised[j] = evaluate(
        signal.formula,
        stepped.map(([, done]) => done),
      );
      memory = {
        ...memory,
        conditions: memory.conditions.with(
          j,
          stepped.map(([next]) => next),
        ),
      };
    }
  }
  const afters = reasons.clearAfter.map((automaton, i) => go(automaton, from.afters[i]!));
  memory = { ...memory, afters: afters.map(([next]) => next) };
  if (reasons.signals.some((signal, j) => raised[j] && signal.response === "restart")) {
    memory = { ...start(reasons), place: memory.place };
  }
  for (const [j, signal] of reasons.signals.entries()) {
    if (!raised[j]) continue;
    const quiet = signal.quiet === null ? 0 : "for" in signal.quiet ? signal.quiet.for : 1;
    if (signal.response === "continue" && quiet === 0) continue;
    memory = {
      ...memory,
      conditions: memory.conditions.with(
        j,
        signal.conditions.map(() => 0),
      ),
      rests: memory.rests.with(j, quiet),
      untils: memory.untils.with(j, 0),
    };
  }
  const ends = afters.some(([, done]) => done);
  const after = ends ? start(reasons) : edge(reasons, memory);
  return { after, raises: raised.reduce((set, yes, j) => (yes ? set | (1 << j) : set), 0) };
}

/** A trial with a missing value, under `missing break`. */
function broken(reasons: ReasonsInFile, before: Memory): Memory {
  const rests = before.rests.map((rest, j) => {
    const { quiet } = reasons.signals[j]!;
    return rest > 0 && quiet !== null && "for" in quiet ? rest - 1 : rest;
  });
  return edge(reasons, forget(reasons, { ...before, rests }));
}

/** The reachable product of the parts. */
function multiply(reasons: ReasonsInFile, breaks: boolean): TablesInFile {
  const memories = [start(reasons)];
  const numbers = new Map([[JSON.stringify(memories[0]), 0]]);
  const numberOf = (memory: Memory): number => {
    const key = JSON.stringify(memory);
    const known = numbers.get(key);
    if (known !== undefined) return known;
    numbers.set(key, memories.length);
    memories.push(memory);
    return memories.length - 1;
  };
  const next: number[] = [];
  const raises: number[] = [];
  const brokenTo: number[] = [];
  for (let state = 0; state < memories.length; state++) {
    for (let column = 0; column < reasons.columns; column++) {
      const step = trial(reasons, memories[state]!, column);
      next.push(numberOf(step.after));
      raises.push(step.raises);
    }
    if (breaks) brokenTo.push(numberOf(broken(reasons, memories[state]!)));
  }
  return {
    states: memories.length,
    columns: reasons.columns,
    columnOf: reasons.columnOf,
    next,
    raises,
    broken: breaks ? brokenTo : null,
  };
}
