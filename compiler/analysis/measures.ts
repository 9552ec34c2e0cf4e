/** The measures of the language, at one point of a process: a value, and an interval that holds the true one. */
import Fraction from "fraction.js";
import { type Diagnostic, diagnose, type Outcome } from "../../grammar/diagnostic.ts";
import type { Span } from "../../grammar/span.ts";
import { toDouble } from "../chance/quantity.ts";
import type { Measure } from "../policy.ts";
import type { Assessor, Letters, Point, SignalChoice } from "./assessor.ts";
import { raises } from "./assessor.ts";
import { longRunLaw } from "./long-run.ts";
import { countRaises, raiseRate } from "./raise-counts.ts";
import type { RunLengths, StateLaw } from "./run-lengths.ts";

export type Measured = {
  readonly value: number;
  readonly low: number;
  readonly high: number;
  /** Why the value is infinite or undefined, in words; else null. */
  readonly reason: string | null;
};

/** Relative accuracy of the standard deviation, as the solver states it. */
const DEVIATION_ACCURACY = 1e-10;

const HALF = new Fraction(1n, 2n);

/** The value of a measure; `point` is null for `states`. */
export function measureAt(assessor: Assessor, measure: Measure, point: Point | null): Outcome<Measured> {
  if (measure.name === "states" || !point || measure.signal === null)
    return { value: exactly(assessor.machine.states), diagnostics: [] };
  if (measure.name === "arl_quantile")
    return failed(
      diagnose("measure_not_built", measure.span, "`arl_quantile` is not built in this version", {
        hint: "measure `arl` of a process without `estimated` meanwhile",
      }),
    );
  const letters = assessor.lettersAt(point, measure.span);
  if (!letters.value) return { diagnostics: letters.diagnostics };
  const start = startOf(assessor, measure, measure.signal);
  if (start.diagnostics.length > 0) return { diagnostics: start.diagnostics };
  return {
    value: measureFrom(assessor, measure, measure.signal, letters.value, start.value),
    diagnostics: [],
  };
}

function failed(diagnostic: Diagnostic): Outcome<never> {
  return { diagnostics: [diagnostic] };
}

/** Where the run begins: the start, or the long-run state under the process after `after`. */
function startOf(assessor: Assessor, measure: Measure, signal: SignalChoice): Outcome<StateLaw> {
  const { after } = measure;
  if (!after?.values) return { diagnostics: [] };
  const letters = assessor.lettersAt({ process: after.process, values: after.values }, after.span);
  if (!letters.value) return { diagnostics: letters.diagnostics };
  return longRunStart(assessor, signal, letters.value, after.span);
}

/** The law of the memory in the long run, given that the signal has not been raised. */
export function longRunStart(
  assessor: Assessor,
  signal: SignalChoice,
  letters: Letters,
  span: Span,
): Outcome<StateLaw> {
  const { machine } = assessor;
  const columns = assessor.columnsAt(letters, machine.columnOf, machine.columns);
  const found = longRunLaw(machine, raises(signal), columns);
  return "law" in found
    ? { value: found.law, diagnostics: [] }
    : failed(
        diagnose("measure_undefined", span, `there is no long-run state to begin from: ${found.reason}`, {
          hint: "measure it from the start, without `after`",
        }),
      );
}

function measureFrom(
  assessor: Assessor,
  measure: Measure,
  signal: SignalChoice,
  letters: Letters,
  start: StateLaw | undefined,
): Measured {
  const lengths = () => assessor.runLengthsAt(signal, letters, start);
  const { machine } = assessor;
  const columns = () => assessor.columnsAt(letters, machine.columnOf, machine.columns);
  const argument = measure.argument ? toDouble(measure.argument) : Number.NaN;
  switch (measure.name) {
    case "arl":
      return meanOf(lengths());
    case "sdrl":
      return around(lengths().standardDeviation(), DEVIATION_ACCURACY, infinityOf(lengths()));
    case "mrl":
      return quantileOf(lengths(), HALF);
    case "quantile":
      return quantileOf(lengths(), measure.argument?.value ?? HALF);
    case "signalled":
      return { ...lengths().signalled(argument), reason: null };
    case "count":
      return { ...countRaises(machine, raises(signal), columns(), argument, start), reason: null };
    case "rate":
      return { ...raiseRate(machine, raises(signal), columns(), start), reason: null };
    case "states":
    case "arl_quantile":
      return exactly(machine.states);
    default:
      return measure.name satisfies never;
  }
}

function meanOf(lengths: RunLengths): Measured {
  const bound = lengths.relativeErrorBound();
  return around(lengths.mean(), bound ?? Number.POSITIVE_INFINITY, infinityOf(lengths));
}

function quantileOf(lengths: RunLengths, q: Fraction): Measured {
  const { low, high } = lengths.quantile(q);
  const reason = Number.isFinite(high) ? null : infinityOf(lengths);
  return { value: high, low, high, reason };
}

function exactly(value: number): Measured {
  return { value, low: value, high: value, reason: null };
}

function around(value: number, relative: number, reason: string | null): Measured {
  if (!Number.isFinite(value)) return { value, low: value, high: value, reason };
  return { value, low: value * Math.max(0, 1 - relative), high: value * (1 + relative), reason: null };
}

/** Why a mean has no finite number: the signal is not certain, or the number is too large. */
export function infinityOf(lengths: RunLengths): string | null {
  const ever = lengths.everProbability();
  if (ever === 0) return "it is never raised under this process";
  if (lengths.neverProbability() > 0)
    return `it is not certain to be raised: with chance ${Number(ever.toPrecision(6))} it ever is`;
  return Number.isFinite(lengths.mean())
    ? null
    : "it is certain, but takes more trials than a double can hold (1.8e308)";
}
