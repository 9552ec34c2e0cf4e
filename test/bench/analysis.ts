/** Machine to ARL with its proven bound, against mathjs `lusolve` on I - Q; and the first solve of a fresh process. */
import { execFileSync } from "node:child_process";
import { all, create } from "mathjs";
import { prepareRunLengths } from "../../compiler/analysis/run-lengths.ts";
import { compile, type Machine } from "../../compiler/compile.ts";
import { policyOf, ZONE_TESTS } from "../machine/compiled.ts";
import { type Figure, summary, time } from "./figure.ts";

const math = create(all ?? {});

/** Chances of the eight zones of a standard normal statistic with cuts at -3 … 3 (Abramowitz & Stegun, Table 26.1). */
const ZONES = [
  0.00134989803163009, 0.0214002339165491, 0.135905121983278, 0.341344746068543, 0.341344746068543,
  0.135905121983278, 0.0214002339165491, 0.00134989803163009,
];

export function benchAnalysis(): Figure[] {
  return [zones(), scanWarm(), scanCold()];
}

function probabilitiesOf(machine: Machine, letters: readonly number[]) {
  const high = new Float64Array(machine.columns);
  letters.forEach((p, letter) => {
    const column = machine.columnOf[letter] as number;
    high[column] = (high[column] as number) + p;
  });
  return { high, low: new Float64Array(machine.columns) };
}

function zones(): Figure {
  const machine = machineOf(ZONE_TESTS);
  const probabilities = probabilitiesOf(machine, ZONES);
  const solver = prepareRunLengths(machine, (output) => output !== 0);
  const solve = () => {
    const lengths = solver.under(probabilities);
    return { mean: lengths.mean(), bound: lengths.relativeErrorBound() };
  };
  const ours = time(solve, 200, 100);
  const witness = () => meanByMathjs(machine, probabilities.high);
  const peer = time(witness, 5, 1);
  const { mean, bound } = solve();
  const difference = Math.abs(mean / witness() - 1);
  if (!(difference < 1e-10) || bound === null)
    throw new Error(`${mean} differs from mathjs by ${difference}`);
  const faster = peer.median / ours.median;
  return {
    name: "ARL of the zone tests (215 states) with its bound",
    state: "warm",
    ours,
    peer: { name: "mathjs lusolve", timing: peer },
    faster,
    target: ">= 100 x, <= 0.5 ms",
    reached: faster >= 100 && ours.median <= 0.5,
    checksum: `${mean.toPrecision(12)} +- ${bound.toExponential(1)}`,
  };
}

/** (I - Q) x = 1, dense. */
function meanByMathjs(machine: Machine, p: Float64Array): number {
  const { states, columns, next, output } = machine;
  const rows = Array.from({ length: states }, (_, state) => {
    const row = new Array<number>(states).fill(0);
    row[state] = 1;
    for (let column = 0; column < columns; column++) {
      const at = state * columns + column;
      if (output[at] !== 0) continue;
      const target = next[at] as number;
      row[target] = (row[target] as number) - (p[column] as number);
    }
    return row;
  });
  const solution = math.lusolve(math.matrix(rows), math.matrix(new Array(states).fill(1)));
  return Number(math.subset(solution, math.index(0, 0)));
}

function scanWarm(): Figure {
  const machine = machineOf(policyOf(2, "8 of 20 b"));
  const solver = prepareRunLengths(machine, (output) => output !== 0);
  const probabilities = probabilitiesOf(machine, [0.9, 0.1]);
  const solve = () => solver.under(probabilities).mean();
  const ours = time(solve, 7, 3);
  const bound = solver.under(probabilities).relativeErrorBound();
  return scanFigure("warm", ours, 60, `${solve().toPrecision(12)} +- ${bound?.toExponential(1)}`);
}

/** Run by this very bundle in a fresh process, which prints how long its first solve took. */
function scanCold(): Figure {
  const runs = Array.from({ length: 5 }, () =>
    execFileSync(process.execPath, [process.argv[1] as string, "--first-solve"], { encoding: "utf8" })
      .trim()
      .split(" "),
  );
  return scanFigure(
    "cold",
    summary(runs.map(([milliseconds]) => Number(milliseconds))),
    250,
    runs[0]?.[1] ?? "",
  );
}

/** The first solve of this process: milliseconds and the mean. */
export function firstSolve(): string {
  const machine = machineOf(policyOf(2, "8 of 20 b"));
  const probabilities = probabilitiesOf(machine, [0.9, 0.1]);
  const before = performance.now();
  const lengths = prepareRunLengths(machine, (output) => output !== 0).under(probabilities);
  const mean = lengths.mean();
  lengths.relativeErrorBound();
  return `${performance.now() - before} ${mean.toPrecision(12)}`;
}

function scanFigure(state: "warm" | "cold", ours: Figure["ours"], most: number, checksum: string): Figure {
  return {
    name: "ARL of 8 of 20 (77,520 states) with its bound",
    state,
    ours,
    peer: null,
    faster: null,
    target: `<= ${most} ms`,
    reached: ours.median <= most,
    checksum,
  };
}

function machineOf(text: string): Machine {
  const { machine } = compile(text);
  if (!machine) throw new Error("no machine");
  return machine;
}
