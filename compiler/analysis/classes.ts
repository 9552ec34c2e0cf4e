/**
 * The strongly connected classes of a sparse graph given as an automaton's moves, and the order in which one class is
 * best swept. In: moves (some columns unused, some transitions skipped), the states to begin from. Out: class numbers
 * in reverse topological order: a move leads to the same class or to one of a lower number.
 *
 * Iterative throughout, so that 200,000 states in one path do no harm. Cost: one look at each move.
 * Source: Tarjan (1972), "Depth-first search and linear graph algorithms", SIAM J. Comput. 1:146.
 */

/** The moves of an automaton that count: along `usable` columns, and not marked in `skip`. */
export type Moves = {
  readonly states: number;
  readonly columns: number;
  readonly next: Int32Array;
  /** By state * columns + column: 1 for a transition that is no move. */
  readonly skip: Uint8Array;
  /** The columns that can occur, increasing. */
  readonly usable: Int32Array;
};

export type Classes = {
  readonly count: number;
  /** By state; -1 where none of the starts leads. */
  readonly classOf: Int32Array;
  /**
   * The states reached, class by class; those of class k stand at memberStart[k] to memberStart[k + 1], in
   * depth-first postorder from the class's entry, which is the last.
   */
  readonly members: Int32Array;
  readonly memberStart: Int32Array;
  /** By class: the member that was reached first. */
  readonly entry: Int32Array;
};

/** A walk that has spread over more states than this has told enough. */
const WIDEST_WALK = 4096;

/** The classes of all states that the starts lead to. */
export function findClasses(moves: Moves, starts: Int32Array): Classes {
  const { states } = moves;
  const classOf = new Int32Array(states).fill(-1);
  const order = new Int32Array(states).fill(-1);
  const low = new Int32Array(states);
  const position = new Int32Array(states);
  const path = new Int32Array(states);
  const open = new Int32Array(states);
  const finished = new Int32Array(states);
  const memberStart: number[] = [0];
  const entry: number[] = [];
  const { columns, next, skip, usable } = moves;
  let [visited, openCount, memberCount, finishedCount] = [0, 0, 0, 0];
  for (const start of starts) {
    if (order[start]! >= 0) continue;
    let depth = 0;
    path[0] = start;
    order[start] = low[start] = visited++;
    open[openCount++] = start;
    while (depth >= 0) {
      const state = path[depth]!;
      let descended = false;
      while (position[state]! < usable.length) {
        const move = state * columns + usable[position[state]!++]!;
        if (skip[move] === 1) continue;
        const target = next[move]!;
        if (order[target]! < 0) {
          order[target] = low[target] = visited++;
          open[openCount++] = target;
          path[++depth] = target;
          descended = true;
          break;
        }
        if (classOf[target]! < 0 && order[target]! < low[state]!) low[state] = order[target]!;
      }
      if (descended) continue;
      finished[finishedCount++] = state;
      depth--;
      if (depth >= 0 && low[state]! < low[path[depth]!]!) low[path[depth]!] = low[state]!;
      if (low[state] !== order[state]) continue;
      for (let member = -1; member !== state; ) {
        member = open[--openCount]!;
        classOf[member] = entry.length;
        memberCount++;
      }
      entry.push(state);
      memberStart.push(memberCount);
    }
  }
  return {
    count: entry.length,
    classOf,
    members: sortByClass(finished.subarray(0, finishedCount), classOf, memberStart),
    memberStart: new Int32Array(memberStart),
    entry: new Int32Array(entry),
  };
}

/** The states class by class, within each in the order given. */
function sortByClass(states: Int32Array, classOf: Int32Array, memberStart: readonly number[]): Int32Array {
  const cursor = new Int32Array(memberStart);
  const sorted = new Int32Array(states.length);
  for (let i = 0; i < states.length; i++) sorted[cursor[classOf[states[i]!]!]!++] = states[i]!;
  return sorted;
}

/**
 * The members of the class of `root` in depth-first postorder, `root` the last, written into `into` from `at` on.
 * Swept in this order a system x = c + Q x meets most successors before their predecessors. `seen` is by state and is
 * marked.
 */
export function writePostorder(
  moves: Moves,
  classOf: Int32Array,
  root: number,
  into: Int32Array,
  at: number,
  seen: Uint8Array,
  position: Int32Array,
  path: Int32Array,
): void {
  const { columns, next, skip, usable } = moves;
  const own = classOf[root]!;
  let depth = 0;
  let end = at;
  path[0] = root;
  seen[root] = 1;
  while (depth >= 0) {
    const state = path[depth]!;
    let descended = false;
    while (position[state]! < usable.length) {
      const move = state * columns + usable[position[state]!++]!;
      if (skip[move] === 1) continue;
      const target = next[move]!;
      if (seen[target] === 1 || classOf[target] !== own) continue;
      seen[target] = 1;
      path[++depth] = target;
      descended = true;
      break;
    }
    if (descended) continue;
    into[end++] = state;
    depth--;
  }
}

/**
 * By class, the member a walk from the class's entry meets most often in its first `steps` steps; ties go to the
 * smallest state. `weight` is by column. A member met often makes short cycles.
 */
export function findAnchors(moves: Moves, classes: Classes, weight: Float64Array, steps: number): Int32Array {
  const anchors = classes.entry.slice();
  const mass = new Float64Array(moves.states);
  const coming = new Float64Array(moves.states);
  const visits = new Float64Array(moves.states);
  const touched = new Int32Array(moves.states);
  for (let k = 0; k < classes.count; k++) {
    if (classes.memberStart[k + 1]! - classes.memberStart[k]! < 2) continue;
    const root = classes.entry[k]!;
    mass[root] = 1;
    let active = Int32Array.of(root);
    let best = root;
    for (let step = 0; step < steps && active.length <= WIDEST_WALK; step++) {
      const count = spread(moves, classes.classOf, weight, active, mass, coming, touched);
      active = touched.slice(0, count);
      for (let i = 0; i < count; i++) {
        const state = active[i]!;
        mass[state] = coming[state]!;
        visits[state]! += coming[state]!;
        coming[state] = 0;
        // Visits only grow, so that whoever leads at the end has led when last visited.
        const more = visits[state]! - visits[best]!;
        if (more > 0 || (more === 0 && state < best)) best = state;
      }
    }
    for (let i = 0; i < active.length; i++) mass[active[i]!] = 0;
    anchors[k] = best;
  }
  return anchors;
}

/**
 * One step of the walk within a class: moves the mass of `active` into `coming`, lists where it went, empties `mass`.
 */
function spread(
  moves: Moves,
  classOf: Int32Array,
  weight: Float64Array,
  active: Int32Array,
  mass: Float64Array,
  coming: Float64Array,
  touched: Int32Array,
): number {
  const { columns, next, skip, usable } = moves;
  let count = 0;
  for (let i = 0; i < active.length; i++) {
    const state = active[i]!;
    for (let c = 0; c < usable.length; c++) {
      const column = usable[c]!;
      const move = state * columns + column;
      if (skip[move] === 1) continue;
      const target = next[move]!;
      if (classOf[target] !== classOf[state]) continue;
      if (coming[target] === 0) touched[count++] = target;
      coming[target]! += mass[state]! * weight[column]!;
    }
    mass[state] = 0;
  }
  return count;
}
