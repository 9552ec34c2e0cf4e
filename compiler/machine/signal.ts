/**
 * One signal as an automaton: its condition, the clearing of its own memory when it is raised, and its quiet time.
 *
 * Output 0 is no raise; any other is an entry of `attributions`: which parts of the condition the raise is attributed to
 * (always entry 1 when attribution is not asked for). Behind the columns of the policy stand two inputs that carry no
 * letter: a broken trial (`broken`), which clears memory and is one trial of a quiet time, and the edge of a block
 * (`edge`), which clears memory between two trials. State 0 is the start; what other signals' restarts do is return here.
 */
import type { Signal } from "../policy.ts";
import type { Automaton } from "./automaton.ts";
import { demandWithin } from "./budget.ts";
import { type Compiler, componentOf, type Parts, partsOf, stepParts } from "./component.ts";
import { explore } from "./explore.ts";
import { attributedParts, type Formula, formulaOf, holds, nameOf } from "./formula.ts";
import { minimise } from "./minimise.ts";
import { numberOf } from "./numbering.ts";

export type SignalAutomaton = {
  readonly automaton: Automaton;
  readonly broken: number;
  readonly edge: number;
  /** By output: the names of the conditions a raise is attributed to; entry 0 is no raise. */
  readonly attributions: readonly (readonly string[])[];
};

/** Compiles a signal; with `attributed` raises are told apart by what they are attributed to. */
export function compileSignal(compiler: Compiler, signal: Signal, attributed: boolean): SignalAutomaton {
  const formula = formulaOf(signal.condition, !attributed);
  const parts = partsOf(compiler, formula);
  const raise = attributed ? attributor(formula, parts) : { output: () => 1, attributions: [[], []] };
  compiler.culprit = { text: `signal ${signal.name}`, span: signal.span };
  if (signal.quiet?.kind === "for") demandWithin(signal.quiet.count, compiler.mostStates);
  const automaton = minimise(
    explore(succession(compiler, signal, formula, parts, raise.output), compiler.mostStates),
  );
  compiler.culprit = null;
  const broken = compiler.columns.count;
  return { automaton, broken, edge: broken + 1, attributions: raise.attributions };
}

/** Numbers the sets of parts that raises are attributed to, as they are met. */
function attributor(formula: Formula, parts: Parts): { output: () => number; attributions: string[][] } {
  const attributions: string[][] = [[]];
  const numbers = new Map([["", 0]]);
  const output = () => {
    const attributedTo = attributedParts(formula, parts.completes);
    const number = numberOf(numbers, attributedTo.join(" "));
    attributions[number] ??= attributedTo.map((part) => nameOf(formula, part));
    return number;
  };
  return { output, attributions };
}

/**
 * State: `into[0]` is 0 while the signal watches; during `quiet for` the trials that are left; during `quiet until` the
 * state of the until-condition plus one. Then the states of the parts.
 */
function succession(
  compiler: Compiler,
  signal: Signal,
  formula: Formula,
  parts: Parts,
  output: () => number,
) {
  const columns = compiler.columns.count;
  const until = signal.quiet?.kind === "until" ? componentOf(compiler, signal.quiet.condition) : null;
  const atRaise = signal.quiet === null ? 0 : signal.quiet.kind === "for" ? signal.quiet.count : 1;
  const keeps = signal.response === "continue" && signal.quiet === null;
  const watch = (pool: Int32Array, at: number, column: number, into: Int32Array): number => {
    if (column >= columns) return 0;
    stepParts(parts, pool, at + 1, column, into, 1);
    if (!holds(formula, parts.completes)) return 0;
    if (!keeps) into.fill(0);
    into[0] = atRaise;
    return output();
  };
  const rest = (quiet: number, column: number): number => {
    if (column > columns) return until ? 1 : quiet;
    if (!until) return quiet - 1;
    if (column === columns) return 1;
    const index = (quiet - 1) * columns + column;
    return until.output[index] === 1 ? 0 : (until.next[index] as number) + 1;
  };
  return {
    width: 1 + parts.automata.length,
    columns: columns + 2,
    step: (pool: Int32Array, at: number, column: number, into: Int32Array): number => {
      into.fill(0);
      const quiet = pool[at] as number;
      if (quiet === 0) return watch(pool, at, column, into);
      into[0] = rest(quiet, column);
      return 0;
    },
  };
}
