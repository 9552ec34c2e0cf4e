/**
 * What a policy promises: `require` and `expect`, checked for form.
 * In: their declarations. Out: their checked forms, those with a fault left out; whether they are true is told later, by
 * the analysis and by the machine.
 */
import type { Diagnostic } from "../../grammar/diagnostic.ts";
import { compareQuantities, exact } from "../chance/quantity.ts";
import type { Alphabet, Expect, Require } from "../policy.ts";
import type { Declared, Of } from "./declarations.ts";
import { checkExpects } from "./expectations.ts";
import { evaluate } from "./expressions.ts";
import { showNumber } from "./figures.ts";
import { checkMeasure, type Processes } from "./measures.ts";
import { modelsAt, withPoint } from "./process-at.ts";
import { makeScope } from "./scope.ts";
import type { Trials } from "./trials.ts";
import { showValue, type Values } from "./values.ts";

/** Checks all requirements and expectations. */
export function checkContracts(
  declared: Declared,
  processes: Processes,
  alphabets: readonly Alphabet[],
  trials: Trials | null,
  values: Values,
): { readonly requires: readonly Require[]; readonly expects: readonly Expect[] } {
  const requires = declared.requires.map((declaration) => checkRequire(declaration, processes, values));
  for (const require of requires) if (require !== null) checkPoints(require, processes, alphabets, values);
  const canExpect = trials !== null && !values.scope.isLibrary;
  const expects = canExpect ? checkExpects(declared.expects, { alphabets, trials }, values) : [];
  return {
    requires: requires.filter((require) => require !== null),
    expects: expects.filter((expect) => expect !== null),
  };
}

function checkRequire(declaration: Of<"require">, processes: Processes, values: Values): Require | null {
  const measure = checkMeasure(declaration.measure, processes, values);
  const requirement = checkRequirement(declaration.requirement, values);
  return measure === null || requirement === null ? null : { measure, requirement, span: declaration.span };
}

function checkRequirement(tree: Of<"require">["requirement"], values: Values): Require["requirement"] | null {
  const value = evaluate(tree.value, values);
  if (tree.kind === "bound")
    return value === null ? null : { kind: "bound", comparison: tree.comparison, value };
  const within = evaluate(tree.within, values);
  if (value === null || within === null) return null;
  if (compareQuantities(within, exact(0n)) === "greater") return { kind: "near", value, within };
  values.scope.report(
    "number_domain",
    tree.within.span,
    `\`within\` gives a distance above 0, not ${showValue(tree.within, within)}`,
    {
      hint: "write a share of the value: `within 5%`",
      data: { within: showNumber(within) },
    },
  );
  return null;
}

/** The laws must have numbers at the values a measure asks for, inside the sweep or not. */
function checkPoints(
  { measure }: Require,
  processes: Processes,
  alphabets: readonly Alphabet[],
  values: Values,
): void {
  for (const use of [measure.process, measure.after]) {
    const process = use === null ? null : processes[use.process];
    if (use === null || use.values === null || use.values.length === 0 || !process) continue;
    const findings: Diagnostic[] = [];
    const scope = makeScope(values.scope.names, findings, values.scope.isLibrary);
    modelsAt(process, alphabets, { ...values, scope }, use.values);
    const [first] = findings;
    if (first === undefined) continue;
    const { code, message, data, hint } = withPoint(first, process, use.values);
    values.scope.report(code, use.span, message, {
      ...(hint === undefined ? {} : { hint }),
      related: [{ span: first.span, message: "the law is given here" }],
      ...(data === undefined ? {} : { data }),
    });
  }
}
