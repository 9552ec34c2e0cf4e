/**
 * To what the first raise is attributed. In: an attributed machine, a signal, column probabilities. Out: by condition, the
 * chance that it is among the causes of the first raise; the chances may add up to more than 1, since a raise may have several
 * causes, and to less where the signal is not certain. Each is a sum of non-negative terms, right to about 1e-13 relative.
 *
 * Source: absorption probabilities, Kemeny & Snell (1960), *Finite Markov Chains*, 3.3.7.
 */
import type { AttributedMachine } from "../machine/automaton.ts";
import { type ColumnProbabilities, prepareRunLengths, type RunLengthSolver } from "./run-lengths.ts";

type Causes = {
  readonly solver: RunLengthSolver;
  /** By kind of raise less 1: the conditions it is attributed to. */
  readonly kinds: readonly (readonly string[])[];
};

const causesOf = new WeakMap<AttributedMachine, Map<number | "any", Causes>>();

/** By condition, the chance that the first raise of the signal (by index, or any) is attributed to it. */
export function firstCauses(
  machine: AttributedMachine,
  signal: number | "any",
  probabilities: ColumnProbabilities,
): Record<string, number> {
  const known = causesOf.get(machine) ?? new Map<number | "any", Causes>();
  causesOf.set(machine, known);
  const causes = known.get(signal) ?? prepareCauses(machine, signal);
  known.set(signal, causes);
  const { solver, kinds } = causes;
  const lengths = solver.under(probabilities);
  const isAmong = (condition: string) => (kind: number) => kinds[kind - 1]!.includes(condition);
  return Object.fromEntries(
    [...new Set(kinds.flat())].map((condition) => [condition, lengths.endsIn(isAmong(condition))]),
  );
}

/** The raises of one signal, told apart by their causes only. */
function prepareCauses({ attributions, ...automaton }: AttributedMachine, signal: number | "any"): Causes {
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
  return { solver: prepareRunLengths(automaton, (output) => kindBy[output] ?? 0), kinds };
}
