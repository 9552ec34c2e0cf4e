/**
 * The assignment: one function from letters to the SETs of their failures, gathered from all assigns of a policy.
 * In: `assign` declarations. Out: failures by letter. A letter is assigned once, and to no trial that has it.
 */
import type { Span } from "../../grammar/span.ts";
import type { SetTree } from "../../grammar/tree.ts";
import type { TrialSet } from "../policy.ts";
import type { Of } from "./declarations.ts";
import { evaluateSet, type Sets, type SetValue } from "./sets.ts";
import { addLetter, areEqual, countByLetter } from "./trials.ts";
import { shorten } from "./values.ts";

export type Assignment = { readonly failures: TrialSet; readonly written: string; readonly span: Span };

export type Assignments = {
  /** By `letterId`; null for a letter whose assignment was found at fault. */
  readonly byLetter: ReadonlyMap<number, Assignment | null>;
  /** False when an assign could not be read, so that nothing can be said of letters without one. */
  readonly isWhole: boolean;
};

/** Gathers the assignment. */
export function checkAssigns(assigns: readonly Of<"assign">[], sets: Sets): Assignments {
  const byLetter = new Map<number, Assignment | null>();
  let isWhole = true;
  for (const { pairs } of assigns) {
    for (const { success, failure, span } of pairs) {
      const successes = evaluateSet(success, sets);
      const failures = evaluateSet(failure, sets);
      if (successes === null || failures === null) {
        isWhole = false;
      } else {
        const written = shorten(failure).slice(1, -1);
        assignLetters(success, successes, { failures: failures.trials, written, span }, sets, byLetter);
      }
    }
  }
  return { byLetter, isWhole };
}

function assignLetters(
  tree: SetTree,
  successes: SetValue,
  assignment: Assignment,
  sets: Sets,
  byLetter: Map<number, Assignment | null>,
): void {
  const { report } = sets.scope;
  const letters = wholeLetters(successes, sets);
  if (letters === null) {
    report(
      "assign_unclear",
      tree.span,
      `${shorten(tree)} is no letter and no choice of letters, so no failures can be assigned to it`,
      {
        hint: "assign the letters one by one, or name the failures in the rule: `gap r of SET`",
      },
    );
    return;
  }
  const held = sets.alphabets.map(
    (_, index) => sets.trials && countByLetter(sets.trials, assignment.failures, index),
  );
  for (const { id, name, alphabet, letter } of letters) {
    const first = byLetter.get(id);
    if (first === null) continue;
    if (first !== undefined) {
      report("assigned_twice", tree.span, `"${name}" is already assigned to "${first.written}"`, {
        hint: `assign "${name}" once, to everything that may stand in its gaps: \`{…, …}\``,
        related: [{ span: first.span, message: `"${name}" is assigned here` }],
        data: { letter: name, first: first.written, second: assignment.written },
      });
    } else if ((held[alphabet]?.[letter] ?? 0) > 0) {
      byLetter.set(id, null);
      report(
        "assigned_to_itself",
        assignment.span,
        `"${name}" is assigned to "${assignment.written}", which holds trials of "${name}" itself`,
        {
          hint: `leave it out: \`${assignment.written} except ${name}\``,
          data: { letter: name, failures: assignment.written },
        },
      );
    } else {
      byLetter.set(id, assignment);
    }
  }
}

export type LetterRef = {
  readonly id: number;
  readonly name: string;
  readonly alphabet: number;
  readonly letter: number;
};

/** The letters whose every trial is in the SET when it is made of nothing else; null when it is not. */
export function wholeLetters(set: SetValue, sets: Sets): readonly LetterRef[] | null {
  const { trials } = sets;
  if (trials === null) return null;
  const covered = new Uint8Array(trials.symbols);
  const letters = sets.alphabets.flatMap((alphabet, index) => {
    const whole = trials.symbols / alphabet.letters.length;
    const counts = countByLetter(trials, set.trials, index);
    return refs(sets, index).filter(({ letter }) => counts[letter] === whole);
  });
  for (const { alphabet, letter } of letters) addLetter(covered, trials, alphabet, letter);
  return letters.length > 0 && areEqual(covered, set.trials) ? letters : null;
}

/** The letters named positively in a SET. */
export function namedLetters(set: SetValue, sets: Sets): readonly LetterRef[] {
  return sets.alphabets.flatMap((_, index) => refs(sets, index)).filter(({ id }) => set.named.has(id));
}

function refs(sets: Sets, alphabet: number): LetterRef[] {
  const offset = sets.offsets[alphabet] ?? 0;
  const letters = sets.alphabets[alphabet]?.letters ?? [];
  return letters.map(({ name }, letter) => ({ id: offset + letter, name, alphabet, letter }));
}
