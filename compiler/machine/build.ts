/**
 * From a checked policy to its machine: the signals, the clearing conditions and the place in the block side by side,
 * explored from the start, minimised, numbered canonically, and equal columns merged.
 *
 * One trial, in the order the language gives: `clear before`; every signal steps; what was raised clears as it declares;
 * `clear after`; the block's edge. Where signals raised at one trial restart and begin quiet times, all clearing comes
 * before the quiet times begin.
 */
import { type Diagnostic, diagnose, type Outcome } from "../../grammar/diagnostic.ts";
import type { Policy, Signal } from "../policy.ts";
import type { AttributedMachine, Automaton, Machine } from "./automaton.ts";
import { DEFAULT_MOST_STATES, TooManyStates } from "./budget.ts";
import { columnsOf, mergeColumns, setByColumn } from "./columns.ts";
import { type Compiler, componentOf, makeCompiler } from "./component.ts";
import { explore, type Succession } from "./explore.ts";
import { minimise } from "./minimise.ts";
import { numberOf } from "./numbering.ts";
import { compileSignal, type SignalAutomaton } from "./signal.ts";

export type BuildOptions = {
  /** The state budget: how many states any automaton on the way may have, before minimising. */
  readonly mostStates?: number;
};

/** The minimal machine of a policy, or why it would be too large. */
export function buildMachine(policy: Policy, options: BuildOptions = {}): Outcome<Machine> {
  return withinBudget(policy, options, (compiler) => {
    const { automaton, columnOf, broken } = assemble(policy, compiler, false, signalMask);
    return { ...automaton, columnOf, broken };
  });
}

/** The minimal machine that tells attributions apart. */
export function buildAttributedMachine(
  policy: Policy,
  options: BuildOptions = {},
): Outcome<AttributedMachine> {
  return withinBudget(policy, options, (compiler) => {
    const attributions: { signal: number; condition: string }[][] = [[]];
    const numbers = new Map([["", 0]]);
    const number = (raised: Int32Array, signals: readonly SignalAutomaton[]) => {
      if (raised.every((output) => output === 0)) return 0;
      const known = numberOf(numbers, raised.join(" "));
      attributions[known] ??= signals.flatMap(({ attributions: own }, signal) =>
        (own[raised[signal] as number] as readonly string[]).map((condition) => ({ signal, condition })),
      );
      return known;
    };
    const { automaton, columnOf, broken } = assemble(policy, compiler, true, number);
    return { ...automaton, columnOf, broken, attributions };
  });
}

/** A condition in a message is cut after so many characters. */
const LONGEST_SHOWN = 200;

/** Gives out what one trial raised, from the outputs of all signals. */
type Combine = (raised: Int32Array, signals: readonly SignalAutomaton[]) => number;

function signalMask(raised: Int32Array): number {
  let mask = 0;
  for (let signal = 0; signal < raised.length; signal++) if (raised[signal] !== 0) mask |= 1 << signal;
  return mask;
}

function assemble(policy: Policy, compiler: Compiler, attributed: boolean, combine: Combine) {
  const signals = policy.signals.map((signal) => compileSignal(compiler, signal, attributed));
  const clearing = policy.clearAfter.map((condition) => componentOf(compiler, condition));
  const whole = explore(product(policy, compiler, signals, clearing, combine), compiler.mostStates);
  const minimal = minimise(whole);
  const letters = compiler.columns.count;
  const { merged, newColumnOf } = mergeColumns(minimal, letters);
  const columnOf = compiler.columns.columnOf.map((column) => newColumnOf[column] as number);
  const broken = canBreak(policy)
    ? Int32Array.from(
        { length: minimal.states },
        (_, s) => minimal.next[s * minimal.columns + letters] as number,
      )
    : null;
  return { automaton: merged, columnOf, broken };
}

/** Whether a trial can be broken: not where every missing value has a letter that stands for it. */
function canBreak({ missing, alphabets }: Policy): boolean {
  return missing === "break" && alphabets.some((alphabet) => alphabet.missing === null);
}

/** State: one number for each signal, one for each `clear after`, and the place in the block. */
function product(
  policy: Policy,
  compiler: Compiler,
  signals: readonly SignalAutomaton[],
  clearing: readonly Automaton[],
  combine: Combine,
): Succession {
  const letters = compiler.columns.count;
  const placeAt = signals.length + clearing.length;
  const clearBefore = policy.clearBefore
    ? setByColumn(policy.clearBefore, compiler.columns)
    : new Uint8Array(letters);
  const restarts = policy.signals.map((signal) => signal.response === "restart");
  const raised = new Int32Array(signals.length);
  const from = new Int32Array(placeAt + 1);

  const stepAll = (column: number, into: Int32Array): { restart: boolean; cleared: boolean } => {
    let restart = false;
    for (let s = 0; s < signals.length; s++) {
      const { automaton } = signals[s] as SignalAutomaton;
      const index = (from[s] as number) * automaton.columns + column;
      into[s] = automaton.next[index] as number;
      raised[s] = automaton.output[index] as number;
      if (raised[s] !== 0 && restarts[s] === true) restart = true;
    }
    let cleared = false;
    for (let c = 0; c < clearing.length; c++) {
      const automaton = clearing[c] as Automaton;
      const broken = column === letters;
      const index = (from[signals.length + c] as number) * automaton.columns + column;
      into[signals.length + c] = broken ? 0 : (automaton.next[index] as number);
      if (!broken && automaton.output[index] === 1) cleared = true;
    }
    return { restart, cleared };
  };

  /** Everything becomes as at the start but the quiet times of what was raised at this trial, and the place. */
  const restartAll = (into: Int32Array) => {
    for (let s = 0; s < placeAt; s++)
      if (s >= signals.length || raised[s] === 0 || (policy.signals[s] as Signal).quiet === null) into[s] = 0;
  };

  const advance = (into: Int32Array) => {
    if (policy.block === null) return;
    const place = (from[placeAt] as number) + 1;
    into[placeAt] = place === policy.block ? 0 : place;
    if (place < policy.block) return;
    for (let s = 0; s < signals.length; s++) {
      const { automaton, edge } = signals[s] as SignalAutomaton;
      into[s] = automaton.next[(into[s] as number) * automaton.columns + edge] as number;
    }
    into.fill(0, signals.length, placeAt);
  };

  return {
    width: placeAt + 1,
    columns: canBreak(policy) ? letters + 1 : letters,
    step: (pool, at, column, into) => {
      for (let i = 0; i <= placeAt; i++) from[i] = clearBefore[column] === 1 ? 0 : (pool[at + i] as number);
      into[placeAt] = 0;
      const { restart, cleared } = stepAll(column, into);
      if (restart) restartAll(into);
      if (cleared) into.fill(0);
      else advance(into);
      return combine(raised, signals);
    },
  };
}

function withinBudget<T>(
  policy: Policy,
  options: BuildOptions,
  build: (compiler: Compiler) => T,
): Outcome<T> {
  const mostStates = options.mostStates ?? DEFAULT_MOST_STATES;
  const compiler = makeCompiler(columnsOf(policy), mostStates);
  try {
    return { value: build(compiler), diagnostics: [] };
  } catch (thrown) {
    if (!(thrown instanceof TooManyStates)) throw thrown;
    return { diagnostics: [tooManyStates(policy, compiler.culprit, thrown.estimate, mostStates)] };
  }
}

function tooManyStates(
  policy: Policy,
  culprit: Compiler["culprit"],
  estimate: number | null,
  mostStates: number,
): Diagnostic {
  const budget = mostStates.toLocaleString("en");
  const about = estimate === null ? `more than ${budget}` : `about ${estimate.toPrecision(2)}`;
  const [first] = policy.signals;
  const span = culprit?.span ?? first?.span ?? { source: policy.source, start: 0, end: 0 };
  const what = culprit
    ? `"${shorten(culprit.text)}"`
    : `the signals ${policy.signals.map((s) => s.name).join(", ")} together`;
  const hint = culprit
    ? "use smaller counts or windows, or say it with `gap`, `within` or fewer letters; `--max-states N` raises the budget"
    : "shorten quiet times and windows, use `restart` so that signals share a start, or split the policy in two; `--max-states N` raises the budget";
  return diagnose("too_many_states", span, `${what} would need ${about} states; the budget is ${budget}`, {
    hint,
    data: { condition: culprit ? shorten(culprit.text) : null, estimate, budget: mostStates },
  });
}

function shorten(text: string): string {
  return text.length > LONGEST_SHOWN ? `${text.slice(0, LONGEST_SHOWN)}…` : text;
}
