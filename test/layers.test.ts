// The import rule, checked by reading the text of every source file: no parser and no word of biome.json.
// The linter enforces the same rule on its own; both are tried here on files that break it.

import { spawnSync } from "node:child_process";
import {
  cpSync,
  existsSync,
  mkdirSync,
  mkdtempSync,
  readdirSync,
  readFileSync,
  rmSync,
  writeFileSync,
} from "node:fs";
import { tmpdir } from "node:os";
import { dirname, join, posix, relative, resolve, sep } from "node:path";
import { afterAll, describe, expect, test } from "vitest";

const ROOT = join(import.meta.dirname, "..");

/** The rooms of the compiler in their order: each imports only earlier ones. */
const ORDER = ["chance", "check", "machine", "analysis", "emit", "review", "data", "editor", "cli"] as const;
const FACES_THE_USER = new Set(["cli", "editor"]);
const NODE_BUILTIN = /^(node:.*|fs|path|process|os|child_process|worker_threads)$/;
const SHELL_PACKAGE = /^(commander|@commander-js\/.*|picocolors|vscode-.*)$/;

/** What each specifier of a file's imports, exports-from, `import()` and `require()` says. */
function specifiers(text: string): string[] {
  const form = /(?:\bfrom|\bimport|\bimport\s*\(|\brequire\s*\()\s*(["'`])([^"'`\n]+)\1/g;
  const comments = /\/\*[\s\S]*?\*\/|^\s*\/\/.*$/gm;
  return [...text.replace(comments, "").matchAll(form)].map((match) => match[2] ?? "");
}

/** Why `file` (with `/`, from the root) may not import `specifier`; nothing when it may. */
function offence(file: string, specifier: string): string | undefined {
  const [top = "", second = ""] = file.split("/");
  const inside = specifier.startsWith(".");
  const target = inside ? posix.join(posix.dirname(file), specifier) : specifier;
  if (top === "runtime")
    return inside && target.startsWith("runtime/") ? undefined : "runtime/ imports only itself";
  if (top === "grammar") {
    const allowed = inside ? target.startsWith("grammar/") : specifier === "chevrotain";
    return allowed ? undefined : "grammar/ imports chevrotain and itself";
  }
  if (top !== "compiler") return undefined;
  const rank = file.split("/").length === 2 ? -1 : ORDER.indexOf(second as (typeof ORDER)[number]);
  if (!inside) {
    if (specifier === "chevrotain") return "only grammar/ knows chevrotain";
    if (FACES_THE_USER.has(second)) return undefined;
    if (NODE_BUILTIN.test(specifier)) return "only cli/ and editor/ touch the machine";
    if (SHELL_PACKAGE.test(specifier)) return "only cli/ and editor/ face the user";
    return undefined;
  }
  const [targetTop = "", targetRoom = ""] = target.split("/");
  if (targetTop === "grammar" || targetTop === "runtime") return undefined;
  if (targetTop !== "compiler") return "the compiler imports grammar/, runtime/ and itself";
  const atTop = target.split("/").length === 2;
  if (file === "compiler/policy.ts")
    return atTop && target !== "compiler/compile.ts" ? undefined : "policy.ts stands first";
  if (rank === -1)
    return FACES_THE_USER.has(targetRoom) ? "the library does not know the command" : undefined;
  if (atTop) {
    const face = target === "compiler/compile.ts" && !FACES_THE_USER.has(second);
    return face ? "compile.ts is the face, not a room" : undefined;
  }
  const targetRank = ORDER.indexOf(targetRoom as (typeof ORDER)[number]);
  if (targetRank === -1) return `compiler/${targetRoom} has no place in the order`;
  return targetRank > rank ? `compiler/${second} stands before compiler/${targetRoom}` : undefined;
}

/** Every breach in the tree at `root`, and how many files and imports were read. */
function scan(root: string): { breaches: string[]; files: number; imports: number } {
  const breaches: string[] = [];
  let files = 0;
  let imports = 0;
  for (const top of ["grammar", "compiler", "runtime"]) {
    if (!existsSync(join(root, top))) continue;
    for (const name of readdirSync(join(root, top), { recursive: true, encoding: "utf8" })) {
      if (!name.endsWith(".ts")) continue;
      const file = posix.join(top, name.split(sep).join("/"));
      files++;
      for (const specifier of specifiers(readFileSync(join(root, file), "utf8"))) {
        imports++;
        const reason = offence(file, specifier);
        if (reason) breaches.push(`${file}: "${specifier}": ${reason}`);
      }
    }
  }
  return { breaches, files, imports };
}

/** File, the specifier it imports; each pair breaks the rule. */
const BROKEN: readonly (readonly [string, string])[] = [
  ["grammar/print.ts", "../compiler/policy.ts"],
  ["grammar/print.ts", "../runtime/index.ts"],
  ["grammar/print.ts", "node:fs"],
  ["grammar/print.ts", "fraction.js"],
  ["runtime/index.ts", "../compiler/policy.ts"],
  ["runtime/index.ts", "../grammar/span.ts"],
  ["runtime/index.ts", "node:fs"],
  ["runtime/index.ts", "fraction.js"],
  ["compiler/policy.ts", "./check/zones.ts"],
  ["compiler/policy.ts", "./compile.ts"],
  ["compiler/policy.ts", "node:fs"],
  ["compiler/compile.ts", "./cli/tocsin.ts"],
  ["compiler/compile.ts", "node:process"],
  ["compiler/chance/chance.ts", "../check/zones.ts"],
  ["compiler/chance/chance.ts", "../analysis/solve.ts"],
  ["compiler/check/zones.ts", "chevrotain"],
  ["compiler/check/zones.ts", "node:fs"],
  ["compiler/check/zones.ts", "../machine/machine.ts"],
  ["compiler/check/zones.ts", "../analysis/solve.ts"],
  ["compiler/check/zones.ts", "../emit/layout.ts"],
  ["compiler/check/zones.ts", "../review/contracts.ts"],
  ["compiler/machine/machine.ts", "../analysis/solve.ts"],
  ["compiler/machine/machine.ts", "../emit/layout.ts"],
  ["compiler/machine/machine.ts", "../review/contracts.ts"],
  ["compiler/machine/machine.ts", "../cli/tocsin.ts"],
  ["compiler/machine/machine.ts", "../compile.ts"],
  ["compiler/analysis/solve.ts", "../emit/layout.ts"],
  ["compiler/analysis/solve.ts", "../review/contracts.ts"],
  ["compiler/analysis/solve.ts", "../cli/tocsin.ts"],
  ["compiler/analysis/solve.ts", "node:worker_threads"],
  ["compiler/emit/layout.ts", "../editor/server.ts"],
  ["compiler/emit/layout.ts", "../cli/tocsin.ts"],
  ["compiler/review/contracts.ts", "../cli/tocsin.ts"],
  ["compiler/review/contracts.ts", "../editor/server.ts"],
  ["compiler/review/contracts.ts", "picocolors"],
  ["compiler/data/csv.ts", "../cli/tocsin.ts"],
  ["compiler/data/csv.ts", "node:fs"],
  ["compiler/editor/server.ts", "../cli/tocsin.ts"],
];

/** Pairs that keep the rule: the checks must not be tripped by these. */
const KEPT: readonly (readonly [string, string])[] = [
  ["grammar/print.ts", "./span.ts"],
  ["grammar/print.ts", "chevrotain"],
  ["runtime/index.ts", "./detector.ts"],
  ["compiler/policy.ts", "../grammar/span.ts"],
  ["compiler/compile.ts", "./check/zones.ts"],
  ["compiler/chance/chance.ts", "../policy.ts"],
  ["compiler/check/zones.ts", "../../grammar/span.ts"],
  ["compiler/check/zones.ts", "fraction.js"],
  ["compiler/machine/machine.ts", "../../runtime/index.ts"],
  ["compiler/machine/machine.ts", "../check/zones.ts"],
  ["compiler/analysis/solve.ts", "../machine/machine.ts"],
  ["compiler/analysis/solve.ts", "../chance/chance.ts"],
  ["compiler/review/contracts.ts", "../analysis/solve.ts"],
  ["compiler/data/csv.ts", "csv-parse"],
  ["compiler/cli/tocsin.ts", "node:fs"],
  ["compiler/cli/tocsin.ts", "../compile.ts"],
  ["compiler/cli/tocsin.ts", "../editor/server.ts"],
];

const temp = mkdtempSync(join(tmpdir(), "tocsin-layers-"));
afterAll(() => rmSync(temp, { recursive: true, force: true }));

/** A folder with the linter's settings, a file for each importer (one import a line), and what they import. */
function plant(name: string, pairs: readonly (readonly [string, string])[]): string {
  const root = join(temp, name);
  const texts = new Map<string, string>();
  for (const [file, specifier] of pairs) {
    texts.set(file, `${texts.get(file) ?? ""}import "${specifier}";\n`);
    const target = posix.join(posix.dirname(file), specifier);
    if (specifier.startsWith(".") && !texts.has(target)) texts.set(target, "");
  }
  for (const [file, text] of texts) {
    mkdirSync(dirname(join(root, file)), { recursive: true });
    writeFileSync(join(root, file), text || "export const thing = 1;\n");
  }
  cpSync(join(ROOT, "biome.json"), join(root, "biome.json"));
  return root;
}

/** The linter's exit code, and what it has to say about each import, as `rule file specifier`. */
function lint(root: string): { status: number | null; output: string; findings: string[] } {
  const biome = join(ROOT, "node_modules/@biomejs/biome/bin/biome");
  const flags = ["ci", "--colors=off", "--error-on-warnings", "--max-diagnostics=500", "--reporter=github"];
  const run = spawnSync(process.execPath, [biome, ...flags], { cwd: root, encoding: "utf8" });
  const findings: string[] = [];
  for (const found of run.stdout.matchAll(/title=lint\/\w+\/(\w+),file=([^,]+),line=(\d+)/g)) {
    const [, rule = "", file = "", line = "0"] = found;
    const path = resolve(root, file);
    const text = readFileSync(path, "utf8").split("\n")[Number(line) - 1] ?? "";
    findings.push(`${rule} ${relative(root, path).split(sep).join("/")} ${specifiers(text)[0]}`);
  }
  return { status: run.status, output: run.stdout + run.stderr, findings };
}

describe("the import rule", () => {
  test("holds in the tree", () => {
    const { breaches, files, imports } = scan(ROOT);
    expect(breaches).toEqual([]);
    expect(files).toBeGreaterThan(20);
    expect(imports).toBeGreaterThan(files);
  });

  test("has a place in the order for every folder of the compiler", () => {
    const entries = readdirSync(join(ROOT, "compiler"), { withFileTypes: true });
    const rooms = entries.filter((entry) => entry.isDirectory()).map((entry) => entry.name);
    expect(rooms.filter((room) => !(ORDER as readonly string[]).includes(room))).toEqual([]);
  });

  test("sees every form of import, and none in a comment", () => {
    const text = [
      'import a from "a";',
      'import type { b } from "./b.ts";',
      'import "c";',
      'export * from "d";',
      'const e = await import("e");',
      'const f = require("f");',
      'import {\n  g,\n} from "g";',
      '// import "x";',
      '/* import "y"; */',
    ].join("\n");
    expect(specifiers(text)).toEqual(["a", "./b.ts", "c", "d", "e", "f", "g"]);
  });

  describe("broken on purpose", () => {
    const root = plant("broken", BROKEN);
    const { status, findings } = lint(root);
    const { breaches } = scan(root);

    test("the linter fails", () => {
      expect(status).toBe(1);
    });

    test.each(BROKEN)("%s may not import %s: the scan and the linter say so", (file, specifier) => {
      expect(breaches.filter((breach) => breach.startsWith(`${file}: "${specifier}"`))).toHaveLength(1);
      expect(findings).toContain(`noRestrictedImports ${file} ${specifier}`);
    });
  });

  test("kept: neither the scan nor the linter complains", () => {
    const root = plant("kept", KEPT);
    expect(scan(root).breaches).toEqual([]);
    const { status, output } = lint(root);
    expect(status, output).toBe(0);
  });

  test("a cycle of two files fails the linter", () => {
    const [one, two] = ["compiler/machine/one.ts", "compiler/machine/two.ts"];
    const { status, findings } = lint(
      plant("cycle", [
        [one, "./two.ts"],
        [two, "./one.ts"],
      ]),
    );
    expect(status).toBe(1);
    expect(findings).toContain(`noImportCycles ${one} ./two.ts`);
  });
});
