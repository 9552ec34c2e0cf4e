/**
 * The lets of a policy, worked out in the order they need one another.
 * In: the declarations and the values given in their place (`--let d=2`). Out: a value by index, null where the reason
 * was reported; and the expressions in force.
 */
import type { Diagnostic } from "../../grammar/diagnostic.ts";
import { parse } from "../../grammar/parse.ts";
import { makeSource } from "../../grammar/source.ts";
import { nearest } from "../../grammar/spelling.ts";
import type { Expression } from "../../grammar/tree.ts";
import type { Quantity } from "../policy.ts";
import type { Of } from "./declarations.ts";
import { evaluate } from "./expressions.ts";
import { namesInExpression } from "./mentions.ts";
import { dependencyOrder } from "./order.ts";
import type { Scope } from "./scope.ts";

export type Lets = {
  readonly values: readonly (Quantity | null)[];
  readonly expressions: readonly Expression[];
};

/** Works out every let. */
export function evaluateLets(
  lets: readonly Of<"let">[],
  given: ReadonlyMap<string, string>,
  scope: Scope,
  findings: Diagnostic[],
): Lets {
  const replaced = readGiven(lets, given, scope, findings);
  const expressions = lets.map((declaration) => replaced.get(declaration.name.text) ?? declaration.value);
  const { order, cycles } = dependencyOrder(lets.length, (index) => letsIn(expressions[index], scope));
  const values: (Quantity | null)[] = lets.map(() => null);
  const onCycle = new Set(cycles.flat());
  for (const cycle of cycles)
    reportCycle(
      cycle.map((index) => lets[index]!),
      "let",
      scope,
    );
  for (const index of order) {
    const expression = expressions[index];
    if (expression === undefined || onCycle.has(index)) continue;
    values[index] = evaluate(expression, { scope, lets: values, parameters: null });
  }
  return { values, expressions };
}

function letsIn(expression: Expression | undefined, scope: Scope): number[] {
  if (expression === undefined) return [];
  return namesInExpression(expression).flatMap((name) => {
    const entity = scope.names.get(name.text);
    return entity?.role === "let" ? [entity.index] : [];
  });
}

/** Says that declarations lead back to themselves, with the way round. */
export function reportCycle(
  cycle: readonly Of<"let" | "rule" | "group">[],
  kind: "let" | "rule" | "group",
  scope: Scope,
): void {
  const [first, ...others] = cycle;
  if (first === undefined) return;
  const shown =
    cycle.length > 12 ? [...cycle.slice(0, 11).map((d) => d.name.text), "…"] : cycle.map((d) => d.name.text);
  const way = [...shown, first.name.text].map((name) => (name === "…" ? name : `"${name}"`)).join(" → ");
  scope.report("cycle", first.name.span, `the ${kind} "${first.name.text}" is defined by itself: ${way}`, {
    hint: "write one of them without the others",
    related: others.slice(0, 11).map((d) => ({ span: d.name.span, message: `by way of "${d.name.text}"` })),
    data: { names: cycle.map((d) => d.name.text) },
  });
}

/** The expressions given in place of those written, by the name of their let. */
function readGiven(
  lets: readonly Of<"let">[],
  given: ReadonlyMap<string, string>,
  scope: Scope,
  findings: Diagnostic[],
): ReadonlyMap<string, Expression> {
  const replaced = new Map<string, Expression>();
  for (const [name, text] of given) {
    const source = makeSource("--let", `let ${name} = ${text}`);
    const { tree, diagnostics } = parse(source);
    findings.push(...diagnostics);
    const [declaration, ...rest] = tree.declarations;
    const whole = { source, start: 0, end: source.text.length };
    if (diagnostics.length > 0) continue;
    if (declaration?.kind !== "let" || rest.length > 0) {
      scope.report("syntax", whole, `"${text}" is not an expression`);
    } else if (!lets.some((own) => own.name.text === declaration.name.text)) {
      const near = nearest(
        name,
        lets.map((own) => own.name.text),
      );
      const hint = near
        ? `did you mean \`${near}\`?`
        : "`--let NAME=VALUE` gives a `let` of the policy another value";
      scope.report("unknown_name", declaration.name.span, `the policy has no let "${name}"`, {
        hint,
        data: { name },
      });
    } else {
      replaced.set(declaration.name.text, declaration.value);
    }
  }
  return replaced;
}
