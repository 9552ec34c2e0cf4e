/**
 * Libraries: files without `policy`, whose names may be declared by whoever uses them.
 * In: the declarations of a library and the names they declare. Out: the names they mention besides, with their first
 * mention. Words known by their place (functions, models, measures, units) are no names.
 */
import type {
  Declaration,
  Law,
  MassTree,
  MeasureTree,
  ModelTree,
  Name,
  ProcessAt,
} from "../../grammar/tree.ts";
import { namesInCondition, namesInCount, namesInExpression, namesInSet } from "./mentions.ts";
import type { Entity } from "./scope.ts";

/** The names a library leaves to its user, in the order of their first mention. */
export function namesLeft(
  declarations: readonly Declaration[],
  names: ReadonlyMap<string, Entity>,
): ReadonlyMap<string, Name> {
  const left = new Map<string, Name>();
  for (const declaration of declarations) {
    for (const name of namesMentioned(declaration)) {
      if (!names.has(name.text) && !left.has(name.text)) left.set(name.text, name);
    }
  }
  return left;
}

function namesMentioned(declaration: Declaration): Name[] {
  switch (declaration.kind) {
    case "policy":
    case "use":
    case "letters":
    case "missing":
    case "cadence":
    case "allow":
      return [];
    case "let":
      return numbers(declaration.value);
    case "zones":
      return declaration.cuts.flatMap(({ expression }) => numbers(expression));
    case "group":
      return namesInSet(declaration.set);
    case "assign":
      return declaration.pairs.flatMap(({ success, failure }) => [
        ...namesInSet(success),
        ...namesInSet(failure),
      ]);
    case "rule":
    case "clearAfter":
      return namesInCondition(declaration.condition);
    case "signal":
      return [...namesInCondition(declaration.condition), ...quietNames(declaration)];
    case "clearBefore":
      return namesInSet(declaration.set);
    case "missingAs":
      return [declaration.statistic];
    case "blocks":
      return namesInCount(declaration.count);
    case "process":
      return [
        ...declaration.sweeps.flatMap(({ from, to, by }) => [
          ...numbers(from),
          ...numbers(to),
          ...numbers(by),
        ]),
        ...declaration.laws.flatMap(lawNames),
      ];
    case "require": {
      const { measure, requirement } = declaration;
      const within = requirement.kind === "near" ? numbers(requirement.within) : [];
      return [...measureNames(measure), ...numbers(requirement.value), ...within];
    }
    case "expect": {
      const { expectation, trials } = declaration;
      const signal =
        expectation.kind === "signal" && expectation.name.text !== "any" ? [expectation.name] : [];
      const letters = trials.flatMap((trial) => trial.letters.filter((name) => name !== null));
      return [...signal, ...letters, ...trials.flatMap(({ raises }) => raises ?? [])];
    }
  }
}

function numbers(expression: Parameters<typeof namesInExpression>[0]): Name[] {
  return namesInExpression(expression).filter(({ text }) => text !== "pi");
}

function quietNames({ quiet }: Extract<Declaration, { kind: "signal" }>): Name[] {
  if (quiet === undefined) return [];
  return quiet.kind === "for" ? namesInCount(quiet.count) : namesInCondition(quiet.condition);
}

function lawNames({ statistic, model, with: missing }: Law): Name[] {
  const chance = missing === undefined ? [] : [missing.letter, ...numbers(missing.probability)];
  return [statistic, ...modelNames(model), ...chance];
}

function modelNames(model: ModelTree): Name[] {
  switch (model.kind) {
    case "mass":
      return massNames(model.mass);
    case "markov":
      return model.rows.flatMap(({ letter, mass }) => [letter, ...massNames(mass)]);
    case "distribution": {
      const { operands, ar, estimated } = model;
      const sample =
        estimated === undefined
          ? []
          : [...namesInCount(estimated.subgroups), ...namesInCount(estimated.size)];
      const under = estimated?.under === undefined ? [] : processNames(estimated.under);
      return [...operands.flatMap(numbers), ...(ar === undefined ? [] : numbers(ar)), ...sample, ...under];
    }
  }
}

function massNames({ entries }: MassTree): Name[] {
  return entries.flatMap(({ letter, probability }) => [
    letter,
    ...(probability === undefined ? [] : numbers(probability)),
  ]);
}

function processNames({ name, operands }: ProcessAt): Name[] {
  return [name, ...operands.flatMap(numbers)];
}

function measureNames({ of }: MeasureTree): Name[] {
  if (of === undefined) return [];
  const { signal, process, argument } = of;
  return [
    ...(signal.text === "any" ? [] : [signal]),
    ...processNames(process.at),
    ...(process.after === undefined ? [] : processNames(process.after)),
    ...(argument === undefined ? [] : numbers(argument)),
  ];
}
