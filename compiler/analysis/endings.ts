/** How a run may end: the places without hope of an exit, whether an exit is certain, the chances of its kinds. */
import type { Automaton } from "../machine/automaton.ts";
import type { Chain, Marks } from "./chain.ts";
import type { StartLaw } from "./state-law.ts";

/** By place, 1 where no exit can be reached any more. */
export function findHopeless(chain: Chain): Uint8Array {
  const { size, classCount, classStart, rowStart, rowLeave, target, markSet } = chain.shape;
  const hopeless = new Uint8Array(size);
  for (let k = 0; k < classCount; k++) {
    let hope = false;
    for (let i = classStart[k]!; i < classStart[k + 1]! && !hope; i++) {
      if (markSet[i] !== 0) hope = true;
      for (let m = rowLeave[i]!; m < rowStart[i + 1]!; m++) if (hopeless[target[m]!] === 0) hope = true;
    }
    if (!hope) hopeless.fill(1, classStart[k]!, classStart[k + 1]!);
  }
  return hopeless;
}

/** Whether an exit is certain from every place the law may begin in. */
export function isCertain(chain: Chain, hopeless: Uint8Array, law: StartLaw): boolean {
  if (!hopeless.includes(1)) return true;
  const { classCount, classStart, rowStart, rowLeave, target } = chain.shape;
  const doomed = hopeless.slice();
  for (let k = 0; k < classCount; k++) {
    let mayFail = false;
    for (let i = classStart[k]!; i < classStart[k + 1]!; i++)
      for (let m = rowLeave[i]!; m < rowStart[i + 1]!; m++) if (doomed[target[m]!] === 1) mayFail = true;
    if (mayFail) doomed.fill(1, classStart[k]!, classStart[k + 1]!);
  }
  return law.places.every((place, s) => law.weights[s] === 0 || doomed[place] === 0);
}

/** By place, the probability of a move from a place with hope to one without. */
export function intoHopeless(chain: Chain, hopeless: Uint8Array): Float64Array {
  const { size, rowLeave, rowStart, target } = chain.shape;
  const into = new Float64Array(size);
  for (let i = 0; i < size; i++) {
    if (hopeless[i] === 1) continue;
    for (let m = rowLeave[i]!; m < rowStart[i + 1]!; m++)
      if (hopeless[target[m]!] === 1) into[i]! += chain.move[m]!;
  }
  return into;
}

/** By place, the probability of an exit whose output satisfies the predicate. */
export function exitsOfKind(
  { columns, output }: Automaton,
  marks: Marks,
  chain: Chain,
  probability: Float64Array,
  isKind: (output: number) => boolean,
): Float64Array {
  const { size, stateOf } = chain.shape;
  const sums = new Float64Array(size);
  for (let place = 0; place < size; place++) {
    for (let column = 0; column < columns; column++) {
      const at = stateOf[place]! * columns + column;
      if (marks[at] === 1 && isKind(output[at]!)) sums[place]! += probability[column]!;
    }
  }
  return sums;
}
