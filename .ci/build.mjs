// Makes dist/: the command, the library, the runtime, their types, and the licence notices of what is bundled in.
//   node .ci/build.mjs                prints what came out, with sizes
//   node .ci/build.mjs --if-stale     says nothing, and does nothing when no input has changed since the last build
// The command keeps dynamic imports as files of their own, so that its heavy parts are loaded only when they are used.
// The library is bundled as for a browser: a use of Node's modules in it fails the build. So does a runtime that imports.

import { spawnSync } from "node:child_process";
import { createHash } from "node:crypto";
import {
  chmodSync,
  existsSync,
  mkdirSync,
  readdirSync,
  readFileSync,
  renameSync,
  rmSync,
  statSync,
  writeFileSync,
} from "node:fs";
import { dirname, join, posix, relative, resolve, sep } from "node:path";
import { gzipSync } from "node:zlib";
import { build } from "esbuild";

const root = join(import.meta.dirname, "..");
// Made beside, and put in place whole: what runs from dist/ meanwhile finds the old one until then.
const place = join(root, "dist");
const building = `node_modules/.cache/tocsin-dist-${process.pid}`;
const dist = join(root, building);
const stamp = join(root, "node_modules/.cache/tocsin/built");

/** Names with `/` of the files under `folder` (itself from the root), sorted. @param {string} folder */
function filesUnder(folder) {
  if (!existsSync(join(root, folder))) return [];
  return readdirSync(join(root, folder), { recursive: true, withFileTypes: true })
    .filter((entry) => entry.isFile())
    .map((entry) => relative(root, join(entry.parentPath, entry.name)).split(sep).join("/"))
    .sort();
}

/** One hash over everything a build reads. */
function inputsHash() {
  const hash = createHash("sha256");
  const sources = ["grammar", "compiler", "runtime"].flatMap(filesUnder);
  const settings = [
    "package.json",
    "package-lock.json",
    "tsconfig.json",
    "tsconfig.build.json",
    ".ci/build.mjs",
  ];
  for (const file of [...sources.filter((name) => !name.endsWith(".md")), ...settings]) {
    hash
      .update(`${file}\0`)
      .update(readFileSync(join(root, file)))
      .update("\0");
  }
  return hash.digest("hex");
}

/** @satisfies {import("esbuild").BuildOptions} */
const common = {
  absWorkingDir: root,
  bundle: true,
  format: "esm",
  minify: true,
  metafile: true,
  legalComments: "none",
  logLevel: "warning",
  define: { "process.env.NODE_ENV": '"production"', TOCSIN_BUILT: "true" },
};

/** The three bundles; what each was made of is returned. */
async function bundle() {
  const command = await build({
    ...common,
    entryPoints: { tocsin: "compiler/cli/tocsin.ts" },
    outdir: building,
    chunkNames: "command/[name]-[hash]",
    splitting: true,
    platform: "node",
    target: "node20",
    // Bundled CommonJS packages ask for Node's modules by `require`, which an ES module does not have.
    banner: { js: "import{createRequire as __cr}from'node:module';const require=__cr(import.meta.url);" },
  });
  const library = await build({
    ...common,
    entryPoints: { index: "compiler/compile.ts" },
    outdir: building,
    chunkNames: "library/[name]-[hash]",
    splitting: true,
    platform: "browser",
    target: "es2022",
  });
  const runtime = await build({
    ...common,
    entryPoints: { runtime: "runtime/index.ts" },
    outdir: building,
    platform: "neutral",
    target: "es2022",
  });
  const imports = runtime.metafile.outputs[`${building}/runtime.js`]?.imports ?? [];
  if (imports.length > 0)
    throw new Error(`the runtime imports ${imports.map(({ path }) => path).join(", ")}`);
  return [command.metafile, library.metafile, runtime.metafile];
}

/** Makes dist/tocsin.js a program, whether or not its source begins with a line for the shell. */
function finishCommand() {
  const path = join(dist, "tocsin.js");
  const text = readFileSync(path, "utf8");
  if (!text.startsWith("#!")) writeFileSync(path, `#!/usr/bin/env node\n${text}`);
  chmodSync(path, 0o755);
}

/** @param {string} text */
function specifiers(text) {
  return [...text.matchAll(/(?:\bfrom|\bimport\s*\(|\bimport)\s*"([^"]+)"/g)].map((match) => match[1] ?? "");
}

/**
 * Types: tsc writes one file a module under dist/types; those that the two faces reach are kept, with `.js` in place of
 * `.ts`, so that they hold together where the package is installed. A package whose types are one file is copied beside them.
 */
function declare() {
  const tsc = join(root, "node_modules/typescript/bin/tsc");
  const run = spawnSync(
    process.execPath,
    [tsc, "-p", "tsconfig.build.json", "--outDir", `${building}/types`],
    {
      cwd: root,
      stdio: "inherit",
    },
  );
  if (run.status !== 0) throw new Error("tsc could not write the types");
  /** @type {Set<string>} */
  const reached = new Set();
  /** @param {string} path */
  const visit = (path) => {
    if (reached.has(path)) return;
    reached.add(path);
    let text = readFileSync(path, "utf8");
    for (const specifier of specifiers(text)) {
      const target = specifier.startsWith(".")
        ? specifier.replace(/\.ts$/, ".js")
        : vendorTypes(specifier, path);
      text = text.replaceAll(`"${specifier}"`, `"${target}"`);
      if (specifier.startsWith(".")) visit(resolve(dirname(path), specifier.replace(/\.ts$/, ".d.ts")));
      else reached.add(resolve(dirname(path), target.replace(/\.mjs$/, ".d.mts")));
    }
    writeFileSync(path, text);
  };
  for (const [face, module] of [
    ["index", "compiler/compile"],
    ["runtime", "runtime/index"],
  ]) {
    visit(join(dist, `types/${module}.d.ts`));
    writeFileSync(join(dist, `${face}.d.ts`), `export * from "./types/${module}.js";\n`);
  }
  for (const file of filesUnder(`${building}/types`))
    if (!reached.has(join(root, file))) rmSync(join(root, file));
  for (const folder of readdirSync(join(dist, "types"), { recursive: true, encoding: "utf8" })
    .sort()
    .reverse()) {
    const path = join(dist, "types", folder);
    if (statSync(path).isDirectory() && readdirSync(path).length === 0) rmSync(path, { recursive: true });
  }
}

/**
 * Copies the one-file types of a bundled package into dist/types/packages; what the specifier becomes is returned.
 * @param {string} specifier
 * @param {string} from the file that mentions it
 */
function vendorTypes(specifier, from) {
  const home = join(root, "node_modules", specifier);
  const { exports } = existsSync(join(home, "package.json"))
    ? JSON.parse(readFileSync(join(home, "package.json"), "utf8"))
    : {};
  const types = exports?.["."]?.types?.import;
  const text = typeof types === "string" ? readFileSync(join(home, types), "utf8") : undefined;
  if (text === undefined || specifiers(text).length > 0 || !types.endsWith(".d.mts")) {
    const file = relative(dist, from);
    throw new Error(
      `${file}: the public types mention "${specifier}", which those who install the package do not have`,
    );
  }
  const copy = join(dist, "types/packages", `${specifier}.d.mts`);
  mkdirSync(dirname(copy), { recursive: true });
  writeFileSync(copy, text);
  const path = posix.relative(dirname(from), copy.replace(/\.d\.mts$/, ".mjs"));
  return path.startsWith(".") ? path : `./${path}`;
}

/** The folder of the package that a bundled file belongs to. @param {string} input */
function packageOf(input) {
  const match = /^(.*node_modules\/(?:@[^/]+\/)?[^/]+)\//.exec(input);
  return match?.[1];
}

/**
 * dist/NOTICES.txt: each bundled package with its licence; packages with the same text share one entry.
 * @param {readonly import("esbuild").Metafile[]} metafiles
 */
function notices(metafiles) {
  const used = metafiles.flatMap(({ outputs }) =>
    Object.values(outputs).flatMap(({ inputs }) => Object.keys(inputs)),
  );
  const folders = [...new Set(used.map(packageOf))].filter((folder) => folder !== undefined).sort();
  /** @type {Map<string, Set<string>>} */
  const byText = new Map();
  for (const folder of folders) {
    const { name, version, license } = JSON.parse(readFileSync(join(root, folder, "package.json"), "utf8"));
    const texts = readdirSync(join(root, folder))
      .filter((file) => /^(licen[cs]e|notice|copying)/i.test(file))
      .sort()
      .map((file) => readFileSync(join(root, folder, file), "utf8").trim());
    const text = texts.length > 0 ? texts.join("\n\n") : `Licence: ${license ?? "not stated"}`;
    byText.set(text, (byText.get(text) ?? new Set()).add(`${name} ${version}`));
  }
  const entries = [...byText].map(([text, names]) => `${[...names].join("\n")}\n\n${text}\n`);
  const intro = "The files of this folder contain code of the packages below, under these licences.\n";
  writeFileSync(join(dist, "NOTICES.txt"), [intro, ...entries].join(`\n${"-".repeat(72)}\n\n`));
  return folders.length;
}

function printSizes() {
  for (const file of filesUnder(building).filter((name) => name.endsWith(".js"))) {
    const bytes = readFileSync(join(root, file));
    const kilobytes = (/** @type {number} */ size) => `${(size / 1000).toFixed(1)} kB`.padStart(10);
    process.stdout.write(
      `${file.replace(building, "dist").padEnd(44)}${kilobytes(bytes.length)}${kilobytes(gzipSync(bytes).length)} gzipped\n`,
    );
  }
}

const hash = inputsHash();
const fresh =
  existsSync(join(place, "NOTICES.txt")) && existsSync(stamp) && readFileSync(stamp, "utf8") === hash;
const onlyIfStale = process.argv.includes("--if-stale");
if (!(onlyIfStale && fresh)) {
  const metafiles = await bundle();
  finishCommand();
  declare();
  const count = notices(metafiles);
  if (!onlyIfStale) printSizes();
  rmSync(place, { recursive: true, force: true });
  renameSync(dist, place);
  mkdirSync(dirname(stamp), { recursive: true });
  writeFileSync(stamp, hash);
  if (!onlyIfStale) {
    process.stdout.write(`${count} packages are bundled in; dist/NOTICES.txt has their licences\n`);
  }
}
