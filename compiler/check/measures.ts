/**
 * Measures and the processes they name, checked for form.
 * In: the tree of a measure. Out: indices of signal and process, the values of parameters and the argument, or null once
 * the reason was reported. Whether a requirement is true is told after the analysis.
 */

import { spanText } from "../../grammar/span.ts";
import { nearest } from "../../grammar/spelling.ts";
import type { MeasureTree, Name, ProcessAt } from "../../grammar/tree.ts";
import { compareQuantities, exact } from "../chance/quantity.ts";
import type { Measure, MeasureName, Process, ProcessUse, Quantity } from "../policy.ts";
import { MOST_TRIALS } from "./counts.ts";
import { evaluate } from "./expressions.ts";
import { countOf, showNumber } from "./figures.ts";
import { resolve } from "./scope.ts";
import { shorten, showValue, type Values } from "./values.ts";

/** What stands after signal and process: nothing, a probability, or a number of trials. */
const argumentOf: ReadonlyMap<string, "none" | "share" | "trials" | "alone"> = new Map<
  MeasureName,
  "none" | "share" | "trials" | "alone"
>([
  ["arl", "none"],
  ["sdrl", "none"],
  ["mrl", "none"],
  ["rate", "none"],
  ["quantile", "share"],
  ["arl_quantile", "share"],
  ["signalled", "trials"],
  ["count", "trials"],
  ["states", "alone"],
]);

/** By index; null for one whose fault was reported. */
export type Processes = readonly (Process | null)[];

/** Checks a measure. */
export function checkMeasure(tree: MeasureTree, processes: Processes, values: Values): Measure | null {
  const name = tree.name.text;
  const argument = argumentOf.get(name);
  if (argument === undefined) return unknownMeasure(tree.name, values);
  const text = spanText(tree.span).replace(/\s+/g, " ");
  const bare = { name: name as MeasureName, text, span: tree.span };
  if (argument === "alone") {
    if (tree.of !== undefined) return wrongForm(tree, "stands alone", values);
    return { ...bare, signal: null, process: null, after: null, argument: null };
  }
  if (tree.of === undefined) return wrongForm(tree, `is written \`${formOf(name, argument)}\``, values);
  const signal = signalIndex(tree.of.signal, "a measure names a signal, or `any`", values);
  const process = checkProcessUse(tree.of.process.at, processes, values);
  const after = tree.of.process.after && checkFixedProcess(tree.of.process.after, "after", processes, values);
  const fits = argument === "none" ? tree.of.argument === undefined : tree.of.argument !== undefined;
  if (!fits) return wrongForm(tree, `is written \`${formOf(name, argument)}\``, values);
  const value = tree.of.argument && checkArgument(tree.of.argument, argument, name, values);
  if (signal === null || process === null || after === null || value === null) return null;
  if (name === "arl_quantile" && !hasSamples(processes[process.process]))
    return reportNoSamples(tree, values);
  return { ...bare, signal, process, after: after ?? null, argument: value ?? null };
}

function formOf(name: string, argument: "none" | "share" | "trials" | "alone"): string {
  const last = { none: "", share: ", q", trials: ", n", alone: "" }[argument];
  return `${name}(SIGNAL, PROCESS${last})`;
}

function unknownMeasure(name: Name, values: Values): null {
  const known = [...argumentOf.keys()];
  const near = nearest(name.text, known);
  const hint = near ? `did you mean \`${near}\`?` : `the measures are ${known.join(", ")}`;
  values.scope.report("unknown_measure", name.span, `there is no measure "${name.text}"`, {
    hint,
    data: { name: name.text },
  });
  return null;
}

function wrongForm(tree: MeasureTree, form: string, values: Values): null {
  values.scope.report(
    "wrong_operands",
    tree.span,
    `the measure \`${tree.name.text}\` ${form}, not ${shorten(tree)}`,
    {
      data: { measure: tree.name.text },
    },
  );
  return null;
}

/** The index of a signal, or "any". */
export function signalIndex(name: Name, place: string, values: Values): number | "any" | null {
  if (name.text === "any") return "any";
  return resolve(values.scope, name, ["signal"], place)?.index ?? null;
}

/** A process with values for its parameters, or without any for its whole range. */
export function checkProcessUse(at: ProcessAt, processes: Processes, values: Values): ProcessUse | null {
  const entity = resolve(values.scope, at.name, ["process"], "a process stands here");
  const operands = at.operands.map((operand) => evaluate(operand, values));
  const process = entity === null ? null : processes[entity.index];
  if (entity === null || process === null || process === undefined) return null;
  if (operands.length === 0 && process.parameters.length > 0) {
    return { process: entity.index, values: null, span: at.span };
  }
  if (operands.length !== process.parameters.length) {
    const names = process.parameters.map((parameter) => parameter.name).join(", ");
    const due =
      names === "" ? "no parameters" : `${countOf(process.parameters.length, "parameter")} (${names})`;
    values.scope.report(
      "wrong_operands",
      at.span,
      `process "${process.name}" has ${due}, and ${shorten(at)} gives ${operands.length}`,
      {
        related: [{ span: process.span, message: `"${process.name}" is declared here` }],
        data: { process: process.name, operands: operands.length },
      },
    );
    return null;
  }
  if (operands.includes(null)) return null;
  return { process: entity.index, values: operands as readonly Quantity[], span: at.span };
}

/** The process after `after` or `under`: at one value, not at a range. */
export function checkFixedProcess(
  at: ProcessAt,
  word: "after" | "under",
  processes: Processes,
  values: Values,
): ProcessUse | null {
  const use = checkProcessUse(at, processes, values);
  if (use === null || use.values !== null) return use;
  const parameters = processes[use.process]?.parameters ?? [];
  const example = parameters.map(({ values: range }) => (range[0] ? showNumber(range[0]) : "…")).join(", ");
  values.scope.report(
    "wrong_operands",
    at.span,
    `after \`${word}\` stands one process, and "${at.name.text}" is a range of them`,
    {
      hint: `say at which value: \`${word} ${at.name.text}(${example})\``,
      data: { process: at.name.text },
    },
  );
  return null;
}

type Argument = NonNullable<NonNullable<MeasureTree["of"]>["argument"]>;

function checkArgument(tree: Argument, argument: string, measure: string, values: Values): Quantity | null {
  const value = evaluate(tree, values);
  if (value === null) return null;
  if (argument === "share") {
    const isInside =
      compareQuantities(value, exact(0n)) === "greater" && compareQuantities(value, exact(1n)) === "less";
    if (isInside) return value;
    values.scope.report(
      "number_domain",
      tree.span,
      `the share q of \`${measure}\` lies between 0 and 1, not at ${showValue(tree, value)}`,
      {
        data: { measure, value: showNumber(value) },
      },
    );
    return null;
  }
  const most = exact(BigInt(MOST_TRIALS));
  if (value.radius !== 0 || value.value.d !== 1n) {
    values.scope.report(
      "count_not_whole",
      tree.span,
      `the number of trials of \`${measure}\` is whole, not ${showValue(tree, value)}`,
      {
        data: { measure, value: showNumber(value) },
      },
    );
    return null;
  }
  if (compareQuantities(value, exact(1n)) !== "less" && compareQuantities(value, most) !== "greater")
    return value;
  const limit = MOST_TRIALS.toLocaleString("en-US");
  values.scope.report(
    "count_out_of_range",
    tree.span,
    `the number of trials of \`${measure}\` is from 1 to ${limit}, not ${showValue(tree, value)}`,
    {
      data: { measure, value: showNumber(value) },
    },
  );
  return null;
}

/** Whether the run lengths of a process hang on a sample. */
function hasSamples(process: Process | null | undefined): boolean {
  return (process?.laws ?? []).some((law) => {
    if (law?.model.kind !== "distribution") return false;
    return law.model.estimated !== undefined || law.model.name.text === "exceedance";
  });
}

function reportNoSamples(tree: MeasureTree, values: Values): null {
  const process = tree.of?.process.at.name.text ?? "";
  const message = `\`arl_quantile\` ranges over the samples that might have been, and process "${process}" has no sample`;
  values.scope.report("measure_undefined", tree.span, message, {
    hint: "it is for a law `… estimated from m subgroups of n` or `exceedance(…)`; for the run length itself use `quantile`",
    data: { process },
  });
  return null;
}
