/**
 * Every example does what its README says, and its figures are what an independent computation makes them.
 * UPDATE_GOLDEN=1 rewrites what the READMEs say is printed, and their lists of figures; read the difference before committing it.
 */
import { spawnSync } from "node:child_process";
import { cpSync, mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { basename, join } from "node:path";
import { afterAll, describe, expect, test } from "vitest";
import { expectGolden } from "../golden.ts";
import type { Example } from "./example.ts";
import { examples } from "./figures.ts";
import { law } from "./independent.ts";
import { run, withFigures, withOutput } from "./readme.ts";

const root = join(import.meta.dirname, "../../examples");
const temp = mkdtempSync(join(tmpdir(), "tocsin-examples-"));
afterAll(() => rmSync(temp, { recursive: true, force: true }));

type Run = {
  readonly signal: string;
  readonly process: string;
  readonly at: Readonly<Record<string, number>>;
  readonly arl: number;
  readonly sdrl: number;
  readonly mrl: number;
  readonly quantiles: Readonly<Record<string, number>>;
  readonly signalled: Readonly<Record<string, number>>;
  readonly first: Readonly<Record<string, number>>;
};

/** A copy of an example that commands may write into. */
function copyOf(folder: string, purpose: string): string {
  const copy = join(temp, purpose, folder);
  cpSync(join(root, folder), copy, { recursive: true });
  return copy;
}

/** Fails unless two numbers agree to a part in 10⁸. */
function expectNear(found: number, known: number, what: string): void {
  expect(Math.abs(found - known), `${what}: ${found} against ${known}`).toBeLessThanOrEqual(
    Math.abs(known) * 1e-8,
  );
}

test("every folder is an example that is tested here, with an invented policy and an account of it", () => {
  const folders = readdirSync(root, { withFileTypes: true }).filter((entry) => entry.isDirectory());
  expect(folders.map(({ name }) => name).sort()).toEqual(examples.map(({ folder }) => folder).sort());
  for (const { folder, policy } of examples) {
    expect(readFileSync(join(root, folder, policy), "utf8")).toMatch(/^# Invented: /);
    expect(readFileSync(join(root, folder, "README.md"), "utf8")).toContain("invented");
    expect(readFileSync(join(root, "README.md"), "utf8")).toContain(`(${folder}/README.md)`);
  }
});

test("the recorded data is what the generator makes", () => {
  const made = spawnSync(process.execPath, [join(root, "make-data.mjs"), "--check"], { encoding: "utf8" });
  expect(made.stderr).toBe("");
  expect(made.status).toBe(0);
});

// The first example of the language reference is kept as it stands there, spaces and all.
test.each(examples.filter(({ folder }) => folder !== "fill-weight"))(
  "the policy of $folder is written as `format` writes it",
  ({ folder, policy }) => {
    const { status, stdout, stderr } = run(["format", "--verify", policy], join(root, folder));
    expect(status, stdout + stderr).toBe(0);
  },
);

describe.each(examples)("$folder", (example) => {
  test("checks clean, without a warning", () => {
    const { stdout, status } = run(["check", "--json", example.policy], join(root, example.folder));
    const { files } = JSON.parse(stdout) as { files: { ok: boolean; diagnostics: unknown[] }[] };
    expect(files).toEqual([expect.objectContaining({ ok: true, diagnostics: [] })]);
    expect(status).toBe(0);
  });

  test("prints what its README says", () => {
    const path = join(root, example.folder, "README.md");
    const readme = readFileSync(path, "utf8");
    expectGolden(path, withOutput(withFigures(readme, example.figures), copyOf(example.folder, "readme")));
  });

  test("has the run lengths that the chains written by hand have", () => compareRuns(example));

  test("has the figures of its README, each by a `require`", () => {
    const copy = copyOf(example.folder, "figures");
    const text = readFileSync(join(copy, example.policy), "utf8");
    const requires = example.figures.map(
      ({ measure, value, within }) => `require ${measure} = ${value} within ${within / Math.abs(value)}\n`,
    );
    writeFileSync(join(copy, example.policy), `${text}\n${requires.join("")}`);
    const { status, stdout, stderr } = run(["check", example.policy], copy);
    expect(status, stdout + stderr).toBe(0);
  });
});

function compareRuns({ folder, policy, chances, walks }: Example): void {
  const { stdout, stderr } = run(["assess", policy, "--json"], join(root, folder));
  expect(stderr).toBe("");
  const { runs } = JSON.parse(stdout) as { runs: Run[] };
  expect([...new Set(runs.map(({ signal }) => signal))].sort()).toEqual(Object.keys(walks).sort());
  for (const found of runs) {
    const letters = chances(found.process, found.at);
    expectNear(
      Object.values(letters).reduce((sum, p) => sum + p, 0),
      1,
      "the chances of the letters",
    );
    const known = law(walks[found.signal]!, letters);
    const what = `${basename(policy)}, ${found.signal}, ${found.process} ${JSON.stringify(found.at)}`;
    expectNear(found.arl, known.arl, `${what}, arl`);
    expectNear(found.sdrl, known.sdrl, `${what}, sdrl`);
    for (const [q, n] of [...Object.entries(found.quantiles), ["0.5", found.mrl] as const]) {
      const smallest = known.quantile(Number(q));
      // Where P(T ≤ n) is q itself, as with a normal value beyond its own mean, doubles cannot tell n from n + 1.
      const tie = Math.abs(known.signalled(smallest) - Number(q)) < 1e-12 && n === smallest + 1;
      if (!tie) expectNear(n, smallest, `${what}, quantile ${q}`);
    }
    for (const [n, p] of Object.entries(found.signalled))
      expectNear(p, known.signalled(Number(n)), `${what}, signalled within ${n}`);
    for (const [rule, p] of Object.entries(known.first))
      expectNear(found.first[rule]!, p, `${what}, first ${rule}`);
  }
}
