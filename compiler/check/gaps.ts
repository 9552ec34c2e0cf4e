/**
 * The failures of weak runs: which trials may stand in the gaps of `k SET gap r`.
 * In: the form, its SET and the assignment. Out: the failures, or null once the reason was reported. All letters of the
 * SET need the same assignment, unless the form names its failures; no trial may be success and failure.
 *
 * note [letters of a SET]: the letters whose every trial lies in the SET, when it is made of nothing else; otherwise
 * (`high & wet`) the letters named in it other than after `except`.
 */

import { setText } from "../../grammar/print.ts";
import type { ConditionTree } from "../../grammar/tree.ts";
import type { TrialSet } from "../policy.ts";
import { type Assignment, type Assignments, type LetterRef, namedLetters, wholeLetters } from "./assigns.ts";
import { listNames } from "./figures.ts";
import { evaluateSet, type Sets, type SetValue } from "./sets.ts";
import { areEqual, isEmpty, meet } from "./trials.ts";
import { shorten } from "./values.ts";

type WeakRun = Extract<ConditionTree, { kind: "weakRun" }>;

/** The failures of a weak run; `set` is null when its own fault was reported. */
export function failuresOf(
  tree: WeakRun,
  set: SetValue | null,
  assignments: Assignments,
  sets: Sets,
): TrialSet | null {
  const named = tree.failures === undefined ? undefined : evaluateSet(tree.failures, sets);
  if (set === null || named === null) return null;
  const failures = named?.trials ?? assignedFailures(tree, set, assignments, sets);
  if (failures === null || isEmpty(meet(set.trials, failures))) return failures;
  const written = tree.failures === undefined ? "the failures assigned to it" : shorten(tree.failures);
  const span = tree.failures?.span ?? tree.set.span;
  sets.scope.report("gap_overlap", span, `some trials are both in ${shorten(tree.set)} and in ${written}`, {
    hint: tree.failures === undefined ? "name the failures: `gap r of SET`" : leaveOut(tree),
    data: { set: setText(tree.set) },
  });
  return null;
}

function leaveOut(tree: WeakRun): string {
  const failures = tree.failures === undefined ? "SET" : setText(tree.failures);
  return `a trial is a success or a failure: \`${failures} except ${setText(tree.set)}\``;
}

/** The one assignment of all letters of the SET. */
function assignedFailures(
  tree: WeakRun,
  set: SetValue,
  assignments: Assignments,
  sets: Sets,
): TrialSet | null {
  const letters = wholeLetters(set, sets) ?? namedLetters(set, sets);
  const assigned = letters.flatMap((letter) => {
    const assignment = assignments.byLetter.get(letter.id);
    return assignment ? [{ letter, assignment }] : [];
  });
  const [first] = assigned;
  const other = assigned.find(
    ({ assignment }) => first && !areEqual(assignment.failures, first.assignment.failures),
  );
  if (first !== undefined && other !== undefined) {
    reportDifferent(tree, first, other, sets);
    return null;
  }
  if (first !== undefined && assigned.length === letters.length) return first.assignment.failures;
  const hasFault = letters.some(({ id }) => assignments.byLetter.get(id) === null);
  if (hasFault || !assignments.isWhole || sets.scope.isLibrary) return null;
  reportUnassigned(tree, letters, first, assignments, sets);
  return null;
}

type Assigned = { readonly letter: LetterRef; readonly assignment: Assignment };

function reportDifferent(tree: WeakRun, first: Assigned, other: Assigned, sets: Sets): void {
  const [a, b] = [first, other].map(
    ({ letter, assignment }) => `"${letter.name}" is assigned to "${assignment.written}"`,
  );
  const message = `the letters of ${shorten(tree.set)} have different failures: ${a}, ${b}`;
  sets.scope.report("gap_unclear", tree.span, message, {
    hint: nameThem(tree),
    related: [first, other].map(({ letter, assignment }) => ({
      span: assignment.span,
      message: `"${letter.name}" is assigned here`,
    })),
    data: { set: setText(tree.set), letters: [first.letter.name, other.letter.name] },
  });
}

function reportUnassigned(
  tree: WeakRun,
  letters: readonly LetterRef[],
  first: Assigned | undefined,
  assignments: Assignments,
  sets: Sets,
): void {
  const without = letters.filter(({ id }) => !assignments.byLetter.has(id)).map(({ name }) => name);
  const fault =
    without.length > 0 ? `no failures are assigned to ${listNames(without)}` : "it names no letter";
  sets.scope.report(
    "gap_unclear",
    tree.span,
    `what may stand in the gaps of ${shorten(tree)} is unclear: ${fault}`,
    {
      hint: `${assignThem(without, first)}${nameThem(tree)}`,
      data: { set: setText(tree.set), letters: without },
    },
  );
}

/** The assign that is lacking, unless a letter would be assigned to itself. */
function assignThem(letters: readonly string[], first: Assigned | undefined): string {
  const target = first?.assignment.written ?? "FAILURE";
  const words = target.split(/\W+/);
  if (letters.length === 0 || letters.some((name) => words.includes(name))) return "";
  const pairs = letters.slice(0, 6).map((name) => `${name} -> ${target}`);
  return `assign them (\`assign ${pairs.join(", ")}\`), or `;
}

function nameThem(tree: WeakRun): string {
  const gap = tree.gap.kind === "literal" ? tree.gap.text : tree.gap.name.text;
  return `name the failures in the rule: \`gap ${gap} of …\``;
}
