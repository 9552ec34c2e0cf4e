// A short run of the fuzz loop of policies; those of CSV, machine files and snapshots are beside what they try. And
// `npm run fuzz`, which runs a million of each as continuous integration does, on a few, and where it must fail.

import { spawnSync } from "node:child_process";
import { join } from "node:path";
import { afterEach, beforeEach, expect, test } from "vitest";
import { seed } from "../oracle/arbitrary.ts";
import { fuzzPolicies } from "./policies.ts";

// Chevrotain makes an Error of every mistake; its stack would be most of the time.
const { stackTraceLimit } = Error;
beforeEach(() => {
  Error.stackTraceLimit = 2;
});
afterEach(() => {
  Error.stackTraceLimit = stackTraceLimit;
});

test("any text as a policy: a policy, or diagnostics that lie in their text", () => {
  const { accepted, count, seed: used } = fuzzPolicies(10_000, seed());
  console.log(`policy: ${count} executions, seed ${used}, ${accepted} taken as good`);
  expect(accepted).toBeGreaterThan(count / 20);
  expect(accepted).toBeLessThan(count / 2);
});

/** `npm run fuzz` with its arguments. */
function fuzz(args: readonly string[], env: Readonly<Record<string, string>> = {}) {
  const { status, stdout, stderr } = spawnSync(
    process.execPath,
    [join(import.meta.dirname, "../../.ci/fuzz.mjs"), ...args],
    { encoding: "utf8", env: { ...process.env, ...env } },
  );
  return { status, stdout, stderr };
}

test("the long run tells of every format the count, the seed and the time", () => {
  const { status, stdout, stderr } = fuzz(["200"], { FC_SEED: "42" });
  expect({ status, stderr }).toEqual({ status: 0, stderr: "" });
  for (const format of ["policy", "csv", "machine", "snapshot"])
    expect(stdout).toMatch(
      new RegExp(`^${format}: 200 executions, seed 42, \\d+ taken as good, [0-9.]+ s$`, "m"),
    );
});

test("a breach ends it with 1, and is named", () => {
  const { status, stderr } = fuzz(["200", "breach", "machine"], { FC_SEED: "42" });
  expect(status).toBe(1);
  expect(stderr).toContain("execution 7 of seed 42");
  expect(stderr).toContain("on purpose");
  expect(stderr).toContain("breach: a breach (FC_SEED=42 finds it again)");
});

test("so does an execution that does not end", () => {
  const { status, stderr } = fuzz(["200", "hang"], { FC_SEED: "42", FUZZ_BUDGET: "1" });
  expect(status).toBe(1);
  expect(stderr).toContain("hang: execution 7 of seed 42 has not ended after 1 s");
  expect(stderr).toContain("hang: took too long (FC_SEED=42 finds it again)");
});

test("a count that is none is a mistake", () => {
  expect(fuzz(["many"])).toMatchObject({ status: 2, stdout: "" });
});
