// `npm run faults`: seeds one fault at a time into a copy of the sources and runs the tests that must catch it. Ends with 1
// when a fault goes unseen, when one cannot be seeded any more, or when the tests fail without any fault.
import { spawnSync } from "node:child_process";
import { cpSync, mkdtempSync, readFileSync, rmSync, symlinkSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { faults } from "../test/faults/faults.mjs";

const root = join(import.meta.dirname, "..");
const copy = mkdtempSync(join(tmpdir(), "tocsin-faults-"));
const only = process.argv[2];

/**
 * Runs tests in the copy and tells whether they passed.
 * @param {string} tests
 */
function passes(tests) {
  const vitest = join(copy, "node_modules/vitest/vitest.mjs");
  const { status } = spawnSync(process.execPath, [vitest, "run", "--bail", "1", ...tests.split(" ")], {
    cwd: copy,
    encoding: "utf8",
    timeout: 600_000,
    env: { ...process.env, CI: "true", FC_RUNS: "200" },
  });
  return status === 0;
}

let unseen = 0;
/** @param {string} line */
const say = (line) => process.stdout.write(`${line}\n`);
try {
  for (const name of [
    "grammar",
    "compiler",
    "runtime",
    "test",
    "package.json",
    "tsconfig.json",
    "vitest.config.ts",
    ".ci",
  ])
    cpSync(join(root, name), join(copy, name), { recursive: true });
  symlinkSync(join(root, "node_modules"), join(copy, "node_modules"));
  const chosen = faults.filter(({ what }) => only === undefined || what.includes(only));
  for (const tests of new Set(chosen.map((fault) => fault.tests))) {
    if (passes(tests)) continue;
    say(`${tests}: fails without any fault`);
    unseen++;
  }
  for (const { what, file, find, put, tests } of unseen > 0 ? [] : chosen) {
    const path = join(copy, file);
    const text = readFileSync(path, "utf8");
    const places = text.split(find).length - 1;
    if (places === 1)
      writeFileSync(
        path,
        text.replace(find, () => put),
      );
    const caught = places === 1 && !passes(tests);
    if (!caught) unseen++;
    say(`${caught ? "caught" : places === 1 ? "UNSEEN" : `GONE (${places} places)`}: ${what} (${file})`);
    writeFileSync(path, text);
  }
  say(`${chosen.length - unseen} of ${chosen.length} faults caught`);
} finally {
  rmSync(copy, { recursive: true, force: true });
}
process.exitCode = unseen > 0 ? 1 : 0;
