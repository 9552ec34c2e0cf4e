// The guard of the golden files trips when it should.

import { mkdtempSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, afterEach, expect, test, vi } from "vitest";
import { expectGolden, orphans } from "./golden.ts";

const folder = mkdtempSync(join(tmpdir(), "tocsin-golden-"));
afterEach(() => vi.unstubAllEnvs());
afterAll(() => rmSync(folder, { recursive: true, force: true }));

test("a missing expected file fails, a written one is compared exactly", () => {
  const path = join(folder, "case.expect");
  vi.stubEnv("UPDATE_GOLDEN", "");
  expect(() => expectGolden(path, "one\n")).toThrow("is missing");
  vi.stubEnv("UPDATE_GOLDEN", "1");
  expectGolden(path, "one\n");
  expect(readFileSync(path, "utf8")).toBe("one\n");
  vi.stubEnv("UPDATE_GOLDEN", "");
  expectGolden(path, "one\n");
  expect(() => expectGolden(path, "one")).toThrow();
});

test("an expected file without its case is an orphan", () => {
  writeFileSync(join(folder, "left.expect"), "");
  expect(orphans(folder, ".expect", ["case"])).toEqual(["left.expect"]);
});
