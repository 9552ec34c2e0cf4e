/**
 * To what the first raise is attributed. In: an attributed machine, a signal, column probabilities. Out: by condition, the
 * chance that it is among the causes of the first raise; the chances may add up to more than 1, since a raise may have several
 * causes, and to less where the signal is not certain. Each is a sum of non-negative terms, right to about 1e-13 relative.
 *
 * Source: absorption probabilities, Kemeny & Snell (1960), *Finite Markov Chains*, 3.3.7.
 */
import type { AttributedMachine } from "../machine/automaton.ts";
import { type ColumnProbabilities, prepareRunLengths, type RunLengthSolver } from "./run-lengths.ts";

const solversOf = new WeakMap<AttributedMachine, Map<number | "any", RunLengthSolver>>();

/** By condition, the chance that the first raise of the signal (by index, or any) is attributed to it. */
export function firstCauses(
  machine: AttributedMachine,
  signal: number | "any",
  probabilities: ColumnProbabilities,
): Record<string, number> {
  const { attributions } = machine;
  const isOurs = (cause: { readonly signal: number }): boolean => signal === "any" || cause.signal === signal;
  const solvers = solversOf.get(machine) ?? new Map<number | "any", RunLengthSolver>();
  solversOf.set(machine, solvers);
  const solver =
    solvers.get(signal) ??
    prepareRunLengths(machine, (output) => attributions[output]?.some(isOurs) ?? false);
  solvers.set(signal, solver);
  const lengths = solver.under(probabilities);
  const conditions = new Set(
    attributions.flatMap((set) => set.filter(isOurs).map(({ condition }) => condition)),
  );
  return Object.fromEntries(
    [...conditions].map((condition) => [
      condition,
      lengths.endsIn(
        (output) =>
          attributions[output]?.some((cause) => isOurs(cause) && cause.condition === condition) ?? false,
      ),
    ]),
  );
}
