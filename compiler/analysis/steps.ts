/** One step of a chain, backwards on values by place or forwards on masses by place; non-negative sums only. */
import type { Chain } from "./chain.ts";

/** into = Q from: the expectation of the values after a step. `lanes` values a place stand side by side. */
export function stepBack(chain: Chain, from: Float64Array, into: Float64Array, lanes: 1 | 2): void {
  if (lanes === 2) stepBackTwo(chain, from, into);
  else stepBackOne(chain, from, into);
}

function stepBackOne(chain: Chain, from: Float64Array, into: Float64Array): void {
  const { move, loop, shape } = chain;
  const { rowStart, target, size } = shape;
  let m = 0;
  for (let i = 0; i < size; i++) {
    let sum = loop[i]! * from[i]!;
    for (const to = rowStart[i + 1]!; m < to; m++) sum += move[m]! * from[target[m]!]!;
    into[i] = sum;
  }
}

function stepBackTwo(chain: Chain, from: Float64Array, into: Float64Array): void {
  const { move, loop, shape } = chain;
  const { rowStart, target, size } = shape;
  let m = 0;
  for (let i = 0; i < size; i++) {
    const stays = loop[i]!;
    let one = stays * from[2 * i]!;
    let two = stays * from[2 * i + 1]!;
    for (const to = rowStart[i + 1]!; m < to; m++) {
      const probability = move[m]!;
      const at = 2 * target[m]!;
      one += probability * from[at]!;
      two += probability * from[at + 1]!;
    }
    into[2 * i] = one;
    into[2 * i + 1] = two;
  }
}

/** into = from Q: where the masses are after a step; what exits is left out. */
export function stepForth(chain: Chain, from: Float64Array, into: Float64Array): void {
  const { move, loop, shape } = chain;
  const { rowStart, target, size } = shape;
  into.fill(0);
  for (let i = 0; i < size; i++) {
    const mass = from[i]!;
    if (mass === 0) continue;
    into[i]! += loop[i]! * mass;
    for (let m = rowStart[i]!, to = rowStart[i + 1]!; m < to; m++) into[target[m]!]! += move[m]! * mass;
  }
}
