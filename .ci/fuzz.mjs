// `npm run fuzz [-- COUNT [FORMAT …]]`: COUNT executions (a million unless said) of every format, two formats at a time.
// Prints for each the count, the seed and the time; ends with 1 on a breach, on an execution that takes longer than its
// budget (FUZZ_BUDGET seconds, 30 unless said), or when a loop takes longer than it ever should.
import { spawn } from "node:child_process";
import { mkdtempSync, rmSync } from "node:fs";
import { join } from "node:path";
import { build } from "esbuild";

const root = join(import.meta.dirname, "..");
const [count = "1000000", ...formats] = process.argv.slice(2);
const seed = process.env.FC_SEED ?? (process.env.CI ? "20260101" : `${Date.now() % 0x7fffffff}`);
const folder = mkdtempSync(join(root, "node_modules", ".fuzz-"));
const outfile = join(folder, "run.mjs");
const waiting = formats.length > 0 ? formats : ["policy", "csv", "machine", "snapshot"];
const budget = process.env.FUZZ_BUDGET ?? "30";

if (!/^[1-9][0-9]*$/.test(count)) {
  process.stderr.write(`npm run fuzz -- COUNT [FORMAT …]: a number of executions is due, not ${count}\n`);
  process.exit(2);
}

/** @param {string} format */
const run = (format) =>
  new Promise((resolve) => {
    const child = spawn(process.execPath, [outfile, format, count, seed, budget], {
      stdio: "inherit",
      timeout: 40 * 60_000,
    });
    child.on("exit", (code, signal) => {
      if (code !== 0) {
        process.stderr.write(
          `${format}: ${signal ? "took too long" : "a breach"} (FC_SEED=${seed} finds it again)\n`,
        );
        process.exitCode = 1;
      }
      resolve(undefined);
    });
  });

const worker = async () => {
  for (let format = waiting.shift(); format; format = waiting.shift()) await run(format);
};

try {
  await build({
    entryPoints: [join(root, "test/fuzz/run.ts")],
    bundle: true,
    platform: "node",
    format: "esm",
    target: "node20",
    define: { TOCSIN_BUILT: "true" },
    banner: {
      js: "import { createRequire as makeRequire } from 'node:module'; const require = makeRequire(import.meta.url);",
    },
    outfile,
    logLevel: "error",
  });
  await Promise.all([worker(), worker()]);
} finally {
  rmSync(folder, { recursive: true, force: true });
}
