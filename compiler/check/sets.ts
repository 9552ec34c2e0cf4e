/**
 * SETs: sets of trials named by letters, groups, `{…}`, `&`, `except` and `any`.
 * In: the tree of a SET. Out: its trials, with the letters named positively in it, or null once the reason was reported.
 * An empty SET is an error at the smallest part that is empty. Groups are worked out in the order they need one another.
 */
import type { Name, SetTree } from "../../grammar/tree.ts";
import type { Alphabet, TrialSet } from "../policy.ts";
import type { Of } from "./declarations.ts";
import { reportCycle } from "./lets.ts";
import { namesInSet } from "./mentions.ts";
import { dependencyOrder } from "./order.ts";
import { type EntityOf, resolve, type Scope } from "./scope.ts";
import { addAll, addLetter, allTrials, isEmpty, meet, type Trials, without } from "./trials.ts";
import { shorten } from "./values.ts";

export type SetValue = {
  readonly trials: TrialSet;
  /** The letters named in it other than after `except`, as `letterId`s, in the order of mention. */
  readonly named: ReadonlySet<number>;
};

export type Sets = {
  readonly scope: Scope;
  readonly alphabets: readonly Alphabet[];
  /** By alphabet, the `letterId` of its first letter. */
  readonly offsets: readonly number[];
  /** Null when there are too many combinations to number. */
  readonly trials: Trials | null;
  /** By index; null for one whose fault was reported. */
  readonly groups: readonly (SetValue | null)[];
};

const PLACE = "a SET is made of letters and groups";

/** Works out every group. */
export function evaluateGroups(
  groups: readonly Of<"group">[],
  alphabets: readonly Alphabet[],
  trials: Trials | null,
  scope: Scope,
): Sets {
  const { order, cycles } = dependencyOrder(groups.length, (index) => groupsIn(groups[index]?.set, scope));
  const values: (SetValue | null)[] = groups.map(() => null);
  const offsets: number[] = [];
  let next = 0;
  for (const { letters } of alphabets) {
    offsets.push(next);
    next += letters.length;
  }
  const sets: Sets = { scope, alphabets, offsets, trials, groups: values };
  const onCycle = new Set(cycles.flat());
  for (const cycle of cycles)
    reportCycle(
      cycle.map((index) => groups[index]!),
      "group",
      scope,
    );
  for (const index of order) {
    const group = groups[index];
    if (group !== undefined && !onCycle.has(index)) values[index] = evaluateSet(group.set, sets);
  }
  return sets;
}

function groupsIn(set: SetTree | undefined, scope: Scope): number[] {
  if (set === undefined) return [];
  return namesInSet(set).flatMap((name) => {
    const entity = scope.names.get(name.text);
    return entity?.role === "group" ? [entity.index] : [];
  });
}

/** The trials of a SET. */
export function evaluateSet(tree: SetTree, sets: Sets): SetValue | null {
  const value = evaluateParts(tree, sets);
  if (value === null || !isEmpty(value.trials)) return value;
  const [reason, hint] = emptyReason(tree);
  sets.scope.report("set_empty", tree.span, `${shorten(tree)} holds no trial: ${reason}`, {
    hint,
    data: { set: shorten(tree).slice(1, -1) },
  });
  return null;
}

function evaluateParts(tree: SetTree, sets: Sets): SetValue | null {
  switch (tree.kind) {
    case "any":
      return sets.trials === null ? null : { trials: allTrials(sets.trials), named: new Set() };
    case "named":
      return evaluateName(tree.name, sets);
    case "union":
      return evaluateUnion(tree.members, sets);
    case "meet":
    case "except": {
      const left = evaluateSet(tree.left, sets);
      const right = evaluateSet(tree.right, sets);
      if (left === null || right === null) return null;
      if (tree.kind === "except") return { trials: without(left.trials, right.trials), named: left.named };
      return { trials: meet(left.trials, right.trials), named: new Set([...left.named, ...right.named]) };
    }
  }
}

/** The members together; letters are added in place, so that a SET of many costs no more than its trials. */
function evaluateUnion(members: readonly SetTree[], sets: Sets): SetValue | null {
  const all = new Uint8Array(sets.trials?.symbols ?? 0);
  const named = new Set<number>();
  let isWhole = sets.trials !== null;
  for (const member of members) {
    const letter = member.kind === "named" ? sets.scope.names.get(member.name.text) : undefined;
    if (letter?.role === "letter") {
      named.add(addNamed(all, letter, sets));
      continue;
    }
    const value = evaluateSet(member, sets);
    if (value === null) {
      isWhole = false;
    } else {
      addAll(all, value.trials);
      for (const id of value.named) named.add(id);
    }
  }
  return isWhole ? { trials: all, named } : null;
}

/** Adds the trials of a letter; returns its id. */
function addNamed(set: TrialSet, letter: EntityOf<"letter">, sets: Sets): number {
  if (sets.trials !== null) addLetter(set, sets.trials, letter.statistic, letter.letter);
  return (sets.offsets[letter.statistic] ?? 0) + letter.letter;
}

function evaluateName(name: Name, sets: Sets): SetValue | null {
  const entity = resolve(sets.scope, name, ["letter", "group"], PLACE);
  if (entity === null || sets.trials === null) return null;
  if (entity.role === "group") return sets.groups[entity.index] ?? null;
  const trials = new Uint8Array(sets.trials.symbols);
  return { trials, named: new Set([addNamed(trials, entity, sets)]) };
}

/** Why nothing is left, and what to write instead. */
function emptyReason(tree: SetTree): readonly [string, string] {
  if (tree.kind === "meet") {
    const [left, right] = [shorten(tree.left), shorten(tree.right)];
    const hint =
      `\`&\` joins letters of different statistics; for either write \`{${left}, ${right}}\``.replaceAll(
        '"',
        "",
      );
    return [`no trial is in ${left} and in ${right} at once`, hint];
  }
  if (tree.kind === "except") {
    return [
      `all of ${shorten(tree.left)} is in ${shorten(tree.right)}`,
      "take less away, or leave the SET out",
    ];
  }
  return ["nothing is in it", "name a letter"];
}
