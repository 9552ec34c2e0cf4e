// A short tour of the command on one example. Each step says in a sentence what it shows, prints the command line, and
// then what that prints. Ends with the worst exit code that a step was not meant to have.

import { spawnSync } from "node:child_process";
import { join } from "node:path";

const root = join(import.meta.dirname, "..");
const policy = "examples/fill-weight/fill_weight.tocsin";
const data = "examples/fill-weight/fills.csv";

/** @type {ReadonlyArray<{says: string, args: readonly string[], exits: readonly number[]}>} */
const steps = [
  {
    says: "The policy is read and checked: names, numbers, zones, and that every rule can do something.",
    args: ["check", policy],
    exits: [0],
  },
  {
    says: "How often it would raise a signal is computed, not simulated: from its machine and each process it names.",
    args: ["assess", policy],
    exits: [0],
  },
  {
    says: "The same policy is run over recorded data, and tells at which trials it raises what.",
    args: ["replay", policy, data],
    exits: [0, 1],
  },
];

for (const [index, { says, args, exits }] of steps.entries()) {
  process.stdout.write(`${index ? "\n" : ""}${index + 1}. ${says}\n\n$ tocsin ${args.join(" ")}\n`);
  const run = spawnSync(process.execPath, [join(root, "dist/tocsin.js"), ...args], {
    cwd: root,
    stdio: ["ignore", "inherit", "inherit"],
  });
  const status = run.status ?? 3;
  if (!exits.includes(status)) {
    process.stderr.write(`This step ended with exit code ${status}; meant was ${exits.join(" or ")}.\n`);
    process.exitCode = Math.max(Number(process.exitCode ?? 0), status || 1);
  }
}
