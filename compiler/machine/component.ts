/**
 * From a condition to its component: the minimal automaton that gives out 1 at the trials where the condition holds, from
 * clear memory on. Operands are minimised before they are combined; a rule mentioned twice is compiled once, and each
 * mention is a copy of its own because its state stands in the tuple of whoever mentions it.
 */
import type { Span } from "../../grammar/span.ts";
import type { Condition } from "../policy.ts";
import type { Automaton } from "./automaton.ts";
import { demandWithin } from "./budget.ts";
import { type Columns, setByColumn } from "./columns.ts";
import { explore, type Succession } from "./explore.ts";
import { type Formula, formulaOf, holds } from "./formula.ts";
import { minimise } from "./minimise.ts";
import { trackPattern } from "./pattern.ts";
import { trackRepeats, trackRun, trackScan, trackSet, trackThen, trackUnless } from "./trackers.ts";

export type Compiler = {
  readonly columns: Columns;
  readonly mostStates: number;
  readonly components: Map<Condition, Automaton>;
  /** What is being compiled, for the message when the budget is exceeded. */
  culprit: { readonly text: string; readonly span: Span } | null;
};

export function makeCompiler(columns: Columns, mostStates: number): Compiler {
  return { columns, mostStates, components: new Map(), culprit: null };
}

/** The component of a condition; throws `TooManyStates`, with `culprit` naming the condition. */
export function componentOf(compiler: Compiler, condition: Condition): Automaton {
  const known = compiler.components.get(condition);
  if (known) return known;
  const component =
    condition.kind === "rule" ? componentOf(compiler, condition.condition) : build(compiler, condition);
  compiler.components.set(condition, component);
  return component;
}

function build(compiler: Compiler, condition: Exclude<Condition, { kind: "rule" }>): Automaton {
  const succession = successionOf(compiler, condition);
  compiler.culprit = condition;
  const explored = explore(succession, compiler.mostStates);
  compiler.culprit = null;
  return minimise(explored);
}

function successionOf(compiler: Compiler, condition: Exclude<Condition, { kind: "rule" }>): Succession {
  const { columns, mostStates } = compiler;
  const blame = (estimate: number) => {
    compiler.culprit = condition;
    demandWithin(estimate, mostStates);
    compiler.culprit = null;
  };
  switch (condition.kind) {
    case "set":
      return trackSet(setByColumn(condition.set, columns));
    case "run":
      blame(condition.count);
      return trackRun(condition.count, setByColumn(condition.set, columns), 0, new Uint8Array(columns.count));
    case "weakRun": {
      blame(1 + (condition.count - 1) * (condition.gap + 1));
      const failures = setByColumn(condition.failures, columns);
      return trackRun(condition.count, setByColumn(condition.set, columns), condition.gap, failures);
    }
    case "scan":
      blame(choose(condition.window, condition.count - 1));
      return trackScan(condition.count, condition.window, setByColumn(condition.set, columns));
    case "pattern":
      compiler.culprit = condition;
      return trackPattern(condition.pattern, columns.count, (set) => setByColumn(set, columns));
    case "separate":
    case "overlapping": {
      const operand = componentOf(compiler, condition.operand);
      return trackRepeats(condition.kind, condition.count, operand);
    }
    case "then":
      return trackThen(
        componentOf(compiler, condition.left),
        componentOf(compiler, condition.right),
        condition.within,
      );
    case "unless":
      return trackUnless(
        componentOf(compiler, condition.left),
        componentOf(compiler, condition.right),
        condition.within,
      );
    case "and":
    case "or":
    case "not":
      return trackFormula(compiler, condition);
    default:
      return condition satisfies never;
  }
}

/** `and`, `or`, `not`: the states of all parts side by side. */
function trackFormula(compiler: Compiler, condition: Condition): Succession {
  const formula = formulaOf(condition, true);
  const parts = partsOf(compiler, formula);
  return {
    width: parts.automata.length,
    columns: compiler.columns.count,
    step: (pool, at, column, into) => {
      stepParts(parts, pool, at, column, into, 0);
      return holds(formula, parts.completes) ? 1 : 0;
    },
  };
}

/** The components of a formula's parts, and room for what they say of one trial. */
export type Parts = { readonly automata: readonly Automaton[]; readonly completes: Uint8Array };

export function partsOf(compiler: Compiler, formula: Formula): Parts {
  const automata = formula.parts.map((part) => componentOf(compiler, part));
  return { automata, completes: new Uint8Array(automata.length) };
}

/** Steps all parts; their states stand at `pool[at …]`, their successors go to `into[to …]`. */
export function stepParts(
  { automata, completes }: Parts,
  pool: Int32Array,
  at: number,
  column: number,
  into: Int32Array,
  to: number,
): void {
  for (let part = 0; part < automata.length; part++) {
    const automaton = automata[part] as Automaton;
    const index = (pool[at + part] as number) * automaton.columns + column;
    into[to + part] = automaton.next[index] as number;
    completes[part] = automaton.output[index] as number;
  }
}

/** Binomial coefficient, as a double. */
function choose(n: number, k: number): number {
  let result = 1;
  for (let i = 1; i <= Math.min(k, n - k); i++) result = (result * (n - i + 1)) / i;
  return Math.round(result);
}
