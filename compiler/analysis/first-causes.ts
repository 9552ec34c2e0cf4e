/**
 * To what the first raise is attributed. In: an attributed machine, a signal, column probabilities. Out: by
 * condition, the chance that it is among the causes of the first raise; the chances may add up to more than 1, since
 * a raise may have several causes, and to less where the signal is not certain. Each is a sum of non-negative terms,
 * right to about 1e-13 relative.
 *
 * Source: absorption probabilities, Kemeny & Snell (1960), *Finite Markov Chains*, 3.3.7.
 */
import type { AttributedMachine } from "../machine/automaton.ts";
import { longRunLaw } from "./long-run.ts";
import { type ColumnProbabilities, prepareRunLengths, type RunLengthSolver } from "./run-lengths.ts";
import type { KindOf } from "./view.ts";

type Causes = {
  readonly solver: RunLengthSolver;
  readonly kindOf: KindOf;
  /** By kind of raise less 1: the conditions it is attributed to. */
  readonly kinds: readonly (readonly string[])[];
};

const causesOf = new WeakMap<AttributedMachine, Map<number | "any", Causes>>();

/**
 * By condition, the chance that the first raise of the signal (by index, or any) is attributed to it; from the start,
 * or from the long-run state under the probabilities `before`. Null where there is no such state.
 */
export function firstCauses(
  machine: AttributedMachine,
  signal: number | "any",
  probabilities: ColumnProbabilities,
  before?: ColumnProbabilities,
): Record<string, number> | null {
  const known = causesOf.get(machine) ?? new Map<number | "any", Causes>();
  causesOf.set(machine, known);
  const causes = known.get(signal) ?? prepareCauses(machine, signal);
  known.set(signal, causes);
  const { solver, kindOf, kinds } = causes;
  const start = before && longRunLaw(machine, kindOf, before);
  if (start && !("law" in start)) return null;
  const lengths = solver.under(probabilities, start?.law);
  const isAmong = (condition: string) => (kind: number) => kinds[kind - 1]!.includes(condition);
  return Object.fromEntries(
    [...new Set(kinds.flat())].map((condition) => [condition, lengths.endsIn(isAmong(condition))]),
  );
}

/** The raises of one signal, told apart by their causes only. */
function prepareCauses(automaton: AttributedMachine, signal: number | "any"): Causes {
  const { attributions } = automaton;
  const kinds: string[][] = [];
  const numbers = new Map<string, number>();
  const kindBy = attributions.map((set) => {
    const ours = set.filter((cause) => signal === "any" || cause.signal === signal);
    const conditions = [...new Set(ours.map(({ condition }) => condition))];
    if (conditions.length === 0) return 0;
    const key = JSON.stringify(conditions);
    if (!numbers.has(key)) numbers.set(key, kinds.push(conditions));
    return numbers.get(key)!;
  });
  const kindOf: KindOf = (output) => kindBy[output] ?? 0;
  return { solver: prepareRunLengths(automaton, kindOf), kindOf, kinds };
}
