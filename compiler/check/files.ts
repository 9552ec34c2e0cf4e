/**
 * The files of a policy: its own, and the libraries reached by `use`, each once.
 * In: a path and the way to read one. Out: all declarations in the order the text reads with every `use` replaced by its
 * library, the sources, and what is wrong with the files. A library lies in the policy's folder or below it; the paths are
 * judged as text, so what a symbolic link leads to is for the reader to judge.
 */
import { type Diagnostic, diagnose } from "../../grammar/diagnostic.ts";
import { parse } from "../../grammar/parse.ts";
import { makeSource, type Source } from "../../grammar/source.ts";
import type { Declaration, FileTree, Quoted } from "../../grammar/tree.ts";
import type { Of } from "./declarations.ts";

/** The longest way from a policy to a library. */
const MOST_CHAIN = 64;

/** The text of a file, or null when it cannot be read. */
export type Read = (path: string) => string | null;

export type Files = {
  /** The policy's own first, then the libraries in the order they were reached. */
  readonly sources: readonly Source[];
  readonly declarations: readonly Declaration[];
};

type Reading = {
  readonly read: Read;
  /** What stands before the paths below: the policy's folder, with its last separator. */
  readonly folder: string;
  readonly files: Map<string, FileTree>;
  readonly declarations: Declaration[];
  readonly findings: Diagnostic[];
};

/** Reads a policy and its libraries. */
export function readFiles(path: string, read: Read, findings: Diagnostic[]): Files {
  const end = Math.max(path.lastIndexOf("/"), path.lastIndexOf("\\")) + 1;
  const reading: Reading = { read, folder: path.slice(0, end), files: new Map(), declarations: [], findings };
  const text = read(path);
  if (text === null) {
    const span = { source: makeSource(path, ""), start: 0, end: 0 };
    findings.push(diagnose("use_not_found", span, `the file "${path}" cannot be read`));
    return { sources: [span.source], declarations: [] };
  }
  readFile(path.slice(end), text, [], reading);
  return {
    sources: [...reading.files.values()].map(({ source }) => source),
    declarations: reading.declarations,
  };
}

/** Reads one file, named by its path from the policy's folder, and all it uses; `chain` leads to it. */
function readFile(file: string, text: string, chain: readonly string[], reading: Reading): void {
  const { tree, diagnostics } = parse(makeSource(reading.folder + file, text));
  reading.files.set(file, tree);
  for (const diagnostic of diagnostics) reading.findings.push(diagnostic);
  for (const declaration of tree.declarations) {
    if (declaration.kind === "use") useFile(declaration, [...chain, file], reading);
    else if (declaration.kind === "policy" && chain.length > 0) reportPolicy(declaration, file, reading);
    else reading.declarations.push(declaration);
  }
}

function useFile({ path }: Of<"use">, chain: readonly string[], reading: Reading): void {
  const file = resolvePath(path, chain.at(-1) ?? "", reading.findings);
  if (file === null) return;
  if (chain.includes(file)) {
    reportCycle(path, [...chain.slice(chain.indexOf(file)), file], reading);
    return;
  }
  if (reading.files.has(file)) return;
  if (chain.length > MOST_CHAIN) {
    const message = `libraries use each other more than ${MOST_CHAIN} deep`;
    reading.findings.push(diagnose("nesting_too_deep", path.span, message, { data: { most: MOST_CHAIN } }));
    return;
  }
  const text = reading.read(reading.folder + file);
  if (text === null) {
    reading.findings.push(
      diagnose("use_not_found", path.span, `the library "${path.value}" cannot be read`, {
        hint: `looked for ${reading.folder}${file}: the path is relative to the file that uses it`,
        data: { path: reading.folder + file },
      }),
    );
    return;
  }
  readFile(file, text, chain, reading);
}

/** The path from the policy's folder of a library that `from` uses, or null once the reason was reported. */
function resolvePath(path: Quoted, from: string, findings: Diagnostic[]): string | null {
  const fail = (code: "use_outside" | "use_not_found", message: string, hint: string): null => {
    findings.push(diagnose(code, path.span, message, { hint, data: { path: path.value } }));
    return null;
  };
  if (/^([/\\]|[A-Za-z]:)/.test(path.value)) {
    const hint = 'name it from the folder of this file, as in `use "rules/zones.tocsin"`';
    return fail("use_outside", `"${path.value}" is an absolute path`, hint);
  }
  if (path.value.includes("\\")) {
    return fail(
      "use_not_found",
      `"${path.value}" parts folders with \\`,
      `write \`${path.value.replaceAll("\\", "/")}\``,
    );
  }
  const parts = from.split("/").slice(0, -1);
  for (const part of path.value.split("/")) {
    if (part === "" || part === ".") continue;
    if (part !== "..") parts.push(part);
    else if (parts.pop() === undefined) {
      const hint = "move the library into the policy's folder, or the policy up";
      return fail("use_outside", `"${path.value}" leads out of the policy's folder`, hint);
    }
  }
  if (parts.length > 0 && !/(^|\/)\.{0,2}$/.test(path.value)) return parts.join("/");
  return fail("use_not_found", `"${path.value}" names no file`, 'write `use "path.tocsin"`');
}

function reportCycle(path: Quoted, way: readonly string[], reading: Reading): void {
  const shown = way.length > 12 ? [...way.slice(0, 11), "…", ...way.slice(-1)] : way;
  const message = `"${way.at(-1)}" is used by itself: ${shown.join(" → ")}`;
  reading.findings.push(
    diagnose("use_cycle", path.span, message, {
      hint: "move what both need into a third library",
      data: { files: way },
    }),
  );
}

function reportPolicy(declaration: Of<"policy">, file: string, reading: Reading): void {
  const message = `"${file}" is a policy of its own ("${declaration.name.text}") and cannot be used by another`;
  reading.findings.push(
    diagnose("use_policy", declaration.span, message, {
      hint: "move what both need into a library: a file without `policy`",
      data: { file, policy: declaration.name.text },
    }),
  );
}
