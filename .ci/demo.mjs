// A short tour of the command on one example: the policy, then each command with a sentence on what it shows. Ends with
// the exit code of the first command that failed.
import { spawnSync } from "node:child_process";
import { readFileSync } from "node:fs";
import { join } from "node:path";

const root = join(import.meta.dirname, "..");
const policy = "examples/fill-weight/fill_weight.tocsin";
const data = "examples/fill-weight/fills.csv";

/** @type {ReadonlyArray<{says: string, args: readonly string[]}>} */
const steps = [
  {
    says: "The policy is checked: its names, numbers and zones, and whether what it requires and expects of itself is true.",
    args: ["check", policy],
  },
  {
    says:
      "What it costs and how fast it is. The run length is the number of the trial of the first signal; ARL is its mean. In\n" +
      "control (steady) a signal is false, so long is good; under a shift of delta standard deviations short is good. The\n" +
      "figures are computed from the policy's machine, not simulated.",
    args: ["assess", policy, "--signal", "stop"],
  },
  {
    says: "The same machine runs over recorded means of five bottles, and says at which trials it raises what, and why.",
    args: ["replay", policy, data, "--time", "taken"],
  },
  {
    says: "Trials can also be typed, by their letters: one mid between two highs does not end the weak run.",
    args: ["replay", policy, "--letters", "high mid 2 high"],
  },
];

/** @param {string} text */
const say = (text) => process.stdout.write(`${text}\n`);

say("Tocsin: a policy says when a stream of measurements should raise a signal. This one is invented:\n");
say(readFileSync(join(root, policy), "utf8").replace(/^/gm, "    ").trimEnd());
for (const { says, args } of steps) {
  const shown = args.map((word) => (/^[\w./-]+$/.test(word) ? word : `'${word}'`)).join(" ");
  say(`\n${says}\n\n$ tocsin ${shown}`);
  const { status } = spawnSync(process.execPath, [join(root, "dist/tocsin.js"), ...args], {
    cwd: root,
    stdio: ["ignore", "inherit", "inherit"],
  });
  if (status !== 0) process.exit(status ?? 3);
}
say(
  "\nA first policy of your own: node dist/tocsin.js start my_policy. More: README.md, and the folders in examples/.",
);
say(
  "A detector made by Tocsin is not a certified safety function: local codes and licensed practice decide.",
);
