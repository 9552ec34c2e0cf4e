/** Processes, requirements and expectations as pieces of canonical text. */
import type { Piece } from "./layout.ts";
import { type Pieces, putCount, putExpression, putName, putOperands } from "./print-expression.ts";
import type {
  Declaration,
  Law,
  MassTree,
  MeasureTree,
  ModelTree,
  Name,
  ProcessAt,
  Sweep,
  TrialTree,
} from "./tree.ts";

type Of<Kind extends Declaration["kind"]> = Extract<Declaration, { kind: Kind }>;

export function putProcess(out: Pieces, { name, sweeps, laws }: Of<"process">): void {
  putName(out, name);
  if (sweeps.length > 0) {
    out.push({ text: "(", tight: true });
    for (const [i, sweep] of sweeps.entries()) putSweep(out, sweep, i);
    out.push({ text: ")", tight: true });
  }
  out.push({ text: ":", tight: true });
  for (const [i, law] of laws.entries()) {
    if (i > 0) out.push({ text: ",", tight: true });
    putLaw(out, law, i === 0 ? { column: "single", breakLevel: 1 } : { breakLevel: 1 });
  }
}

function putSweep(out: Pieces, sweep: Sweep, index: number): void {
  if (index > 0) out.push({ text: ",", tight: true });
  putName(out, sweep.name, index > 0 ? { breakLevel: 2 } : { tight: true });
  out.push({ text: "from" });
  putExpression(out, sweep.from);
  out.push({ text: "to" });
  putExpression(out, sweep.to);
  out.push({ text: "by" });
  putExpression(out, sweep.by);
}

function putLaw(out: Pieces, law: Law, edge: Partial<Piece>): void {
  putName(out, law.statistic, edge);
  out.push({ text: "~" });
  putModel(out, law.model);
  if (!law.with) return;
  out.push({ text: "with", breakLevel: 2 });
  putName(out, law.with.letter);
  putExpression(out, law.with.probability);
}

function putModel(out: Pieces, model: ModelTree): void {
  switch (model.kind) {
    case "mass":
      putMass(out, model.mass);
      return;
    case "markov":
      out.push({ text: "markov", at: model.span.start }, { text: "{" });
      for (const [i, row] of model.rows.entries()) {
        if (i > 0) out.push({ text: ",", tight: true });
        putName(out, row.letter, i > 0 ? { breakLevel: 2 } : { tight: true });
        out.push({ text: "->" });
        putMass(out, row.mass);
      }
      out.push({ text: "}", tight: true });
      return;
    case "distribution":
      putDistribution(out, model);
      return;
    default:
      model satisfies never;
  }
}

function putMass(out: Pieces, mass: MassTree): void {
  out.push({ text: "{", at: mass.span.start });
  for (const [i, entry] of mass.entries.entries()) {
    if (i > 0) out.push({ text: ",", tight: true });
    putName(out, entry.letter, i > 0 ? { breakLevel: 3 } : { tight: true });
    if (entry.probability) putExpression(out, entry.probability);
  }
  out.push({ text: "}", tight: true });
}

function putDistribution(out: Pieces, model: Extract<ModelTree, { kind: "distribution" }>): void {
  putName(out, model.name);
  putOperands(out, model.operands);
  if (model.ar) {
    out.push({ text: "ar" });
    putExpression(out, model.ar);
  }
  if (!model.estimated) return;
  const { subgroups, size, under, span } = model.estimated;
  out.push({ text: "estimated", at: span.start, breakLevel: 2 }, { text: "from" });
  putCount(out, subgroups);
  out.push({ text: "subgroups" }, { text: "of" });
  putCount(out, size);
  if (!under) return;
  out.push({ text: "under" });
  putProcessAt(out, under);
}

function putProcessAt(out: Pieces, { name, operands }: ProcessAt): void {
  putName(out, name);
  if (operands.length > 0) putOperands(out, operands);
}

export function putRequirement(out: Pieces, { measure, requirement }: Of<"require">): void {
  putMeasure(out, measure);
  const column = { column: "single", breakLevel: 1 } as const;
  out.push({ text: requirement.kind === "bound" ? requirement.comparison : "=", ...column });
  putExpression(out, requirement.value);
  if (requirement.kind === "bound") return;
  out.push({ text: "within" });
  putExpression(out, requirement.within);
}

function putMeasure(out: Pieces, { name, of }: MeasureTree): void {
  putName(out, name);
  if (!of) return;
  out.push({ text: "(", tight: true });
  putName(out, of.signal, { tight: true });
  out.push({ text: ",", tight: true });
  putProcessAt(out, of.process.at);
  if (of.process.after) {
    out.push({ text: "after" });
    putProcessAt(out, of.process.after);
  }
  if (of.argument) {
    out.push({ text: ",", tight: true });
    putExpression(out, of.argument);
  }
  out.push({ text: ")", tight: true });
}

export function putExpectation(out: Pieces, { expectation, trials }: Of<"expect">): void {
  if (expectation.kind === "signal") putName(out, expectation.name);
  else out.push({ text: expectation.kind });
  out.push({ text: "on", column: "single" });
  for (const [i, trial] of trials.entries()) putTrial(out, trial, i > 0 ? { breakLevel: 1 } : {});
}

function putTrial(out: Pieces, trial: TrialTree, edge: Partial<Piece>): void {
  const { count, letters, tuple, raises } = trial;
  if (count) out.push({ text: count.text, at: count.span.start, ...edge });
  const first = count ? {} : edge;
  if (tuple) putTuple(out, letters, { at: trial.span.start, ...first });
  else putPlace(out, letters[0] ?? null, { at: trial.span.start, ...first });
  if (!raises) return;
  out.push({ text: "->" });
  const [only] = raises;
  if (raises.length === 1 && only) putName(out, only);
  else putRaises(out, raises);
}

/** The place of `?` is not in the tree; that of its trial will do. */
function putPlace(out: Pieces, letter: Name | null, edge: Partial<Piece>): void {
  if (letter) putName(out, letter, { ...edge, at: letter.span.start });
  else out.push({ text: "?", ...edge });
}

function putTuple(out: Pieces, letters: readonly (Name | null)[], edge: Partial<Piece>): void {
  out.push({ text: "(", ...edge });
  for (const [i, letter] of letters.entries()) {
    if (i > 0) out.push({ text: ",", tight: true });
    if (letter) putName(out, letter, { tight: i === 0 });
    else out.push({ text: "?", tight: i === 0 });
  }
  out.push({ text: ")", tight: true });
}

function putRaises(out: Pieces, raises: readonly Name[]): void {
  out.push({ text: "{" });
  for (const [i, raise] of raises.entries()) {
    if (i > 0) out.push({ text: ",", tight: true });
    putName(out, raise, { tight: i === 0 });
  }
  out.push({ text: "}", tight: true });
}
