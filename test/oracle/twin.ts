/**
 * The slow twin: what a policy says of a stream, from the definitions alone. Nothing of the compiler or the runtime is
 * imported. What is kept from trial to trial is only *since when* each condition's memory is clear, which signals are quiet
 * and the place in the block; whether a condition holds is asked of the trials themselves (`meaning.ts`).
 */
import { reasons } from "./because.ts";
import { type History, holds, isIn, newHistory, record } from "./meaning.ts";
import { countOf, type Letters, type Policy, type Row, type Signal } from "./policy.ts";

/** A rule that made a signal's condition hold, and its shortest completing string as trial numbers. */
export type Because = { readonly rule: string; readonly trials: readonly [from: number, to: number] };

export type Answer = {
  /** The number of the trial; null when a missing one was refused or skipped. */
  readonly trial: number | null;
  /** Names of the signals raised, in the order of declaration. */
  readonly raised: readonly string[];
  readonly because: readonly Because[];
};

/** A signal's memory is that of the trials from `start`; a quiet one rests. */
type Watch = {
  readonly start: number;
  readonly quiet:
    | null
    | { readonly kind: "for" /** The last trial of the rest. */; readonly last: number }
    | { readonly kind: "until" /** Where the condition waited for began afresh. */; readonly start: number };
};

export type State = {
  /** Trials so far. */
  readonly trial: number;
  readonly signals: readonly Watch[];
  /** Where the memory of each `clear after` condition begins. */
  readonly clears: readonly number[];
  /** Trials of this block so far. */
  readonly place: number;
};

/** Everything as at the start, for a stream whose next trial is number `next`. */
function asAtTheStart(policy: Policy, next: number): State {
  return {
    trial: next - 1,
    signals: policy.signals.map(() => ({ start: next, quiet: null })),
    clears: policy.clearAfter.map(() => next),
    place: 0,
  };
}

/** The memory of every condition clear before trial `next`; quiet times and the place in the block stay. */
function withClearMemory(state: State, next: number): State {
  const signals = state.signals.map((watch) => ({
    start: next,
    quiet: watch.quiet?.kind === "until" ? { kind: "until" as const, start: next } : watch.quiet,
  }));
  return { ...state, signals, clears: state.clears.map(() => next) };
}

/** After trial `t`: its place in the block is taken, and at the block's edge memory clears. */
function afterPlace(policy: Policy, state: State, t: number): State {
  if (policy.blocks === null) return { ...state, trial: t };
  const place = state.place + 1;
  if (place < countOf(policy, policy.blocks)) return { ...state, trial: t, place };
  return { ...withClearMemory(state, t + 1), trial: t, place: 0 };
}

/** The letters of a row with missing values replaced as declared; null when the trial is missing as a whole. */
function readRow(policy: Policy, row: Row): Letters | null {
  const letters: string[] = [];
  for (const [index, alphabet] of policy.alphabets.entries()) {
    const letter = row[index] ?? alphabet.missingAs;
    if (letter === null) return null;
    letters.push(letter);
  }
  return letters;
}

/** What the quiet of a signal is after trial `t`: over when it ran out or what it waited for held. */
function rest(history: History, signal: Signal, watch: Watch, t: number): Watch {
  const { quiet } = watch;
  const awake: Watch = { start: t + 1, quiet: null };
  if (quiet?.kind === "for") return quiet.last === t ? awake : watch;
  if (quiet?.kind !== "until" || signal.quiet?.kind !== "until") throw new Error("not quiet");
  return holds(history, signal.quiet.condition, quiet.start, t) ? awake : watch;
}

/** The watch of a signal raised at `t`, all clearing done. */
function beginQuiet(policy: Policy, signal: Signal, watch: Watch, t: number): Watch {
  switch (signal.quiet?.kind) {
    case undefined:
      return watch;
    case "for":
      return { start: t + 1, quiet: { kind: "for", last: t + countOf(policy, signal.quiet.count) } };
    case "until":
      return { start: t + 1, quiet: { kind: "until", start: t + 1 } };
  }
}

/** A broken trial: memory clears, quiet times count it, the block advances. */
function broken(history: History, state: State): { state: State; answer: Answer } {
  const { policy } = history;
  const t = state.trial + 1;
  record(history, t, null);
  const cleared = withClearMemory(state, t + 1);
  const signals = cleared.signals.map((watch) =>
    watch.quiet?.kind === "for" && watch.quiet.last === t ? { start: t + 1, quiet: null } : watch,
  );
  return {
    state: afterPlace(policy, { ...cleared, signals }, t),
    answer: { trial: t, raised: [], because: [] },
  };
}

/** One trial of letters, in the order the reference gives. */
function whole(history: History, before: State, letters: Letters): { state: State; answer: Answer } {
  const { policy } = history;
  const t = before.trial + 1;
  record(history, t, letters);
  const state = policy.clearBefore.some((set) => isIn(policy, set, letters))
    ? asAtTheStart(policy, t)
    : before;

  const raised = state.signals.map((watch, index) => {
    const signal = policy.signals[index]!;
    return watch.quiet === null && holds(history, signal.condition, watch.start, t);
  });
  const because = new Map<string, Because>();
  for (const [index, watch] of state.signals.entries())
    if (raised[index])
      for (const reason of reasons(history, policy.signals[index]!.condition, watch.start, t))
        because.set(reason.rule, reason);
  const clear = policy.clearAfter.some((condition, index) =>
    holds(history, condition, state.clears[index]!, t),
  );

  const answer: Answer = {
    trial: t,
    raised: policy.signals.filter((_, index) => raised[index]).map(({ name }) => name),
    because: [...because.values()],
  };
  if (clear) return { state: asAtTheStart(policy, t + 1), answer };
  return { state: afterPlace(policy, respond(history, state, raised, t), t), answer };
}

/** The memory after the raises of trial `t`: all clearing first, then every quiet time that begins. */
function respond(history: History, state: State, raised: readonly boolean[], t: number): State {
  const { policy } = history;
  const restart = policy.signals.some((signal, index) => raised[index] && signal.response === "restart");
  const signals = state.signals.map((watch, index): Watch => {
    const signal = policy.signals[index]!;
    const rested = watch.quiet === null ? watch : rest(history, signal, watch, t);
    const clears = restart || (raised[index] && signal.response === "own");
    const cleared = clears ? { start: t + 1, quiet: null } : rested;
    return raised[index] ? beginQuiet(policy, signal, cleared, t) : cleared;
  });
  return { ...state, signals, clears: restart ? state.clears.map(() => t + 1) : state.clears };
}

/** Reads one row after the state; `history` is cut back to that state first, so that states may be gone back to. */
export function step(history: History, state: State, row: Row): { state: State; answer: Answer } {
  const letters = readRow(history.policy, row);
  if (letters !== null) return whole(history, state, letters);
  if (history.policy.missing === "break") return broken(history, state);
  return { state, answer: { trial: null, raised: [], because: [] } };
}

export function begin(policy: Policy): { history: History; state: State } {
  return { history: newHistory(policy), state: asAtTheStart(policy, 1) };
}

/** What the policy says at each row of a stream. */
export function answers(policy: Policy, rows: readonly Row[]): readonly Answer[] {
  const { history, state: first } = begin(policy);
  let state = first;
  return rows.map((row) => {
    const next = step(history, state, row);
    state = next.state;
    return next.answer;
  });
}

/** Every string of `rows` of the given length, with the answers to all of it; strings that begin alike share the work. */
export function forEveryString(
  policy: Policy,
  rows: readonly Row[],
  length: number,
  visit: (string: readonly Row[], given: readonly Answer[]) => void,
): void {
  const { history, state } = begin(policy);
  const string: Row[] = [];
  const given: Answer[] = [];
  const extend = (from: State): void => {
    if (string.length === length) {
      visit(string, given);
      return;
    }
    for (const row of rows) {
      const next = step(history, from, row);
      string.push(row);
      given.push(next.answer);
      extend(next.state);
      string.pop();
      given.pop();
    }
  };
  extend(state);
}
