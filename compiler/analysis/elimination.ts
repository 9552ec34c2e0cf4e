/**
 * Compiled elimination without subtraction. For one class of a chain, solves y = c + Q' y, Q' being the moves within
 * the class with those to the anchor left out, by eliminating every place but the anchor. The order, the fill and the
 * slot of every number are found once (a `Program`); a run for new probabilities replays them.
 *
 * Every pivot is the sum of what leaves the place, not one minus what stays, so that no operation subtracts: each
 * result is right to a few n u relative to itself, whatever its size (Grassmann, Taksar & Heyman 1985, Oper. Res.
 * 33:1107; O'Cinneide 1993, Numer. Math. 65:109). Order: the least product of moves in and moves out (Markowitz 1957,
 * Management Science 3:255). Cost of a run: `flops`, about 2.3 ns each.
 *
 * Places are counted from the first of the class; the anchor is the last.
 */
import type { Chain, Shape } from "./chain.ts";

export type Program = {
  /** Places in the class. */
  readonly size: number;
  readonly slots: number;
  /** Moves within the class, those to the anchor included; in the order of the rows they have the slots from 1 on. */
  readonly moves: number;
  /** The places in the order of elimination; all but the anchor. */
  readonly order: Int32Array;
  /** Step s: the moves out of the place eliminated, from outStart[s] to outStart[s + 1]. */
  readonly outStart: Int32Array;
  readonly outSlot: Int32Array;
  readonly outPlace: Int32Array;
  /** Step s: the moves into it. */
  readonly inStart: Int32Array;
  readonly inSlot: Int32Array;
  readonly inPlace: Int32Array;
  /** For each move in and each move out of a step, in turn: the slot that takes their product. */
  readonly fill: Int32Array;
};

export type Factors = {
  readonly program: Program;
  /** By slot: for a move in, what share of the place's sums the other takes over; for a move out, its probability. */
  readonly slot: Float64Array;
  /** By step: the probability of leaving the place eliminated. */
  readonly pivot: Float64Array;
};

/** Larger classes are left to the iteration: the table of slots is dense. */
const MOST_PLACES = 2200;
/** Products a run may take for each move of the class, and in any case; beyond, sweeps are cheaper. */
const MOST_PRODUCTS_A_MOVE = 25;
const ALWAYS_ALLOWED = 30_000;

/** A class under symbolic elimination. */
type Draft = {
  readonly size: number;
  /** By place: the places its moves lead to, and those whose moves lead to it. */
  readonly outs: number[][];
  readonly ins: number[][];
  /** By place * size + place: the slot of the move; 0 where there is none. */
  readonly table: Int32Array;
  /** Slots given; slot 0 takes what is of no use. */
  slots: number;
  readonly order: number[];
  readonly outStart: number[];
  readonly outSlot: number[];
  readonly outPlace: number[];
  readonly inStart: number[];
  readonly inSlot: number[];
  readonly inPlace: number[];
  readonly fill: Int32Array;
  products: number;
};

/**
 * The program of a class, or null where elimination would cost too much: more than `mostProducts`, or than sweeps
 * would.
 */
export function compileElimination(shape: Shape, k: number, mostProducts?: number): Program | null {
  const first = shape.classStart[k]!;
  const size = shape.classStart[k + 1]! - first;
  if (size > MOST_PLACES) return null;
  let moves = 0;
  for (let i = first; i < first + size; i++) moves += shape.rowLeave[i]! - shape.rowStart[i]!;
  const most = mostProducts ?? Math.max(ALWAYS_ALLOWED, MOST_PRODUCTS_A_MOVE * moves);
  const draft = beginDraft(size, most);
  for (let i = 0; i < size; i++)
    for (let m = shape.rowStart[first + i]!; m < shape.rowLeave[first + i]!; m++)
      makeSlot(draft, i, shape.target[m]! - first);
  if (!eliminateAll(draft, most)) return null;
  return {
    size,
    slots: draft.slots + 1,
    moves,
    order: new Int32Array(draft.order),
    outStart: new Int32Array(draft.outStart),
    outSlot: new Int32Array(draft.outSlot),
    outPlace: new Int32Array(draft.outPlace),
    inStart: new Int32Array(draft.inStart),
    inSlot: new Int32Array(draft.inSlot),
    inPlace: new Int32Array(draft.inPlace),
    fill: draft.fill.slice(0, draft.products),
  };
}

function beginDraft(size: number, most: number): Draft {
  const lists = (): number[][] => Array.from({ length: size }, () => []);
  return {
    size,
    outs: lists(),
    ins: lists(),
    table: new Int32Array(size * size),
    slots: 0,
    order: [],
    outStart: [0],
    outSlot: [],
    outPlace: [],
    inStart: [0],
    inSlot: [],
    inPlace: [],
    fill: new Int32Array(most),
    products: 0,
  };
}

/** A new move from i to j; its slot. */
function makeSlot(draft: Draft, i: number, j: number): number {
  draft.outs[i]!.push(j);
  draft.ins[j]!.push(i);
  const slot = ++draft.slots;
  draft.table[i * draft.size + j] = slot;
  return slot;
}

/** Eliminates every place but the anchor; false as soon as it is plain that it takes more than `most` products. */
function eliminateAll(draft: Draft, most: number): boolean {
  const { size, outs, ins } = draft;
  const degree = new Float64Array(size);
  const measure = (i: number): void => {
    degree[i] = outs[i]!.length * ins[i]!.length;
  };
  for (let i = 0; i < size; i++) measure(i);
  degree[size - 1] = Number.POSITIVE_INFINITY;
  for (let step = 0; step < size - 1; step++) {
    let pivot = 0;
    for (let i = 1; i < size; i++) if (degree[i]! < degree[pivot]!) pivot = i;
    // Every place left costs at least as much, until few are left.
    const rest = Math.max(1, size - step - Math.sqrt(degree[pivot]!));
    if (draft.products + rest * degree[pivot]! > most) return false;
    eliminate(draft, pivot);
    degree[pivot] = Number.POSITIVE_INFINITY;
    for (const i of ins[pivot]!) if (i < size - 1) measure(i);
    for (const j of outs[pivot]!) if (j < size - 1) measure(j);
  }
  return true;
}

/** Eliminates one place: takes it out of the lists, records the step, and makes slots for the moves that arise. */
function eliminate(draft: Draft, pivot: number): void {
  const { size, table, outSlot, outPlace, inSlot, inPlace, fill } = draft;
  const outs = draft.outs[pivot]!;
  const ins = draft.ins[pivot]!;
  draft.order.push(pivot);
  for (const j of outs) {
    outSlot.push(table[pivot * size + j]!);
    outPlace.push(j);
    remove(draft.ins[j]!, pivot);
  }
  let products = draft.products;
  for (const i of ins) {
    inSlot.push(table[i * size + pivot]!);
    inPlace.push(i);
    remove(draft.outs[i]!, pivot);
    const row = i * size;
    for (let o = 0; o < outs.length; o++) {
      const j = outs[o]!;
      const slot = i === j ? 0 : table[row + j]!;
      fill[products++] = slot === 0 && i !== j ? makeSlot(draft, i, j) : slot;
    }
  }
  draft.products = products;
  draft.outStart.push(outSlot.length);
  draft.inStart.push(inSlot.length);
}

/** Takes a place out of a list; the last takes its place. */
function remove(places: number[], place: number): void {
  const last = places.pop()!;
  if (last !== place) places[places.indexOf(place)] = last;
}

/** The factors of class k under the chain's probabilities. */
export function factorClass(program: Program, chain: Chain, k: number): Factors {
  const { size, order, outStart, outSlot, inStart, inSlot, inPlace, fill } = program;
  const { rowStart, rowLeave, classStart } = chain.shape;
  const first = classStart[k]!;
  const slot = new Float64Array(program.slots);
  const pivot = new Float64Array(size - 1);
  const exit = chain.exit.slice(first, first + size);
  let next = 1;
  for (let i = first; i < first + size; i++)
    for (let m = rowStart[i]!; m < rowLeave[i]!; m++) slot[next++] = chain.move[m]!;
  let at = 0;
  for (let step = 0; step < size - 1; step++) {
    const place = order[step]!;
    const [outFrom, outTo] = [outStart[step]!, outStart[step + 1]!];
    let leaving = exit[place]!;
    for (let o = outFrom; o < outTo; o++) leaving += slot[outSlot[o]!]!;
    pivot[step] = leaving;
    const exitShare = exit[place]!;
    for (let i = inStart[step]!; i < inStart[step + 1]!; i++) {
      const share = slot[inSlot[i]!]! / leaving;
      slot[inSlot[i]!] = share;
      for (let o = outFrom; o < outTo; o++) slot[fill[at++]!]! += share * slot[outSlot[o]!]!;
      exit[inPlace[i]!]! += share * exitShare;
    }
  }
  return { program, slot, pivot };
}

/**
 * Solves y = c + Q' y on the class that begins at place `first`; `cost` and `into` are by place of the chain. With an
 * `anchorValue`, the values of the other places given that of the anchor: y = c + Q y there.
 */
export function solveByElimination(
  factors: Factors,
  first: number,
  cost: Float64Array,
  into: Float64Array,
  anchorValue: number | null,
): void {
  const { program, slot, pivot } = factors;
  const { size, order, outStart, outSlot, outPlace, inStart, inSlot, inPlace } = program;
  const sum = cost.slice(first, first + size);
  for (let step = 0; step < size - 1; step++) {
    const value = sum[order[step]!]!;
    if (value === 0) continue;
    for (let i = inStart[step]!; i < inStart[step + 1]!; i++) sum[inPlace[i]!]! += slot[inSlot[i]!]! * value;
  }
  const anchor = size - 1;
  const own = sum[anchor]!;
  sum[anchor] = anchorValue ?? 0;
  for (let step = size - 2; step >= 0; step--) {
    const place = order[step]!;
    let value = sum[place]!;
    for (let o = outStart[step]!; o < outStart[step + 1]!; o++)
      value += slot[outSlot[o]!]! * sum[outPlace[o]!]!;
    sum[place] = value / pivot[step]!;
  }
  sum[anchor] = anchorValue ?? own;
  into.set(sum, first);
}
