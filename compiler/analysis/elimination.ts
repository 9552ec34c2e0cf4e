/**
 * Compiled elimination without subtraction. For one class of a chain, solves y = c + Q' y, Q' being the moves within the
 * class with those to the anchor left out, by eliminating every place but the anchor. The order, the fill and the slot of
 * every number are found once (a `Program`); a run for new probabilities replays them.
 *
 * Every pivot is the sum of what leaves the place, not one minus what stays, so that no operation subtracts: each result is
 * right to a few n u relative to itself, whatever its size (Grassmann, Taksar & Heyman 1985, Oper. Res. 33:1107;
 * O'Cinneide 1993, Numer. Math. 65:109). Order: the least product of moves in and moves out (Markowitz 1957, Management
 * Science 3:255). Cost of a run: `flops`, about 2.3 ns each.
 *
 * Places are counted from the first of the class; the anchor is the last.
 */
import type { Chain, Shape } from "./chain.ts";

export type Program = {
  /** Places in the class. */
  readonly size: number;
  readonly slots: number;
  /** By move within the class (those to the anchor included), in the order of the rows: its slot. */
  readonly slotOfMove: Int32Array;
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
export const MOST_PLACES = 2200;
/** Multiplications a run may take. */
const MOST_PRODUCTS = 2_500_000;

type Slots = { readonly table: Int32Array; count: number };

/** The program of a class, or null where elimination would cost too much. */
export function compileElimination(shape: Shape, k: number): Program | null {
  const first = shape.classStart[k]!;
  const size = shape.classStart[k + 1]! - first;
  if (size > MOST_PLACES) return null;
  const outs: number[][] = Array.from({ length: size }, () => []);
  const ins: number[][] = Array.from({ length: size }, () => []);
  const slots: Slots = { table: new Int32Array(size * size).fill(-1), count: 0 };
  const slotOfMove: number[] = [];
  for (let i = 0; i < size; i++) {
    for (let m = shape.rowStart[first + i]!; m < shape.rowLeave[first + i]!; m++) {
      const j = shape.target[m]! - first;
      slotOfMove.push(slots.count);
      slots.table[i * size + j] = slots.count++;
      outs[i]!.push(j);
      ins[j]!.push(i);
    }
  }
  return eliminate(size, outs, ins, slots, Int32Array.from(slotOfMove));
}

function eliminate(
  size: number,
  outs: number[][],
  ins: number[][],
  slots: Slots,
  slotOfMove: Int32Array,
): Program | null {
  const order = new Int32Array(size - 1);
  const gone = new Uint8Array(size);
  const outStart: number[] = [0];
  const inStart: number[] = [0];
  const [outSlot, outPlace, inSlot, inPlace, fill]: number[][] = [[], [], [], [], []];
  const remaining = (places: number[]): number[] => places.filter((place) => gone[place] === 0);
  const degree = new Float64Array(size);
  for (let i = 0; i < size; i++) degree[i] = outs[i]!.length * ins[i]!.length;
  for (let step = 0; step < size - 1; step++) {
    let pivot = -1;
    for (let i = 0; i < size - 1; i++)
      if (gone[i] === 0 && (pivot < 0 || degree[i]! < degree[pivot]!)) pivot = i;
    if (fill!.length + degree[pivot]! > MOST_PRODUCTS) return null;
    order[step] = pivot;
    gone[pivot] = 1;
    for (const j of outs[pivot]!) {
      outSlot!.push(slots.table[pivot * size + j]!);
      outPlace!.push(j);
    }
    for (const i of ins[pivot]!) {
      inSlot!.push(slots.table[i * size + pivot]!);
      inPlace!.push(i);
      outs[i] = remaining(outs[i]!);
      for (const j of outs[pivot]!) fill!.push(i === j ? -1 : slotFor(slots, size, i, j, outs, ins));
    }
    for (const j of outs[pivot]!) {
      ins[j] = remaining(ins[j]!);
      degree[j] = outs[j]!.length * ins[j]!.length;
    }
    for (const i of ins[pivot]!) degree[i] = outs[i]!.length * ins[i]!.length;
    outStart.push(outSlot!.length);
    inStart.push(inSlot!.length);
  }
  return {
    size,
    slots: slots.count + 1,
    slotOfMove,
    order,
    outStart: Int32Array.from(outStart),
    outSlot: Int32Array.from(outSlot!),
    outPlace: Int32Array.from(outPlace!),
    inStart: Int32Array.from(inStart),
    inSlot: Int32Array.from(inSlot!),
    inPlace: Int32Array.from(inPlace!),
    // What would fall on a loop is of no use: it goes to the slot after the last.
    fill: Int32Array.from(fill!, (slot) => (slot < 0 ? slots.count : slot)),
  };
}

/** The slot of the move from i to j, made where there is none. */
function slotFor(
  slots: Slots,
  size: number,
  i: number,
  j: number,
  outs: number[][],
  ins: number[][],
): number {
  const known = slots.table[i * size + j]!;
  if (known >= 0) return known;
  slots.table[i * size + j] = slots.count;
  outs[i]!.push(j);
  ins[j]!.push(i);
  return slots.count++;
}

/** The factors of class k under the chain's probabilities. */
export function factorClass(program: Program, chain: Chain, k: number): Factors {
  const { size, order, outStart, outSlot, inStart, inSlot, inPlace, fill } = program;
  const { rowStart, rowLeave, classStart } = chain.shape;
  const first = classStart[k]!;
  const slot = new Float64Array(program.slots);
  const pivot = new Float64Array(size - 1);
  const exit = chain.exit.slice(first, first + size);
  let move = 0;
  for (let i = first; i < first + size; i++)
    for (let m = rowStart[i]!; m < rowLeave[i]!; m++) slot[program.slotOfMove[move++]!] = chain.move[m]!;
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
