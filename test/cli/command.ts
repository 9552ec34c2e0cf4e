// The built command as its users have it: dist/tocsin.js, run as a child in a folder of its own. `npm test` builds it.

import { type ChildProcess, spawn, spawnSync } from "node:child_process";
import { mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll } from "vitest";

export const ROOT = join(import.meta.dirname, "../..");
export const COMMAND = join(ROOT, "dist/tocsin.js");

const env = { ...process.env, NO_COLOR: "1" };

export type Ran = { readonly status: number | null; readonly stdout: string; readonly stderr: string };
export type Content = string | Uint8Array;

/** A folder that is there until the tests of the file are over, and the command in it. */
export type Place = {
  readonly folder: string;
  readonly tocsin: (args: readonly string[], input?: Content) => Ran;
  /** The same, still running. */
  readonly begin: (args: readonly string[]) => ChildProcess;
  readonly write: (name: string, content: Content) => string;
  readonly read: (name: string) => string;
  readonly files: () => string[];
};

/** A new folder with files in it. */
export function placeWith(files: Readonly<Record<string, Content>> = {}): Place {
  const folder = mkdtempSync(join(tmpdir(), "tocsin-cli-"));
  afterAll(() => rmSync(folder, { recursive: true, force: true }));
  const write = (name: string, content: Content) => {
    writeFileSync(join(folder, name), content);
    return name;
  };
  for (const [name, content] of Object.entries(files)) write(name, content);
  return {
    folder,
    tocsin: (args, input = "") => {
      const options = { cwd: folder, input, encoding: "utf8", maxBuffer: 1 << 28, env } as const;
      const { status, stdout, stderr, error } = spawnSync(process.execPath, [COMMAND, ...args], options);
      if (error) throw error;
      return { status, stdout, stderr };
    },
    begin: (args) => spawn(process.execPath, [COMMAND, ...args], { cwd: folder, env }),
    write,
    read: (name) => readFileSync(join(folder, name), "utf8"),
    files: () => readdirSync(folder).sort(),
  };
}

/** The objects of JSON lines. */
export function jsonLines(text: string): unknown[] {
  return text
    .split("\n")
    .filter((line) => line !== "")
    .map((line) => JSON.parse(line) as unknown);
}

/** Two letters of equal chance: everything about two heads in a row is known. */
export const COIN = `policy coin "Two heads"

letters toss: heads, tails

signal pair when 2 heads

process fair:                             toss ~ {heads 0.5, tails 0.5}
process bent(p from 0.25 to 0.75 by 0.5): toss ~ {heads p, tails}

require arl(pair, fair) = 6 within 1%
expect pair  on tails 2 heads
expect quiet on heads tails heads
`;

/** Three zones, a weak run, a quiet time, a clock. */
export const OVEN = `policy oven "Oven, zone 2"

let mu    = 100
let sigma = 2
let d     = 1.8

zones heat: low < mu - d*sigma <= mid <= mu + d*sigma < high

assign high -> mid

rule weak = 3 high gap 1

signal act  when weak                restart
signal look when 2 low  quiet for 3

cadence 15 min

process steady:                            heat ~ normal(mu, sigma)
process shifted(delta from 1 to 2 by 0.5): heat ~ normal(mu + delta*sigma, sigma)
`;
