/** A short run of every fuzz loop; `npm run fuzz` runs a million of each, as continuous integration does. */
import { expect, it } from "vitest";
import { fuzzCsv } from "../data/fuzz.ts";
import { seed } from "../oracle/arbitrary.ts";
import { fuzzPolicies } from "./policies.ts";

it("policies: diagnostics or a machine, never a throw", () => {
  const done = fuzzPolicies(3000, seed());
  console.log(`policy: ${done.count} executions, seed ${done.seed}`);
  expect(done.accepted).toBeGreaterThan(100);
  expect(done.accepted).toBeLessThan(2900);
});

it("CSV: rows or problems, never a throw", async () => {
  const done = await fuzzCsv(1000, seed());
  console.log(`csv: ${done.count} executions, seed ${done.seed}`);
  expect(done.count).toBe(1000);
});
