/**
 * The assessment of a policy: every signal, and any of them, under every process at every value of its range. A row holds
 * all there is to know of one run length; nothing is rounded here.
 */
import Fraction from "fraction.js";
import { type Diagnostic, hasErrors, type Outcome } from "../../grammar/diagnostic.ts";
import type { Span } from "../../grammar/span.ts";
import {
  type Assessor,
  type Letters,
  type Point,
  pointsOf,
  raises,
  type SignalChoice,
} from "../analysis/assessor.ts";
import { firstCauses } from "../analysis/first-causes.ts";
import { infinityOf, longRunStart } from "../analysis/measures.ts";
import { raiseRate } from "../analysis/raise-counts.ts";
import type { RunLengths, StateLaw } from "../analysis/run-lengths.ts";
import { toDouble } from "../chance/quantity.ts";
import { showNumber } from "../check/figures.ts";
import { formulaOf, nameOf as partName } from "../machine/formula.ts";
import type { Policy, ProcessUse } from "../policy.ts";

/** Shares of the run-length law that a row lists. */
const SHARES = ["0.05", "0.25", "0.5", "0.75", "0.95"] as const;
/** Numbers of trials within which a row gives the chance of a signal, unless others are asked for. */
const WITHIN = [10, 100] as const;

export type Row = {
  readonly signal: string;
  readonly process: string;
  readonly at: Readonly<Record<string, number>>;
  /** The process of the long-run state from which the run begins; null from the start. */
  readonly after: string | null;
  /** Mean run length in trials; null where it is infinite. */
  readonly arl: number | null;
  /** Why the mean is infinite. */
  readonly reason: string | null;
  /** The chance that the signal is ever raised. */
  readonly ever: number;
  /** Proven bound of the relative error of `arl`. */
  readonly relativeErrorBound: number | null;
  readonly sdrl: number | null;
  readonly mrl: number | null;
  readonly quantiles: Readonly<Record<string, number | null>>;
  readonly signalled: Readonly<Record<string, number>>;
  /** Long-run share of trials that raise the signal. */
  readonly rate: number;
  /** By rule: the chance that the first raise is attributed to it; null where the machine that tells is too large. */
  readonly first: Readonly<Record<string, number>> | null;
};

/** The letters' chances under one process at one value of its parameters. */
export type LetterRow = {
  readonly process: string;
  readonly at: Readonly<Record<string, number>>;
  readonly letters: Readonly<Record<string, Readonly<Record<string, number>>>>;
};

export type Assessment = { readonly letters: readonly LetterRow[]; readonly runs: readonly Row[] };

export type Questions = {
  /** Empty for every process over its whole range. */
  readonly processes: readonly ProcessUse[];
  readonly after: ProcessUse | null;
  /** Empty for every signal, and any. */
  readonly signals: readonly SignalChoice[];
  /** Numbers of trials, besides 10 and 100. */
  readonly by: readonly number[];
};

/** Assesses a policy; a process that cannot be measured is told once and left out. */
export function assess(assessor: Assessor, questions: Questions): Outcome<Assessment> {
  const { policy } = assessor;
  const uses = questions.processes.length > 0 ? questions.processes : policy.processes.map(wholeRange);
  const signals = questions.signals.length > 0 ? questions.signals : allSignals(policy);
  const diagnostics: Diagnostic[] = [];
  const letters: LetterRow[] = [];
  const runs: Row[] = [];
  const starts = new Map<SignalChoice, StateLaw>();
  let before: Letters | null = null;
  if (questions.after) {
    for (const signal of signals) {
      const start = startFor(assessor, signal, questions.after);
      if (!start.value) return { diagnostics: start.diagnostics };
      starts.set(signal, start.value.law);
      before = start.value.letters;
    }
  }
  for (const use of uses) {
    for (const point of pointsOf(policy, use)) {
      const found = assessor.lettersAt(point, use.span);
      if (!found.value) {
        diagnostics.push(...found.diagnostics);
        break;
      }
      letters.push(letterRow(policy, point, found.value));
      const after = questions.after ? processWords(policy, questions.after) : null;
      for (const signal of signals)
        runs.push(
          makeRow(assessor, {
            signal,
            point,
            letters: found.value,
            after,
            start: starts.get(signal),
            before,
            by: questions.by,
          }),
        );
    }
  }
  return hasErrors(diagnostics) && runs.length === 0
    ? { diagnostics }
    : { value: { letters, runs }, diagnostics };
}

/** A process over its whole range, as a measure would name it. */
function wholeRange(process: { readonly span: Span }, index: number): ProcessUse {
  return { process: index, values: null, span: process.span };
}

/** Every signal, and any of them where there are several or one: `any` is always asked. */
function allSignals(policy: Policy): SignalChoice[] {
  return [...policy.signals.keys(), "any"];
}

function startFor(
  assessor: Assessor,
  signal: SignalChoice,
  after: ProcessUse,
): Outcome<{ letters: Letters; law: StateLaw }> {
  const letters = assessor.lettersAt({ process: after.process, values: after.values ?? [] }, after.span);
  if (!letters.value) return { diagnostics: letters.diagnostics };
  const { value: law, diagnostics } = longRunStart(assessor, signal, letters.value, after.span);
  return law ? { value: { letters: letters.value, law }, diagnostics } : { diagnostics };
}

type RowQuestion = {
  readonly signal: SignalChoice;
  readonly point: Point;
  readonly letters: Letters;
  readonly after: string | null;
  readonly start: StateLaw | undefined;
  /** The letters' chances of the process that `start` comes from. */
  readonly before: Letters | null;
  readonly by: readonly number[];
};

function makeRow(assessor: Assessor, question: RowQuestion): Row {
  const { policy, machine } = assessor;
  const { signal, point, letters, after, start } = question;
  const lengths = assessor.runLengthsAt(signal, letters, start);
  const columns = assessor.columnsAt(letters, machine.columnOf, machine.columns);
  const mean = lengths.mean();
  // Where rounding leaves open whether the share is just reached, it is taken as reached.
  const quantile = (share: string) => finite(lengths.quantile(new Fraction(share)).low);
  return {
    signal: nameOf(policy, signal),
    process: policy.processes[point.process]?.name ?? "",
    at: valuesOf(policy, point),
    after,
    arl: finite(mean),
    reason: Number.isFinite(mean) ? null : infinityOf(lengths),
    ever: lengths.everProbability(),
    relativeErrorBound: lengths.relativeErrorBound(),
    sdrl: finite(lengths.standardDeviation()),
    mrl: quantile("0.5"),
    quantiles: Object.fromEntries(SHARES.map((share) => [share, quantile(share)])),
    signalled: withinTrials(lengths, question.by),
    rate: raiseRate(machine, raises(signal), columns, start).value,
    first: firstOf(assessor, question),
  };
}

function withinTrials(lengths: RunLengths, by: readonly number[]): Record<string, number> {
  const trials = [...new Set([...WITHIN, ...by])].sort((a, b) => a - b);
  return Object.fromEntries(trials.map((n) => [`${n}`, lengths.signalled(n).value]));
}

/** The chance of each rule to be a cause of the first raise. */
function firstOf(assessor: Assessor, question: RowQuestion): Record<string, number> | null {
  const { signal, letters, before } = question;
  const machine = assessor.attributed();
  if (!machine) return null;
  const columnsAt = (at: Letters) => assessor.columnsAt(at, machine.columnOf, machine.columns);
  const found = firstCauses(machine, signal, columnsAt(letters), before ? columnsAt(before) : undefined);
  if (!found) return null;
  const names = conditionNames(assessor.policy, signal).filter((name) => name in found);
  return Object.fromEntries(names.map((name) => [name, found[name] ?? 0]));
}

/** The conditions a raise can be attributed to, in the order of the text. */
function conditionNames(policy: Policy, signal: SignalChoice): string[] {
  const signals = signal === "any" ? policy.signals : policy.signals.slice(signal, signal + 1);
  return signals.flatMap(({ condition }) => {
    const formula = formulaOf(condition, false);
    return formula.parts.map((_, part) => partName(formula, part));
  });
}

/** The name of a signal, or any. */
function nameOf(policy: Policy, signal: SignalChoice): string {
  return signal === "any" ? "any" : (policy.signals[signal]?.name ?? "");
}

function finite(value: number): number | null {
  return Number.isFinite(value) ? value : null;
}

function valuesOf(policy: Policy, point: Point): Record<string, number> {
  const parameters = policy.processes[point.process]?.parameters ?? [];
  return Object.fromEntries(
    parameters.map(({ name }, index) => [
      name,
      point.values[index] ? toDouble(point.values[index]) : Number.NaN,
    ]),
  );
}

function letterRow(policy: Policy, point: Point, letters: Letters): LetterRow {
  return {
    process: policy.processes[point.process]?.name ?? "",
    at: valuesOf(policy, point),
    letters: Object.fromEntries(
      policy.alphabets.map((alphabet, index) => [
        alphabet.name,
        Object.fromEntries(
          alphabet.letters.map(({ name }, letter) => [name, letters[index]?.high[letter] ?? 0]),
        ),
      ]),
    ),
  };
}

/** `shifted(1.5)`. */
function processWords(policy: Policy, use: ProcessUse): string {
  const name = policy.processes[use.process]?.name ?? "";
  if (!use.values || use.values.length === 0) return name;
  return `${name}(${use.values.map((value) => showNumber(value, 6)).join(", ")})`;
}
