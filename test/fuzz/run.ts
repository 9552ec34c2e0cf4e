/** One fuzz loop as a process: `run.mjs FORMAT COUNT SEED` prints what it did, or fails with the breach. */
import { fuzzCsv } from "../data/fuzz.ts";
import { type Fuzzed, fuzzMachines, fuzzSnapshots } from "../runtime/fuzz.ts";
import { fuzzPolicies } from "./policies.ts";

const loops: Record<string, (count: number, seed: number) => Fuzzed | Promise<Fuzzed>> = {
  policy: fuzzPolicies,
  csv: fuzzCsv,
  machine: fuzzMachines,
  snapshot: fuzzSnapshots,
};

const [format = "", count = "", seed = ""] = process.argv.slice(2);
const loop = loops[format];
if (!loop) throw new Error(`${format}: no such format`);
const before = performance.now();
const done = await loop(Number(count), Number(seed));
const seconds = ((performance.now() - before) / 1000).toFixed(1);
console.log(
  `${format}: ${done.count.toLocaleString("en")} executions, seed ${done.seed}, ${done.accepted.toLocaleString("en")} taken as good, ${seconds} s`,
);
