/**
 * Why a signal was raised: which of its conditions made it hold, and each one's shortest completing string.
 *
 * note [attribution]: a raise is attributed to the conditions that make the formula hold. An operand of `or` or `and` that
 * holds counts for a formula that holds, one that does not for a formula that does not; `not` changes sides; a condition
 * that did not complete explains nothing.
 *
 * The shortest string is sought backwards from the trial of the raise: the condition, begun afresh ever earlier, is run to
 * that trial until it completes there. Two runs in the same state at the same trial agree from there on, so a run stops
 * where it meets the run begun one trial later; at worst n trials kept cost n²/2 steps of the condition's machine.
 */
import type { FormulaInFile } from "./machine-file.ts";
import type { ConditionMachine } from "./open-reasons.ts";
import { BROKEN, holds, type Parts } from "./reasons.ts";

/** One condition to which a raise is attributed. */
export type Reason = {
  readonly signal: string;
  /** The rule's name, or a nameless condition's canonical text. */
  readonly rule: string;
  /** The first trial of the shortest string that completes the rule; if not `complete`, it began before this trial. */
  readonly from: number;
  /** The last trial of that string: the trial of the raise. */
  readonly to: number;
  readonly complete: boolean;
};

/** The reasons of what was raised at the last trial; `names` are the signals'. */
export function attribute(parts: Parts, names: readonly string[], trial: number): readonly Reason[] {
  const found: Reason[] = [];
  for (const [j, signal] of parts.reasons.signals.entries()) {
    if ((parts.raises & (1 << j)) === 0) continue;
    const conditions = new Set<number>();
    collect(signal.formula, true, parts.completed, signal.first, conditions);
    const seen = new Set<string>();
    for (const index of conditions) {
      const { name: rule, machine } = signal.conditions[index]!;
      const { from, complete } = shortest(parts, machine, trial, parts.sinceAtLast[j]!);
      // Two mentions of one rule are two conditions; where they say the same, it is said once.
      if (seen.has(`${from} ${rule}`)) continue;
      seen.add(`${from} ${rule}`);
      found.push({ signal: names[j]!, rule, from, to: trial, complete });
    }
  }
  return found;
}

/** See note [attribution]: adds the conditions that explain why the formula holds (`side` true) or does not. */
function collect(
  formula: FormulaInFile,
  side: boolean,
  completed: Uint8Array,
  first: number,
  into: Set<number>,
): void {
  if (typeof formula === "number") {
    if (side && completed[first + formula] === 1) into.add(formula);
  } else if ("not" in formula) {
    collect(formula.not, !side, completed, first, into);
  } else {
    for (const operand of "and" in formula ? formula.and : formula.or) {
      if (holds(operand, completed, first) === side) collect(operand, side, completed, first, into);
    }
  }
}

/** The latest trial, not before `since`, from which the condition begun afresh completes at `trial`. */
function shortest(
  parts: Parts,
  machine: ConditionMachine,
  trial: number,
  since: number,
): { readonly from: number; readonly complete: boolean } {
  const { ring, reasons } = parts;
  const oldest = Math.max(since, trial - parts.kept + 1);
  /** By trial, counted back from the last: the state before it is read in the run begun one trial later. */
  const trace = new Int32Array(trial - oldest + 1).fill(-1);
  for (let from = trial; from >= oldest; from--) {
    if (ring[(from - 1) % ring.length] === BROKEN) return { from: from + 1, complete: false };
    let state = 0;
    for (let t = from; trace[trial - t] !== state; t++) {
      trace[trial - t] = state;
      const entry = state * reasons.columns + reasons.columnOf[ring[(t - 1) % ring.length]!]!;
      if (t === trial) {
        if (machine.completes[entry] === 1) return { from, complete: true };
        break;
      }
      state = machine.next[entry]!;
    }
  }
  return { from: oldest, complete: false };
}
