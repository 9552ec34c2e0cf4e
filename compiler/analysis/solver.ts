/**
 * One class of a chain, ready to be solved: y = c + Q' y (a cycle, the anchor's column left out) or, with the
 * anchor's value given, y = c + Q y at the other places. By compiled elimination where that is cheap, else by sweeps;
 * which of the two depends on the shape alone, so that equal questions have equal answers to the last bit.
 */
import type { Chain, Shape } from "./chain.ts";
import { contractClass } from "./contraction.ts";
import {
  compileElimination,
  type Factors,
  factorClass,
  type Program,
  solveByElimination,
} from "./elimination.ts";
import { type SweepLimits, solveBySweeps, TO_THE_LAST } from "./sweeps.ts";

/** A shape with the programs of its classes, compiled when first needed. */
export type Plan = {
  readonly shape: Shape;
  readonly programOf: (k: number) => Program | null;
};

export type SolverOptions = {
  /** Whether elimination may be used; sweeps alone otherwise. */
  readonly elimination: boolean;
  readonly limits: SweepLimits;
  /** Whether a solution whose plain bound is large is improved in double-double. */
  readonly refine: boolean;
};

export const DEFAULT_OPTIONS: SolverOptions = { elimination: true, limits: TO_THE_LAST, refine: true };

/**
 * Class k under given probabilities. Costs and results are by place of the chain; only those of the class are
 * touched.
 */
export type ClassSolver = {
  readonly chain: Chain;
  readonly k: number;
  readonly first: number;
  readonly anchor: number;
  /** into = N cost; what stands in `into` is the first guess of the sweeps. */
  readonly solveCycle: (cost: Float64Array, into: Float64Array, limits?: SweepLimits) => void;
  /** Two of them at once. */
  readonly solveCycles: (
    cost: Float64Array,
    into: Float64Array,
    cost2: Float64Array,
    into2: Float64Array,
  ) => void;
  /** The values of the other places given into[anchor]; the moves to the anchor count. */
  readonly solveOthers: (cost: Float64Array, into: Float64Array, limits?: SweepLimits) => void;
};

/** A plan for the shape, nothing compiled yet. */
export function planShape(shape: Shape, options: SolverOptions = DEFAULT_OPTIONS): Plan {
  const programs: (Program | null | undefined)[] = [];
  const programOf = (k: number): Program | null => {
    const known = programs[k];
    if (known !== undefined) return known;
    const program = options.elimination ? compileElimination(shape, k) : null;
    programs[k] = program;
    return program;
  };
  return { shape, programOf };
}

/** A chain with the solvers of its classes and what they have found out so far. */
export type System = {
  readonly chain: Chain;
  readonly options: SolverOptions;
  /** The solver of class k, made when first needed. */
  readonly solverOf: (k: number) => ClassSolver;
  /** By place: the chance that a cycle from here ends by leaving the class; where known. */
  readonly cycleGain: Float64Array;
  /** By class: 1 where cycleGain is known. */
  readonly gainKnown: Uint8Array;
};

/** The system of a chain, nothing solved yet. */
export function prepareSystem(plan: Plan, chain: Chain, options: SolverOptions = DEFAULT_OPTIONS): System {
  const solvers: (ClassSolver | undefined)[] = [];
  const solverOf = (k: number): ClassSolver => {
    const known = solvers[k];
    if (known) return known;
    const solver = makeSolver(plan, chain, k, options);
    solvers[k] = solver;
    return solver;
  };
  const { size, classCount } = chain.shape;
  return {
    chain,
    options,
    solverOf,
    cycleGain: new Float64Array(size),
    gainKnown: new Uint8Array(classCount),
  };
}

/** Finds the class's cycleGain unless it is known. */
export function findGain(system: System, k: number): void {
  if (system.gainKnown[k] === 1) return;
  const { chain, cycleGain } = system;
  const solver = system.solverOf(k);
  cycleGain.set(chain.exit.subarray(solver.first, solver.anchor + 1), solver.first);
  solver.solveCycle(chain.exit, cycleGain);
  system.gainKnown[k] = 1;
}

function makeSolver(plan: Plan, chain: Chain, k: number, options: SolverOptions): ClassSolver {
  const first = chain.shape.classStart[k]!;
  const anchor = chain.shape.classStart[k + 1]! - 1;
  const program = first === anchor ? null : plan.programOf(k);
  const base = { chain, k, first, anchor };
  if (program) return { ...base, ...byElimination(factorClass(program, chain, k), first) };
  return { ...base, ...bySweeps(chain, k, first, anchor, options.limits) };
}

type Methods = Pick<ClassSolver, "solveCycle" | "solveCycles" | "solveOthers">;

function byElimination(factors: Factors, first: number): Methods {
  const anchorAt = first + factors.program.size - 1;
  return {
    solveCycle: (cost, into) => solveByElimination(factors, first, cost, into, null),
    solveCycles: (cost, into, cost2, into2) => {
      solveByElimination(factors, first, cost, into, null);
      solveByElimination(factors, first, cost2, into2, null);
    },
    solveOthers: (cost, into) => solveByElimination(factors, first, cost, into, into[anchorAt]!),
  };
}

function bySweeps(chain: Chain, k: number, first: number, anchor: number, limits: SweepLimits): Methods {
  const rows = contractClass(chain, k);
  return {
    solveCycle: (cost, into, own = limits) => {
      solveBySweeps(chain, rows, [cost], [into], own);
    },
    solveCycles: (cost, into, cost2, into2) => {
      solveBySweeps(chain, rows, [cost, cost2], [into, into2], limits);
    },
    solveOthers: (cost, into, own = limits) => {
      const { rowAnchor, rowLeave } = chain.shape;
      const value = into[anchor]!;
      const withAnchor = cost.slice(0, anchor + 1);
      for (let i = first; i < anchor; i++)
        for (let m = rowAnchor[i]!; m < rowLeave[i]!; m++) withAnchor[i]! += chain.move[m]! * value;
      solveBySweeps(chain, rows, [withAnchor], [into], own);
      into[anchor] = value;
    },
  };
}
