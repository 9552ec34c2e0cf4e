// A short run of the fuzz loops; the long one is a script of its own.

import { readFileSync } from "node:fs";
import { Ajv2020 } from "ajv/dist/2020.js";
import { expect, test } from "vitest";
import { openMachine } from "../../runtime/index.ts";
import { seed } from "../oracle/arbitrary.ts";
import { fuzzMachines, fuzzSnapshots, seeded, spoiltMachine } from "./fuzz.ts";

const SEED = seed();

test.each([
  ["machine files", fuzzMachines],
  ["snapshots", fuzzSnapshots],
] as const)("spoilt %s: a list of problems or something that works", (_, fuzz) => {
  const { accepted, count } = fuzz(20_000, SEED);
  // Both sides are tried: some come through, most do not.
  expect(accepted).toBeGreaterThan(count / 100);
  expect(accepted).toBeLessThan(count / 2);
});

test("what the detector opens, the schema accepts", () => {
  const schema = JSON.parse(
    readFileSync(new URL("../../runtime/machine.schema.json", import.meta.url), "utf8"),
  );
  const matches = new Ajv2020({ strict: true, strictRequired: false, allowUnionTypes: true }).compile(schema);
  const random = seeded(SEED);
  let refused = 0;
  for (let i = 0; i < 20_000; i++) {
    const file = spoiltMachine(random);
    if (!matches(file)) {
      refused++;
      expect(openMachine(file).machine, JSON.stringify([matches.errors, file])).toBeUndefined();
    }
  }
  expect(refused).toBeGreaterThan(5_000);
});
