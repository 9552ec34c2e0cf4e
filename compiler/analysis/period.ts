/**
 * The period of a chain seen from where it begins: the largest d for which every place can be given a phase 0 to d -
 * 1 such that each move leads from a phase to the next. Blocks of n trials make d = n; most chains have d = 1.
 *
 * Source: Denardo (1977), "Periods of connected networks", Math. Oper. Res. 2:20.
 */
import type { Shape } from "./chain.ts";

export type Phases = {
  readonly period: number;
  /** By place. */
  readonly phaseOf: Int32Array;
};

/** The phases of all places; those of `starts` (places) are counted from the first of them, which has phase 0. */
export function findPhases(shape: Shape, starts: Int32Array): Phases {
  const { size, rowStart, target, loopSet } = shape;
  const level = new Int32Array(size).fill(-1);
  const queue = new Int32Array(size);
  let period = 0;
  let count = 0;
  for (const start of starts) {
    if (level[start]! >= 0) continue;
    level[start] = 0;
    queue[count++] = start;
    for (let head = count - 1; head < count; head++) {
      const place = queue[head]!;
      if (loopSet[place] !== 0) return { period: 1, phaseOf: new Int32Array(size) };
      for (let m = rowStart[place]!; m < rowStart[place + 1]!; m++) {
        const to = target[m]!;
        if (level[to]! < 0) {
          level[to] = level[place]! + 1;
          queue[count++] = to;
        } else {
          period = greatestDivisor(period, Math.abs(level[place]! + 1 - level[to]!));
          if (period === 1) return { period: 1, phaseOf: new Int32Array(size) };
        }
      }
    }
  }
  if (period === 0) return { period: 1, phaseOf: new Int32Array(size) };
  return { period, phaseOf: level.map((steps) => steps % period) };
}

function greatestDivisor(a: number, b: number): number {
  while (b !== 0) [a, b] = [b, a % b];
  return a;
}
