/**
 * The laws of a process at given values of its parameters.
 * In: a checked policy, one of its processes, and a value for each parameter. Out: the model of each alphabet, null where
 * the process leaves it out; or what is wrong with the numbers there. The check itself tries every value of a sweep, so
 * that only values from elsewhere (`shifted(7)`) can still fail.
 */
import type { Diagnostic, Outcome } from "../../grammar/diagnostic.ts";
import type { Expression, Law, MassTree } from "../../grammar/tree.ts";
import type { Alphabet, LetterModel, Policy, Process, Quantity } from "../policy.ts";
import { showNumber } from "./figures.ts";
import { namesInExpression } from "./mentions.ts";
import { evaluateModel } from "./models.ts";
import { type Entity, makeScope } from "./scope.ts";
import type { Values } from "./values.ts";

/** The models of a process at one value of each parameter, in the order of the alphabets. */
export function processAt(
  policy: Policy,
  process: Process,
  values: readonly Quantity[],
): Outcome<readonly (LetterModel | null)[]> {
  const findings: Diagnostic[] = [];
  const scope = makeScope(namesOf(policy), findings, false);
  const lets = [...policy.lets.values()].map(({ value }) => value);
  const models = modelsAt(process, policy.alphabets, { scope, lets, parameters: null }, values);
  return findings.length > 0
    ? { diagnostics: findings.map((finding) => withPoint(finding, process, values)) }
    : { value: models, diagnostics: [] };
}

/** The names that laws, measures and trials may mention. */
export function namesOf(policy: Policy): ReadonlyMap<string, Entity> {
  const names = new Map<string, Entity>();
  const put = (entity: Entity): void => void names.set(entity.name, entity);
  for (const [index, [name, { span }]] of [...policy.lets].entries()) put({ role: "let", index, name, span });
  for (const [statistic, { letters, name: of }] of policy.alphabets.entries()) {
    for (const [letter, { name, span }] of letters.entries())
      put({ role: "letter", statistic, letter, of, name, span });
  }
  for (const [index, { name, span }] of policy.signals.entries()) put({ role: "signal", index, name, span });
  for (const [index, { name, span, parameters }] of policy.processes.entries()) {
    put({ role: "process", index, name, span });
    for (const [parameter, own] of parameters.entries()) {
      put({ role: "parameter", process: index, parameter, of: name, name: own.name, span: own.span });
    }
  }
  return names;
}

/** The models at a point; `values` hold the lets and report what is wrong. */
export function modelsAt(
  process: Process,
  alphabets: readonly Alphabet[],
  values: Values,
  point: readonly (Quantity | null)[],
): (LetterModel | null)[] {
  const parameters = new Map(process.parameters.map(({ name }, index) => [name, point[index] ?? null]));
  return process.laws.map((law, index) => {
    const alphabet = alphabets[index];
    return law === null || alphabet === undefined
      ? null
      : evaluateModel(law, alphabet, { ...values, parameters });
  });
}

/** Faults that hang on the values of parameters. */
const numeric: ReadonlySet<string> = new Set([
  "division_by_zero",
  "model_parameter",
  "number_domain",
  "number_too_large",
  "open_question",
  "probabilities_sum",
  "probability_range",
]);

/** Says at which values of the parameters something is wrong, where that matters. */
export function withPoint(finding: Diagnostic, process: Process, point: readonly Quantity[]): Diagnostic {
  if (!numeric.has(finding.code) || !mentionsParameters(process) || point.length === 0) return finding;
  const at = process.parameters.map(
    ({ name }, index) => `${name} = ${point[index] ? showNumber(point[index]) : "?"}`,
  );
  return {
    ...finding,
    message: `${finding.message} (at ${at.join(", ")})`,
    data: { ...finding.data, at },
  };
}

/** Whether the laws of a process hang on its parameters at all. */
export function mentionsParameters(process: Process): boolean {
  const names = new Set(process.parameters.map(({ name }) => name));
  return process.laws.some((law) =>
    law === null
      ? false
      : expressionsIn(law).some((one) => namesInExpression(one).some(({ text }) => names.has(text))),
  );
}

function expressionsIn({ model, with: missing }: Law): readonly Expression[] {
  const ofMass = ({ entries }: MassTree): Expression[] =>
    entries.flatMap(({ probability }) => (probability === undefined ? [] : [probability]));
  const chance = missing === undefined ? [] : [missing.probability];
  switch (model.kind) {
    case "mass":
      return [...chance, ...ofMass(model.mass)];
    case "markov":
      return [...chance, ...model.rows.flatMap(({ mass }) => ofMass(mass))];
    case "distribution":
      return [
        ...chance,
        ...model.operands,
        ...(model.ar ? [model.ar] : []),
        ...(model.estimated?.under?.operands ?? []),
      ];
  }
}
