// `npm run fuzz [-- COUNT]`: COUNT executions (a million unless said) of every format, two formats at a time. Prints for each
// the count, the seed and the time; ends with 1 on a breach, or when a loop takes longer than it ever should.
import { spawn } from "node:child_process";
import { mkdtempSync, rmSync } from "node:fs";
import { join } from "node:path";
import { build } from "esbuild";

const root = join(import.meta.dirname, "..");
const count = process.argv[2] ?? "1000000";
const seed = process.env.FC_SEED ?? (process.env.CI ? "20260101" : `${Date.now() % 0x7fffffff}`);
const folder = mkdtempSync(join(root, "node_modules", ".fuzz-"));
const outfile = join(folder, "run.mjs");
const waiting = ["csv", "policy", "machine", "snapshot"];

/** @param {string} format */
const run = (format) =>
  new Promise((resolve) => {
    const child = spawn(process.execPath, [outfile, format, count, seed], {
      stdio: "inherit",
      timeout: 40 * 60_000,
    });
    child.on("exit", (code, signal) => {
      if (code !== 0) {
        process.stderr.write(`${format}: ${signal ? "took too long" : "a breach"} (seed ${seed})\n`);
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
