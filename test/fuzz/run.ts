/**
 * One fuzz loop as a process: `run.mjs FORMAT COUNT SEED` prints what it did, or fails with the breach. A thread beside it
 * watches that each execution ends within its budget, and ends the process when one does not.
 */
import { Worker } from "node:worker_threads";
import { fuzzCsv } from "../data/fuzz.ts";
import { type Beat, type Fuzzed, fuzzMachines, fuzzSnapshots } from "../runtime/fuzz.ts";
import { fuzzPolicies } from "./policies.ts";

type Loop = (count: number, seed: number, beat: Beat) => Fuzzed | Promise<Fuzzed>;

const loops: Record<string, Loop> = {
  policy: fuzzPolicies,
  csv: fuzzCsv,
  machine: fuzzMachines,
  snapshot: fuzzSnapshots,
  // Not of any format: these two show that a breach and a hang are told.
  breach: (_, seed) => {
    throw new Error(`execution 7 of seed ${seed}`, { cause: new Error("on purpose") });
  },
  hang: (_, __, beat) => {
    beat(7);
    for (;;);
  },
};

// Chevrotain makes an Error of every mistake; its stack would be most of the time.
Error.stackTraceLimit = 2;

const [format = "", count = "", seed = "", budget = "30"] = process.argv.slice(2);

const watcher = `
const { parentPort, workerData: { shared, budget, format, seed } } = require("node:worker_threads");
const current = new Int32Array(shared);
let last = -1, since = Date.now();
setInterval(() => {
  const execution = Atomics.load(current, 0);
  if (execution !== last) { last = execution; since = Date.now(); }
  else if (Date.now() - since > budget * 1000) {
    require("node:fs").writeSync(2, format + ": execution " + execution + " of seed " + seed + " has not ended after " + budget + " s\\n");
    process.kill(process.pid, "SIGKILL");
  }
}, 100);`;

/** Watches the executions from a thread of its own; what is returned is told of each as it begins. */
function watched(): Beat {
  const shared = new SharedArrayBuffer(4);
  const current = new Int32Array(shared);
  const workerData = { shared, budget: Number(budget), format, seed };
  new Worker(watcher, { eval: true, workerData }).unref();
  return (execution) => Atomics.store(current, 0, execution);
}

const loop = loops[format];
if (!loop) throw new Error(`${format}: no such format`);
const before = performance.now();
const done = await loop(Number(count), Number(seed), watched());
const seconds = ((performance.now() - before) / 1000).toFixed(1);
console.log(
  `${format}: ${done.count.toLocaleString("en")} executions, seed ${done.seed}, ${done.accepted.toLocaleString("en")} taken as good, ${seconds} s`,
);
