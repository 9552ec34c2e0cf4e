/**
 * Expected totals until exit: for a cost by place, what a chain from each place is expected to pay until it exits.
 * In: a system, non-negative costs. Out: by place, the total. With the exit probabilities of one kind as costs it is
 * the chance of that kind; with the conditional variances, the variance.
 *
 * Only non-negative numbers are added, so that each total is right to about 1e-14 relative, whatever its size. A
 * place that cannot exit pays nothing (its class is left out); one that may end there pays until it does.
 * Source: Kemeny & Snell (1960), *Finite Markov Chains*, 3.3 and 6.1.
 */
import { findGain, type System } from "./solver.ts";

/** By place, the expected total of `cost` (not negative) until exit; 0 in classes without any way out. */
export function expectedTotals(system: System, cost: Float64Array): Float64Array {
  const { chain, cycleGain } = system;
  const { classStart, rowStart, rowLeave, target, exitSet } = chain.shape;
  const totals = new Float64Array(chain.shape.size);
  const own = cost.slice();
  for (let k = 0; k < chain.shape.classCount; k++) {
    const first = classStart[k]!;
    const anchor = classStart[k + 1]! - 1;
    let leaves = false;
    for (let i = first; i <= anchor; i++) {
      if (exitSet[i] !== 0) leaves = true;
      for (let m = rowLeave[i]!; m < rowStart[i + 1]!; m++) own[i]! += chain.move[m]! * totals[target[m]!]!;
    }
    if (!leaves) continue;
    if (first === anchor) {
      totals[anchor] = own[anchor]! / chain.exit[anchor]!;
      continue;
    }
    const solver = system.solverOf(k);
    findGain(system, k);
    totals.set(own.subarray(first, anchor + 1), first);
    solver.solveCycle(own, totals);
    const value = totals[anchor]! / cycleGain[anchor]!;
    for (let i = first; i < anchor; i++) totals[i]! += Math.max(0, 1 - cycleGain[i]!) * value;
    totals[anchor] = value;
    solver.solveOthers(own, totals);
  }
  return totals;
}
