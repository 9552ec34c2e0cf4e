// A short run of the fuzz loop; the long one is a script of its own.

import { expect, test } from "vitest";
import { seed } from "../oracle/arbitrary.ts";
import { fuzzCsv } from "./fuzz.ts";

test("spoilt CSV: rows, then at most one item of problems, whatever the chunks", async () => {
  const { accepted, count } = await fuzzCsv(20_000, seed());
  expect(accepted).toBeGreaterThan(count / 100);
  expect(accepted).toBeLessThan(count * 0.9);
});
