// The package as its users get it: packed, installed offline into an empty folder, then run, imported and type-checked there.

import { type SpawnSyncReturns, spawnSync } from "node:child_process";
import { mkdirSync, mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, test } from "vitest";

// What the two faces are expected to offer.
const LIBRARY = ["compile", "machineFile", "renderDiagnostic"];
const RUNTIME = ["Detector", "openMachine"];

// A policy that is used through all three faces, with what it must do on four trials.
const POLICY = `policy two_high
zones x: low <= 1 < high
signal stop when 2 high
expect stop on low 2 high
`;

const ROOT = join(import.meta.dirname, "..");
const temp = mkdtempSync(join(tmpdir(), "tocsin-package-"));
const home = join(temp, "home");

function run(command: string, args: readonly string[], cwd: string): SpawnSyncReturns<string> {
  return spawnSync(command, args, { cwd, encoding: "utf8" });
}

/** What a module printed that was run in the folder where the package is installed. */
function inHome(source: string): string {
  writeFileSync(join(home, "try.mjs"), source);
  const { stdout, stderr, status } = run(process.execPath, ["try.mjs"], home);
  expect(status, stderr).toBe(0);
  return stdout;
}

beforeAll(() => {
  const built = run(process.execPath, [".ci/build.mjs", "--if-stale"], ROOT);
  expect(built.status, built.stderr).toBe(0);
  const packed = run("npm", ["pack", "--pack-destination", temp], ROOT);
  expect(packed.status, packed.stderr).toBe(0);
  mkdirSync(home);
  writeFileSync(join(home, "package.json"), '{ "private": true }\n');
  const installed = run(
    "npm",
    ["install", "--offline", "--no-audit", "--no-fund", "../tocsin-0.1.0.tgz"],
    home,
  );
  expect(installed.status, installed.stderr).toBe(0);
});
afterAll(() => rmSync(temp, { recursive: true, force: true }));

describe("the installed package", () => {
  test("brings nothing else with it", () => {
    const names = readdirSync(join(home, "node_modules")).filter((name) => !name.startsWith("."));
    expect(names).toEqual(["tocsin"]);
  });

  test("holds what its list of files names, and no source", () => {
    const folder = join(home, "node_modules/tocsin");
    const files = readdirSync(folder, { recursive: true, encoding: "utf8" });
    const { files: listed } = JSON.parse(readFileSync(join(ROOT, "package.json"), "utf8")) as {
      files: string[];
    };
    expect(files).toEqual(expect.arrayContaining([...listed, "dist/NOTICES.txt"]));
    expect(files.filter((name) => /(?<!\.d)\.ts$/.test(name))).toEqual([]);
  });

  test("runs as a command", () => {
    const { stdout, stderr, status } = run(join(home, "node_modules/.bin/tocsin"), ["--version"], home);
    expect(status, stderr).toBe(0);
    expect(stdout).toBe("0.1.0\n");
  });

  test("checks, emits and detects: command, library and runtime agree", () => {
    writeFileSync(join(home, "two_high.tocsin"), POLICY);
    const command = (...words: string[]) => run(join(home, "node_modules/.bin/tocsin"), words, home);
    expect(command("check", "two_high.tocsin")).toMatchObject({
      status: 0,
      stdout: expect.stringContaining("clean"),
    });
    expect(command("emit", "two_high.tocsin", "--as", "json", "-o", "two_high.json").status).toBe(0);
    const source = `
      import { readFileSync } from "node:fs";
      import { compile, machineFile } from "tocsin";
      import { Detector, openMachine } from "tocsin/runtime";
      const { policy, machine } = compile(readFileSync("two_high.tocsin", "utf8"));
      const byLibrary = machineFile(policy, machine);
      const byCommand = JSON.parse(readFileSync("two_high.json", "utf8"));
      const detector = new Detector(openMachine(byCommand).machine);
      const raised = [2, 1, 2, 2].map((value) => detector.observe(value));
      console.log(JSON.stringify({ same: JSON.stringify(byLibrary) === JSON.stringify(byCommand), raised }));`;
    expect(JSON.parse(inHome(source))).toEqual({ same: true, raised: [0, 0, 0, 1] });
  });

  test("is imported as a library", () => {
    const names = JSON.parse(inHome('console.log(JSON.stringify(Object.keys(await import("tocsin"))));'));
    expect(names).toEqual(expect.arrayContaining(LIBRARY));
  });

  test("is imported as a runtime, which imports nothing", () => {
    const names = JSON.parse(
      inHome('console.log(JSON.stringify(Object.keys(await import("tocsin/runtime"))));'),
    );
    expect(names).not.toEqual([]);
    expect(names).toEqual(expect.arrayContaining(RUNTIME));
    const text = readFileSync(join(home, "node_modules/tocsin/dist/runtime.js"), "utf8");
    expect(text).not.toMatch(/\bimport\b|\brequire\b/);
  });

  test("has types that hold together", () => {
    const names = [...LIBRARY.map((name) => `library.${name}`), ...RUNTIME.map((name) => `runtime.${name}`)];
    writeFileSync(
      join(home, "try.ts"),
      `import * as library from "tocsin";\nimport * as runtime from "tocsin/runtime";\nexport const all = [runtime, ${names.join(", ")}];\n`,
    );
    const checks = {
      strict: true,
      exactOptionalPropertyTypes: true,
      skipLibCheck: false,
      types: [],
      noEmit: true,
    };
    const compilerOptions = { ...checks, target: "es2022", module: "nodenext" };
    writeFileSync(join(home, "tsconfig.json"), JSON.stringify({ compilerOptions, files: ["try.ts"] }));
    const tsc = join(ROOT, "node_modules/typescript/bin/tsc");
    const { stdout, status } = run(process.execPath, [tsc, "-p", "."], home);
    expect(status, stdout).toBe(0);
  });
});
