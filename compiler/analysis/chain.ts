/**
 * Automaton and column probabilities to a sparse Markov chain. In: an automaton, which transitions are marked (by their
 * output), where the chain begins, the columns that can occur. Out: its shape (everything but numbers, made once), then,
 * for each choice of probabilities, its values.
 *
 * A place is a state the start leads to with positive probability. Places stand class by class (see classes.ts), a move
 * leading to the same class or an earlier one; within a class in depth-first postorder from its *anchor*, which is the
 * last. In an absorbing chain a marked transition is an exit; else it is a move like any other, and the marks are kept
 * beside. Parallel moves are merged; no probability is ever one minus another: what leaves a place, what exits and what
 * stays are own sums, so that a place's loop is what the others leave over, exactly.
 *
 * Layout: the moves of place i, its loop apart, stand at rowStart[i] to rowStart[i + 1]: first those within its class, then
 * from rowAnchor[i] the move to the anchor, then from rowLeave[i] those to earlier classes.
 */
import { InternalError } from "../../grammar/internal-error.ts";
import type { Automaton } from "../machine/automaton.ts";
import { type Classes, findAnchors, findClasses, type Moves, writePostorder } from "./classes.ts";
import { type ColumnSets, numberSets, type SetNumbering, sumSets } from "./column-sets.ts";
import type { DoubleDoubles } from "./double-double.ts";

export type Shape = {
  readonly size: number;
  readonly stateOf: Int32Array;
  /** By state of the automaton; -1 where the chain never is. */
  readonly placeOf: Int32Array;
  readonly classCount: number;
  /** Class k holds the places classStart[k] to classStart[k + 1]. */
  readonly classStart: Int32Array;
  readonly rowStart: Int32Array;
  readonly rowAnchor: Int32Array;
  readonly rowLeave: Int32Array;
  /** By move: the place it leads to, and the columns that take it. */
  readonly target: Int32Array;
  readonly moveSet: Int32Array;
  /** By place: the columns that stay. */
  readonly loopSet: Int32Array;
  /** By place: the columns whose transition is marked. */
  readonly markSet: Int32Array;
  /** By place: all columns but those that stay. */
  readonly outSet: Int32Array;
  /** By place: the columns that leave the class, exits of the chain included. */
  readonly exitSet: Int32Array;
  readonly sets: ColumnSets;
  /** The largest number of moves from one place. */
  readonly widestRow: number;
  readonly absorbing: boolean;
};

export type Chain = {
  readonly shape: Shape;
  /** By set of columns: its probability. */
  readonly setSums: DoubleDoubles;
  /** The same rounded, by move. */
  readonly move: Float64Array;
  /** By place: the probabilities of loopSet, markSet, outSet, exitSet. */
  readonly loop: Float64Array;
  readonly mark: Float64Array;
  readonly out: Float64Array;
  readonly exit: Float64Array;
};

/** Which transitions are marked: 1 by state * columns + column. */
export type Marks = Uint8Array;

/** How many steps of a walk choose the anchor of a class. */
const ANCHOR_STEPS = 24;

/** The marks of the transitions whose output satisfies the predicate. */
export function markTransitions(automaton: Automaton, isMarked: (output: number) => boolean): Marks {
  const { output } = automaton;
  const marks = new Uint8Array(output.length);
  for (let i = 0; i < output.length; i++) if (output[i] !== 0 && isMarked(output[i]!)) marks[i] = 1;
  return marks;
}

/** The columns of positive probability, increasing. */
export function usableColumns(probabilities: DoubleDoubles): Int32Array {
  const usable: number[] = [];
  for (let column = 0; column < probabilities.high.length; column++)
    if (probabilities.high[column]! > 0) usable.push(column);
  return Int32Array.from(usable);
}

/**
 * The shape of the chain from `starts` (states) along `usable` columns. `weights`, by column, decide which members become
 * anchors: any positive numbers do, good ones make short cycles.
 */
export function shapeChain(
  automaton: Automaton,
  marks: Marks,
  absorbing: boolean,
  starts: Int32Array,
  usable: Int32Array,
  weights: Float64Array,
): Shape {
  const { states, columns, next } = automaton;
  if (marks.length !== states * columns) throw new InternalError("marks do not fit the automaton");
  const skip = absorbing ? marks : new Uint8Array(marks.length);
  const moves: Moves = { states, columns, next, skip, usable };
  const classes = findClasses(moves, starts);
  const anchors = findAnchors(moves, classes, weights, ANCHOR_STEPS);
  const stateOf = placeStates(moves, classes, anchors);
  const placeOf = new Int32Array(states).fill(-1);
  for (let place = 0; place < stateOf.length; place++) placeOf[stateOf[place]!] = place;
  const numbering = numberSets(columns);
  const rows = writeRows(moves, marks, classes, stateOf, placeOf, numbering);
  return {
    size: stateOf.length,
    stateOf,
    placeOf,
    classCount: classes.count,
    classStart: classes.memberStart,
    ...rows,
    sets: numbering.finish(),
    absorbing,
  };
}

/** The states in the order of their places. */
function placeStates(moves: Moves, classes: Classes, anchors: Int32Array): Int32Array {
  const stateOf = new Int32Array(classes.members.length);
  const seen = new Uint8Array(moves.states);
  const position = new Int32Array(moves.states);
  const path = new Int32Array(classes.members.length);
  for (let k = 0; k < classes.count; k++)
    writePostorder(
      moves,
      classes.classOf,
      anchors[k]!,
      stateOf,
      classes.memberStart[k]!,
      seen,
      position,
      path,
    );
  return stateOf;
}

type Rows = Pick<
  Shape,
  | "rowStart"
  | "rowAnchor"
  | "rowLeave"
  | "target"
  | "moveSet"
  | "loopSet"
  | "markSet"
  | "outSet"
  | "exitSet"
  | "widestRow"
>;

/** The rows of all places: moves merged and sorted into the three segments, and the four sums by place. */
function writeRows(
  moves: Moves,
  marks: Marks,
  classes: Classes,
  stateOf: Int32Array,
  placeOf: Int32Array,
  numbering: SetNumbering,
): Rows {
  const size = stateOf.length;
  const { columns, next, skip, usable } = moves;
  const [rowStart, rowAnchor, rowLeave] = [0, 1, 1].map((extra) => new Int32Array(size + 1 - extra)) as [
    Int32Array,
    Int32Array,
    Int32Array,
  ];
  const capacity = size * usable.length;
  const target = new Int32Array(capacity);
  const moveSet = new Int32Array(capacity);
  const loopSet = new Int32Array(size);
  const markSet = new Int32Array(size);
  const outSet = new Int32Array(size);
  const exitSet = new Int32Array(size);
  // By place: where the current row holds its move there; older entries lie before the row and do not count.
  const slot = new Int32Array(size).fill(-1);
  let count = 0;
  let widestRow = 0;
  for (let place = 0; place < size; place++) {
    const state = stateOf[place]!;
    const own = classes.classOf[state]!;
    const first = classes.memberStart[own]!;
    rowStart[place] = count;
    for (const column of usable) {
      const transition = state * columns + column;
      if (marks[transition] === 1) markSet[place] = numbering.extend(markSet[place]!, column);
      if (skip[transition] === 1) {
        outSet[place] = numbering.extend(outSet[place]!, column);
        exitSet[place] = numbering.extend(exitSet[place]!, column);
        continue;
      }
      const to = placeOf[next[transition]!]!;
      if (to === place) {
        loopSet[place] = numbering.extend(loopSet[place]!, column);
        continue;
      }
      outSet[place] = numbering.extend(outSet[place]!, column);
      if (to < first) exitSet[place] = numbering.extend(exitSet[place]!, column);
      let at = slot[to]!;
      if (at < rowStart[place]!) {
        at = count++;
        slot[to] = at;
        target[at] = to;
        moveSet[at] = 0;
      }
      moveSet[at] = numbering.extend(moveSet[at]!, column);
    }
    const anchor = classes.memberStart[own + 1]! - 1;
    const leave = partition(target, moveSet, rowStart[place]!, count, (to) => to >= first);
    rowLeave[place] = leave;
    rowAnchor[place] = partition(target, moveSet, rowStart[place]!, leave, (to) => to !== anchor);
    widestRow = Math.max(widestRow, count - rowStart[place]!);
  }
  rowStart[size] = count;
  return {
    rowStart,
    rowAnchor,
    rowLeave,
    target: target.slice(0, count),
    moveSet: moveSet.slice(0, count),
    loopSet,
    markSet,
    outSet,
    exitSet,
    widestRow,
  };
}

/** Brings the moves whose target satisfies the predicate to the front of the row; where the others begin. */
function partition(
  target: Int32Array,
  moveSet: Int32Array,
  from: number,
  to: number,
  isFirst: (place: number) => boolean,
): number {
  let end = from;
  for (let i = from; i < to; i++) {
    const place = target[i]!;
    if (!isFirst(place)) continue;
    const set = moveSet[i]!;
    for (let j = i; j > end; j--) {
      target[j] = target[j - 1]!;
      moveSet[j] = moveSet[j - 1]!;
    }
    target[end] = place;
    moveSet[end++] = set;
  }
  return end;
}

/** The chain of a shape under given probabilities by column, exactly the shape's usable columns being positive. */
export function fillChain(shape: Shape, probabilities: DoubleDoubles): Chain {
  const setSums = sumSets(shape.sets, probabilities);
  const pick = (sets: Int32Array): Float64Array => {
    const values = new Float64Array(sets.length);
    for (let i = 0; i < sets.length; i++) values[i] = setSums.high[sets[i]!]!;
    return values;
  };
  return {
    shape,
    setSums,
    move: pick(shape.moveSet),
    loop: pick(shape.loopSet),
    mark: pick(shape.markSet),
    out: pick(shape.outSet),
    exit: pick(shape.exitSet),
  };
}
