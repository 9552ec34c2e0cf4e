/**
 * The bridge from a policy to the solvers: signals become predicates on outputs, processes become column probabilities.
 * Everything that is costly and can serve twice (compiled eliminations, letter probabilities, run lengths at one point) is
 * kept, since a sweep asks for many quantities at many points.
 */
import { type Diagnostic, diagnose, type Outcome } from "../../grammar/diagnostic.ts";
import type { Span } from "../../grammar/span.ts";
import { columnProbabilities } from "../chance/column-probabilities.ts";
import { letterProbabilities } from "../chance/letter-probabilities.ts";
import { exact } from "../chance/quantity.ts";
import { processAt } from "../check/process-at.ts";
import type { AttributedMachine, Machine } from "../machine/automaton.ts";
import { buildAttributedMachine } from "../machine/build.ts";
import type { LetterModel, Policy, ProcessUse, Quantity } from "../policy.ts";
import { exactColumns, exactLetters } from "./exact-columns.ts";
import {
  type ColumnProbabilities,
  prepareRunLengths,
  type RunLengthSolver,
  type RunLengths,
  type StateLaw,
} from "./run-lengths.ts";

/** A signal by its index, or any of them. */
export type SignalChoice = number | "any";

/** A process at one value of each of its parameters. */
export type Point = { readonly process: number; readonly values: readonly Quantity[] };

/** The letters' probabilities at a point: by alphabet, then by letter; exactly too where the model states them so. */
export type Letters = readonly ColumnProbabilities[];

export type Assessor = {
  readonly policy: Policy;
  readonly machine: Machine;
  /** The letters' probabilities at a point, or why there are none; `span` is where the question stands. */
  readonly lettersAt: (point: Point, span: Span) => Outcome<Letters>;
  /** By column of the given `columnOf`. */
  readonly columnsAt: (letters: Letters, columnOf: Int32Array, columns: number) => ColumnProbabilities;
  readonly solverOf: (signal: SignalChoice) => RunLengthSolver;
  /** The run lengths of a signal at a point, from the start or from a law over the states. */
  readonly runLengthsAt: (signal: SignalChoice, letters: Letters, start?: StateLaw) => RunLengths;
  /** The machine that tells attributions apart, or null when it exceeds the state budget. */
  readonly attributed: () => AttributedMachine | null;
};

/** Whether an output raises the signal. */
export function raises(signal: SignalChoice): (output: number) => boolean {
  return signal === "any" ? (output) => output !== 0 : (output) => ((output >>> signal) & 1) === 1;
}

/** The points of a process as a measure names it: the one it gives, or all of its range. */
export function pointsOf(policy: Policy, use: ProcessUse): Point[] {
  if (use.values) return [{ process: use.process, values: use.values }];
  const parameters = policy.processes[use.process]?.parameters ?? [];
  const grid = parameters.reduce<(readonly Quantity[])[]>(
    (points, { values }) => points.flatMap((point) => values.map((value) => [...point, value])),
    [[]],
  );
  return grid.map((values) => ({ process: use.process, values }));
}

export function makeAssessor(policy: Policy, machine: Machine, mostStates: number): Assessor {
  const solvers = new Map<SignalChoice, RunLengthSolver>();
  const letters = new Map<string, Outcome<Letters>>();
  const columns = new WeakMap<Letters, Map<Int32Array, ColumnProbabilities>>();
  const lengths = new WeakMap<Letters, Map<SignalChoice, RunLengths>>();
  let attributed: AttributedMachine | null | undefined;

  const solverOf = (signal: SignalChoice) =>
    kept(solvers, signal, () => prepareRunLengths(machine, raises(signal)));
  const columnsAt = (at: Letters, columnOf: Int32Array, count: number) =>
    kept(
      kept(columns, at, () => new Map<Int32Array, ColumnProbabilities>()),
      columnOf,
      () => ({
        ...columnProbabilities(policy.alphabets, columnOf, count, at),
        exact: exactColumns(
          at.map((law) => law.exact ?? null),
          columnOf,
          count,
        ),
      }),
    );
  return {
    policy,
    machine,
    lettersAt: (point, span) => {
      const key = `${point.process} ${point.values.map(({ value }) => value.toFraction()).join(" ")}`;
      return kept(letters, key, () => findLetters(policy, point, span));
    },
    columnsAt,
    solverOf,
    runLengthsAt: (signal, at, start) => {
      const find = () => solverOf(signal).under(columnsAt(at, machine.columnOf, machine.columns), start);
      if (start) return find();
      return kept(
        kept(lengths, at, () => new Map<SignalChoice, RunLengths>()),
        signal,
        find,
      );
    },
    attributed: () => {
      attributed ??= buildAttributedMachine(policy, { mostStates }).value ?? null;
      return attributed;
    },
  };
}

/** The value of a key, found when first asked for. */
function kept<K, V>(
  map: { get: (key: K) => V | undefined; set: (key: K, value: V) => unknown },
  key: K,
  find: () => V,
): V {
  const known = map.get(key);
  if (known !== undefined) return known;
  const value = find();
  map.set(key, value);
  return value;
}

function findLetters(policy: Policy, point: Point, span: Span): Outcome<Letters> {
  const process = policy.processes[point.process];
  if (!process) return { diagnostics: [] };
  const { value: models, diagnostics } = processAt(policy, process, point.values);
  if (!models) return { diagnostics };
  const letters: ColumnProbabilities[] = [];
  const refused: Diagnostic[] = [];
  policy.alphabets.forEach((alphabet, index) => {
    const model = models[index] ?? indifferent(alphabet.letters.length);
    const found = letterProbabilities(alphabet, model);
    if ("unbuilt" in found)
      refused.push(
        diagnose(
          "measure_not_built",
          span,
          `"${process.name}" cannot be measured yet: run lengths under \`${found.unbuilt}\` are not built in this version`,
          {
            hint: "measure another process meanwhile",
            data: { process: process.name, model: found.unbuilt },
          },
        ),
      );
    else letters.push({ ...found, exact: exactLetters(model) });
  });
  return refused.length > 0 ? { diagnostics: refused } : { value: letters, diagnostics: [] };
}

/** The law of an alphabet that a process leaves out: no signal reads it, so any law will do. */
function indifferent(letters: number): LetterModel {
  return {
    kind: "mass",
    probabilities: Array.from({ length: letters }, (_, letter) => exact(letter === 0 ? 1n : 0n)),
  };
}
