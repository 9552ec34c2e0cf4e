/**
 * Automaton and column probabilities to a sparse Markov chain. In: an automaton, which transitions are marked (by
 * their output), where the chain begins, the columns that can occur. Out: its shape (everything but numbers, made
 * once), then, for each choice of probabilities, its values.
 *
 * A place is a state the start leads to with positive probability. Places stand class by class (see classes.ts), a
 * move leading to the same class or an earlier one; within a class in depth-first postorder from its *anchor*, which
 * is the last. In an absorbing chain a marked transition is an exit; else it is a move like any other, and the marks
 * are kept beside. Parallel moves are merged; no probability is ever one minus another: what leaves a place, what
 * exits and what stays are own sums, so that a place's loop is what the others leave over, exactly.
 *
 * Layout: the moves of place i, its loop apart, stand at rowStart[i] to rowStart[i + 1]: first those within its
 * class, then from rowAnchor[i] the move to the anchor, then from rowLeave[i] those to earlier classes.
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
const ANCHOR_STEPS = 16;

/** The marks of the transitions that give something out. */
export function markTransitions({ output }: Automaton): Marks {
  const marks = new Uint8Array(output.length);
  for (let i = 0; i < output.length; i++) if (output[i] !== 0) marks[i] = 1;
  return marks;
}

/** The columns of positive probability, increasing. */
export function usableColumns(probabilities: DoubleDoubles): Int32Array {
  const usable: number[] = [];
  for (let column = 0; column < probabilities.high.length; column++)
    if (probabilities.high[column]! > 0) usable.push(column);
  return Int32Array.from(usable);
}

/** What a chain's shape depends on before its anchors are chosen. */
export type Skeleton = { readonly moves: Moves; readonly marks: Marks; readonly classes: Classes };

/**
 * The skeleton of the chain from `starts` (states) along `usable` columns; `absorbing` says whether marked
 * transitions end it.
 */
export function findSkeleton(
  automaton: Automaton,
  marks: Marks,
  absorbing: boolean,
  starts: Int32Array,
  usable: Int32Array,
): Skeleton {
  const { states, columns, next } = automaton;
  if (marks.length !== states * columns) throw new InternalError("marks do not fit the automaton");
  const moves = { states, columns, next, skip: absorbing ? marks : new Uint8Array(marks.length), usable };
  return { moves, marks, classes: findClasses(moves, starts) };
}

/** By class, a state that a walk with the given chances of columns meets often: good anchors make short cycles. */
export function chooseAnchors({ moves, classes }: Skeleton, weights: Float64Array): Int32Array {
  return findAnchors(moves, classes, weights, ANCHOR_STEPS);
}

/** The shape of the chain with the given anchors. */
export function shapeChain({ moves, marks, classes }: Skeleton, anchors: Int32Array): Shape {
  const stateOf = placeStates(moves, classes, anchors);
  const placeOf = new Int32Array(moves.states).fill(-1);
  for (let place = 0; place < stateOf.length; place++) placeOf[stateOf[place]!] = place;
  const numbering = numberSets(moves.columns);
  const rows = writeRows(moves, marks, classes, stateOf, placeOf, numbering);
  return {
    size: stateOf.length,
    stateOf,
    placeOf,
    classCount: classes.count,
    classStart: classes.memberStart,
    ...rows,
    sets: numbering.finish(),
  };
}

/** The states in the order of their places. */
function placeStates(moves: Moves, classes: Classes, anchors: Int32Array): Int32Array {
  const stateOf = classes.members.slice();
  const position = new Int32Array(moves.states);
  const path = new Int32Array(stateOf.length);
  const seen = new Uint8Array(moves.states);
  for (let k = 0; k < classes.count; k++) {
    // The members come in postorder from the entry.
    if (anchors[k] === classes.entry[k]) continue;
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
  }
  return stateOf;
}

type Rows = Omit<Shape, "size" | "stateOf" | "placeOf" | "classCount" | "classStart" | "sets">;

/** Rows under construction: the arrays of a shape, with room to spare. */
type Draft = { -readonly [K in keyof Rows]: Rows[K] } & {
  readonly moves: Moves;
  readonly marks: Marks;
  readonly placeOf: Int32Array;
  readonly extend: SetNumbering["extend"];
  /** By place: where the current row holds its move there; older entries lie before the row and do not count. */
  readonly slot: Int32Array;
  count: number;
};

/** The rows of all places: moves merged and sorted into the three segments, and the four sets by place. */
function writeRows(
  moves: Moves,
  marks: Marks,
  classes: Classes,
  stateOf: Int32Array,
  placeOf: Int32Array,
  numbering: SetNumbering,
): Rows {
  const size = stateOf.length;
  const capacity = size * moves.usable.length;
  const byPlace = (): Int32Array => new Int32Array(size);
  const draft: Draft = {
    moves,
    marks,
    placeOf,
    extend: numbering.extend,
    slot: byPlace().fill(-1),
    count: 0,
    rowStart: new Int32Array(size + 1),
    rowAnchor: byPlace(),
    rowLeave: byPlace(),
    target: new Int32Array(capacity),
    moveSet: new Int32Array(capacity),
    loopSet: byPlace(),
    markSet: byPlace(),
    outSet: byPlace(),
    exitSet: byPlace(),
    widestRow: 0,
  };
  for (let k = 0; k < classes.count; k++) {
    const first = classes.memberStart[k]!;
    const end = classes.memberStart[k + 1]!;
    for (let place = first; place < end; place++) {
      writeRow(draft, place, stateOf[place]!, first);
      sortRow(draft, place, first, end - 1);
    }
  }
  const {
    slot: _slot,
    count,
    moves: _moves,
    marks: _marks,
    placeOf: _places,
    extend: _extend,
    ...rows
  } = draft;
  return { ...rows, target: rows.target.slice(0, count), moveSet: rows.moveSet.slice(0, count) };
}

/** The moves and sets of one place; `first` is the first place of its class. */
function writeRow(draft: Draft, place: number, state: number, first: number): void {
  const { moves, marks, placeOf, extend, slot, target, moveSet } = draft;
  const { columns, next, skip, usable } = moves;
  const begin = draft.count;
  let [loop, mark, out, exit] = [0, 0, 0, 0];
  let count = begin;
  for (const column of usable) {
    const transition = state * columns + column;
    if (marks[transition] === 1) mark = extend(mark, column);
    if (skip[transition] === 1) {
      out = extend(out, column);
      exit = extend(exit, column);
      continue;
    }
    const to = placeOf[next[transition]!]!;
    if (to === place) {
      loop = extend(loop, column);
      continue;
    }
    out = extend(out, column);
    if (to < first) exit = extend(exit, column);
    let at = slot[to]!;
    if (at < begin) {
      at = count++;
      slot[to] = at;
      target[at] = to;
      moveSet[at] = 0;
    }
    moveSet[at] = extend(moveSet[at]!, column);
  }
  draft.loopSet[place] = loop;
  draft.markSet[place] = mark;
  draft.outSet[place] = out;
  draft.exitSet[place] = exit;
  draft.rowStart[place] = begin;
  draft.rowStart[place + 1] = count;
  draft.count = count;
  draft.widestRow = Math.max(draft.widestRow, count - begin);
}

/** Sorts the moves of a row into those within the class, that to the anchor, those to earlier classes; stable. */
function sortRow(
  { rowStart, rowAnchor, rowLeave, target, moveSet }: Draft,
  place: number,
  first: number,
  anchor: number,
): void {
  const begin = rowStart[place]!;
  let [within, toAnchor] = [begin, begin];
  for (let m = begin, end = rowStart[place + 1]!; m < end; m++) {
    const to = target[m]!;
    if (to < first) continue;
    const at = to === anchor ? toAnchor : within;
    const set = moveSet[m]!;
    for (let j = m; j > at; j--) {
      target[j] = target[j - 1]!;
      moveSet[j] = moveSet[j - 1]!;
    }
    target[at] = to;
    moveSet[at] = set;
    toAnchor++;
    if (to !== anchor) within++;
  }
  rowAnchor[place] = within;
  rowLeave[place] = toAnchor;
}

/** The chain of a shape under given probabilities by column, exactly the shape's usable columns being positive. */
export function fillChain(shape: Shape, probabilities: DoubleDoubles): Chain {
  const setSums = sumSets(shape.sets, probabilities);
  const { high } = setSums;
  return {
    shape,
    setSums,
    move: gather(shape.moveSet, high),
    loop: gather(shape.loopSet, high),
    mark: gather(shape.markSet, high),
    out: gather(shape.outSet, high),
    exit: gather(shape.exitSet, high),
  };
}

/** The values of the sets. */
function gather(sets: Int32Array, bySet: Float64Array): Float64Array {
  const values = new Float64Array(sets.length);
  for (let i = 0; i < sets.length; i++) values[i] = bySet[sets[i]!]!;
  return values;
}
