// Expected text kept in files beside the inputs. A missing file is a failure, unless UPDATE_GOLDEN=1 asks for it to be
// written; a file whose case is gone is found by `orphans`.

import { existsSync, readdirSync, readFileSync, writeFileSync } from "node:fs";
import { basename } from "node:path";
import { expect } from "vitest";

/** Fails unless the file at `path` holds exactly `actual`; with UPDATE_GOLDEN=1 writes it instead. */
export function expectGolden(path: string, actual: string): void {
  if (process.env.UPDATE_GOLDEN === "1") writeFileSync(path, actual);
  if (!existsSync(path)) expect.fail(`${path} is missing; UPDATE_GOLDEN=1 writes it`);
  expect(actual, basename(path)).toBe(readFileSync(path, "utf8"));
}

/** The files under `folder` that end in `suffix` and have no case: those whose path, cut by the suffix, is not in `cases`. */
export function orphans(folder: string, suffix: string, cases: Iterable<string>): string[] {
  const known = new Set(cases);
  const files = readdirSync(folder, { recursive: true, encoding: "utf8" }).map((name) =>
    name.replaceAll("\\", "/"),
  );
  return files.filter((name) => name.endsWith(suffix) && !known.has(name.slice(0, -suffix.length))).sort();
}
