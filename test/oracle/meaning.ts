/**
 * When a condition holds, word for word from the table of the language reference: a question about the trials from `start`
 * (the first after memory was clear) to `t`, answered by looking at those trials and nothing else. No automaton, no state:
 * every form searches the past anew. Answers are remembered by (condition, start, t), which changes no answer.
 */
import {
  type Condition,
  countOf,
  type Letters,
  lettersOf,
  type Pattern,
  type Policy,
  type SetExpr,
} from "./policy.ts";

/** The trials so far, numbered from 1; a broken trial has a number and no letters. */
export type History = {
  readonly policy: Policy;
  readonly trials: (Letters | null)[];
  /** By trial t, then condition, then start. */
  readonly known: Map<Condition, Map<number, boolean>>[];
};

export function newHistory(policy: Policy): History {
  return { policy, trials: [], known: [] };
}

/** Makes `letters` trial number `t`, forgetting what was there and after. */
export function record(history: History, t: number, letters: Letters | null): void {
  history.trials.length = t - 1;
  history.known.length = t - 1;
  history.trials.push(letters);
  history.known.push(new Map());
}

/** Is a trial of these letters in the SET? */
export function isIn(policy: Policy, set: SetExpr, letters: Letters): boolean {
  switch (set.kind) {
    case "letter":
      return letters.includes(set.name);
    case "group": {
      const group = policy.groups.find(({ name }) => name === set.name);
      if (group === undefined) throw new Error(`no group is called ${set.name}`);
      return isIn(policy, group.set, letters);
    }
    case "any":
      return true;
    case "union":
      return set.members.some((member) => isIn(policy, member, letters));
    case "meet":
      return isIn(policy, set.left, letters) && isIn(policy, set.right, letters);
    case "except":
      return isIn(policy, set.left, letters) && !isIn(policy, set.right, letters);
  }
}

/** The letters a SET consists of: those it names, or with one alphabet all it contains. */
export function lettersIn(policy: Policy, set: SetExpr): readonly string[] {
  const [only, ...others] = policy.alphabets;
  if (only !== undefined && others.length === 0)
    return lettersOf(only).filter((letter) => isIn(policy, set, [letter]));
  if (set.kind === "letter") return [set.name];
  if (set.kind === "union") return set.members.flatMap((member) => lettersIn(policy, member));
  const group = set.kind === "group" && policy.groups.find(({ name }) => name === set.name);
  if (group) return lettersIn(policy, group.set);
  throw new Error("not a SET of letters");
}

/** The failures assigned to the letters of a SET, which must be the same for all of them. */
export function assignedTo(policy: Policy, set: SetExpr): SetExpr {
  const letter = lettersIn(policy, set)[0];
  const assign = policy.assigns.find(({ from }) => lettersIn(policy, from).some((name) => name === letter));
  if (assign === undefined) throw new Error(`no failures are assigned to ${letter}`);
  return assign.to;
}

function inSet(history: History, set: SetExpr, t: number): boolean {
  const letters = history.trials[t - 1];
  if (!letters) throw new Error(`trial ${t} has no letters`);
  return isIn(history.policy, set, letters);
}

/** Are the trials from…to all in the SET? True when there are none. */
function allIn(history: History, set: SetExpr, from: number, to: number): boolean {
  for (let u = from; u <= to; u++) if (!inSet(history, set, u)) return false;
  return true;
}

/** Does the condition, with clear memory before trial `start`, hold at trial `t`? */
export function holds(history: History, condition: Condition, start: number, t: number): boolean {
  const known = history.known[t - 1];
  if (known === undefined || start > t) throw new Error(`no trials ${start} to ${t}`);
  const answers = known.get(condition) ?? new Map<number, boolean>();
  known.set(condition, answers);
  const answer = answers.get(start) ?? judge(history, condition, start, t);
  answers.set(start, answer);
  return answer;
}

function judge(history: History, condition: Condition, start: number, t: number): boolean {
  const number = (count: number | string): number => countOf(history.policy, count);
  switch (condition.kind) {
    case "set":
      return inSet(history, condition.set, t);
    case "run": {
      const first = t - number(condition.count) + 1;
      return first >= start && allIn(history, condition.set, first, t);
    }
    case "weakRun": {
      const failures = condition.failures ?? assignedTo(history.policy, condition.set);
      return weakRun(
        history,
        condition.set,
        failures,
        number(condition.gap),
        number(condition.count),
        start,
        t,
      );
    }
    case "scan": {
      let successes = 0;
      for (let u = Math.max(start, t - number(condition.window) + 1); u <= t; u++)
        if (inSet(history, condition.set, u)) successes++;
      return inSet(history, condition.set, t) && successes >= number(condition.count);
    }
    case "pattern": {
      for (let s = start; s <= t; s++) if (matches(history, condition.pattern, s, t + 1)) return true;
      return false;
    }
    case "rule": {
      const rule = history.policy.rules.find(({ name }) => name === condition.name);
      if (rule === undefined) throw new Error(`no rule is called ${condition.name}`);
      return holds(history, rule.condition, start, t);
    }
    case "separate":
      return separate(history, condition.operand, number(condition.count), start, t);
    case "overlapping":
      return overlapping(history, condition.operand, number(condition.count), start, t);
    case "then": {
      const within = condition.within === null ? Number.POSITIVE_INFINITY : number(condition.within);
      for (let s = start; s < t; s++)
        if (
          t - s <= within &&
          holds(history, condition.left, start, s) &&
          holds(history, condition.right, s + 1, t)
        )
          return true;
      return false;
    }
    case "unless": {
      const s = t - number(condition.within);
      if (s < start || !holds(history, condition.left, start, s)) return false;
      for (let u = s + 1; u <= t; u++) if (holds(history, condition.right, s + 1, u)) return false;
      return true;
    }
    case "and":
      return holds(history, condition.left, start, t) && holds(history, condition.right, start, t);
    case "or":
      return holds(history, condition.left, start, t) || holds(history, condition.right, start, t);
    case "not":
      return !holds(history, condition.operand, start, t);
  }
}

/** Is `t` the last of `count` successes, with at most `gap` failures and nothing else between neighbours? */
function weakRun(
  history: History,
  successes: SetExpr,
  failures: SetExpr,
  gap: number,
  count: number,
  start: number,
  t: number,
): boolean {
  if (!inSet(history, successes, t)) return false;
  if (count === 1) return true;
  for (let between = 0; between <= gap; between++) {
    const before = t - between - 1;
    if (before < start || !allIn(history, failures, before + 1, t - 1)) return false;
    if (weakRun(history, successes, failures, gap, count - 1, start, before)) return true;
  }
  return false;
}

/** The completions one after another, memory clear after each: is `t` the n-th, the 2n-th, …? */
function separate(history: History, operand: Condition, n: number, start: number, t: number): boolean {
  let completions = 0;
  let fresh = start;
  for (let u = start; u <= t; u++) {
    if (!holds(history, operand, fresh, u)) continue;
    completions++;
    fresh = u + 1;
    if (u === t) return completions % n === 0;
  }
  return false;
}

/** The completions with nothing cleared between, until the n-th, which clears memory and count: is `t` such an n-th? */
function overlapping(history: History, operand: Condition, n: number, start: number, t: number): boolean {
  let completions = 0;
  let fresh = start;
  for (let u = start; u <= t; u++) {
    if (!holds(history, operand, fresh, u)) continue;
    completions++;
    if (completions < n) continue;
    if (u === t) return true;
    completions = 0;
    fresh = u + 1;
  }
  return false;
}

/** Is the string of the trials s, …, end − 1 one of the pattern? */
function matches(history: History, pattern: Pattern, s: number, end: number): boolean {
  switch (pattern.kind) {
    case "letters":
      return end === s + 1 && inSet(history, pattern.set, s);
    case "choice":
      return pattern.options.some((option) => matches(history, option, s, end));
    case "sequence":
      return sequence(history, pattern.items, s, end);
    case "repeat":
      return repeat(history, pattern.item, pattern.least, pattern.most, s, end);
  }
}

function sequence(history: History, items: readonly Pattern[], s: number, end: number): boolean {
  const [first, ...rest] = items;
  if (first === undefined) return s === end;
  if (rest.length === 0) return matches(history, first, s, end);
  for (let middle = s; middle <= end; middle++)
    if (matches(history, first, s, middle) && sequence(history, rest, middle, end)) return true;
  return false;
}

/** At least `least` and at most `most` pieces, each a string of the item; empty pieces only help to reach `least`. */
function repeat(
  history: History,
  item: Pattern,
  least: number,
  most: number | null,
  s: number,
  end: number,
): boolean {
  if (s === end) return least === 0 || acceptsEmpty(item);
  if (most === 0) return false;
  const less = most === null ? null : most - 1;
  for (let middle = s + 1; middle <= end; middle++)
    if (matches(history, item, s, middle) && repeat(history, item, Math.max(0, least - 1), less, middle, end))
      return true;
  return false;
}

/** Is the empty string one of the pattern? */
export function acceptsEmpty(pattern: Pattern): boolean {
  switch (pattern.kind) {
    case "letters":
      return false;
    case "choice":
      return pattern.options.some(acceptsEmpty);
    case "sequence":
      return pattern.items.every(acceptsEmpty);
    case "repeat":
      return pattern.least === 0 || acceptsEmpty(pattern.item);
  }
}

/** The condition with every completion replaced by *no*: what it says of a stream in which nothing ever completes. */
export function onSilence(policy: Policy, condition: Condition): boolean {
  switch (condition.kind) {
    case "and":
      return onSilence(policy, condition.left) && onSilence(policy, condition.right);
    case "or":
      return onSilence(policy, condition.left) || onSilence(policy, condition.right);
    case "not":
      return !onSilence(policy, condition.operand);
    case "rule": {
      const rule = policy.rules.find(({ name }) => name === condition.name);
      return rule !== undefined && onSilence(policy, rule.condition);
    }
    default:
      return false;
  }
}
