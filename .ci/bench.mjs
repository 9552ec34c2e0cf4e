// `npm run bench [-- PART …] [--json]`: bundles the bench, as the command is bundled, and runs it.
import { spawnSync } from "node:child_process";
import { mkdtempSync, rmSync } from "node:fs";
import { join } from "node:path";
import { build } from "esbuild";

const root = join(import.meta.dirname, "..");
const folder = mkdtempSync(join(root, "node_modules", ".bench-"));
const outfile = join(folder, "bench.mjs");
try {
  await build({
    entryPoints: [join(root, "test/bench/bench.ts")],
    bundle: true,
    platform: "node",
    format: "esm",
    target: "node20",
    define: { TOCSIN_BUILT: "true" },
    external: ["refa", "mathjs"],
    outfile,
    logLevel: "error",
  });
  process.exitCode =
    spawnSync(process.execPath, [outfile, ...process.argv.slice(2)], { cwd: root, stdio: "inherit" })
      .status ?? 1;
} finally {
  rmSync(folder, { recursive: true });
}
