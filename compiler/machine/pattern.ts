/**
 * Patterns: the positions of a pattern (Glushkov 1961, McNaughton & Yamada 1960) and the tracker that follows them all.
 *
 * A position is one mention of a SET with every repetition written out; `follow` says which may come next. A string of the
 * pattern may begin at any trial, so the state is the set of positions that some string ending at the last trial stands on
 * and that can still be followed; completion is standing on a last position.
 */
import type { Pattern, TrialSet } from "../policy.ts";
import { TooManyStates } from "./budget.ts";
import type { Succession } from "./explore.ts";

/** Most steps of work in placing a pattern: positions, links between them, and lists carried along. */
const MOST_LINKS = 20_000_000;

type Fragment = {
  readonly first: readonly number[];
  readonly last: readonly number[];
  readonly nullable: boolean;
};

type Positions = { readonly sets: TrialSet[]; readonly follow: Set<number>[]; links: number };

const EMPTY: Fragment = { first: [], last: [], nullable: true };

/** The tracker of `[PATTERN]`; `byColumn` turns a SET into its columns. */
export function trackPattern(
  pattern: Pattern,
  columns: number,
  byColumn: (set: TrialSet) => Uint8Array,
): Succession {
  const positions: Positions = { sets: [], follow: [], links: 0 };
  const whole = place(pattern, positions);
  const follow = positions.follow.map((following) => [...following]);
  const matches = positions.sets.map(byColumn);
  const isLast = new Uint8Array(follow.length);
  for (const position of whole.last) isLast[position] = 1;
  const words = Math.ceil(follow.length / 32);
  const enter = (position: number, column: number, into: Int32Array): number => {
    if ((matches[position] as Uint8Array)[column] === 0) return 0;
    if ((follow[position] as number[]).length > 0) (into[position >> 5] as number) |= 1 << (position & 31);
    return isLast[position] as number;
  };
  return {
    width: words,
    columns,
    step: (pool, at, column, into) => {
      into.fill(0);
      let completes = 0;
      for (const position of whole.first) completes |= enter(position, column, into);
      for (let word = 0; word < words; word++) {
        for (let bits = pool[at + word] as number; bits !== 0; bits &= bits - 1) {
          const position = word * 32 + 31 - Math.clz32(bits & -bits);
          for (const following of follow[position] as number[]) completes |= enter(following, column, into);
        }
      }
      return completes;
    },
  };
}

function place(pattern: Pattern, positions: Positions): Fragment {
  switch (pattern.kind) {
    case "letters": {
      const position = positions.sets.push(pattern.set) - 1;
      positions.follow.push(new Set());
      count(positions, 1);
      return { first: [position], last: [position], nullable: false };
    }
    case "choice":
      return either(pattern.options.map((option) => place(option, positions)));
    case "sequence":
      return pattern.items.reduce((before, item) => chain(before, place(item, positions), positions), EMPTY);
    case "repeat":
      return repeat(pattern.least, pattern.most, pattern.operand, positions);
    default:
      return pattern satisfies never;
  }
}

function either(options: readonly Fragment[]): Fragment {
  return {
    first: options.flatMap((option) => option.first),
    last: options.flatMap((option) => option.last),
    nullable: options.some((option) => option.nullable),
  };
}

function chain(before: Fragment, after: Fragment, positions: Positions): Fragment {
  link(before, after, positions);
  count(positions, before.first.length + before.last.length + after.first.length + after.last.length);
  return {
    first: before.nullable ? [...before.first, ...after.first] : before.first,
    last: after.nullable ? [...before.last, ...after.last] : after.last,
    nullable: before.nullable && after.nullable,
  };
}

function link(before: Fragment, after: Fragment, positions: Positions): void {
  count(positions, before.last.length * after.first.length);
  for (const position of before.last) {
    const follow = positions.follow[position] as Set<number>;
    for (const following of after.first) follow.add(following);
  }
}

/** `least..most`: the required copies side by side, then the optional ones nested: (x (x (x)?)?)?. */
function repeat(least: number, most: number | null, operand: Pattern, positions: Positions): Fragment {
  if (Math.max(least, most ?? 0) > MOST_LINKS) throw new TooManyStates();
  let whole = EMPTY;
  for (let copy = 0; copy < least; copy++) whole = chain(whole, place(operand, positions), positions);
  if (most === null) return chain(whole, loop(place(operand, positions), positions), positions);
  let optional = EMPTY;
  for (let copy = least; copy < most; copy++) {
    optional = { ...chain(place(operand, positions), optional, positions), nullable: true };
  }
  return chain(whole, optional, positions);
}

function loop(once: Fragment, positions: Positions): Fragment {
  link(once, once, positions);
  return { ...once, nullable: true };
}

function count(positions: Positions, links: number): void {
  positions.links += links;
  if (positions.links > MOST_LINKS) throw new TooManyStates();
}
