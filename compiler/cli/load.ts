/** From a path typed at the command line to a compiled policy: reading, naming, and saying what is wrong. */
import { realpathSync } from "node:fs";
import { dirname, sep } from "node:path";
import { type Diagnostic, diagnose, hasErrors } from "../../grammar/diagnostic.ts";
import { makeSource } from "../../grammar/source.ts";
import { type Compilation, compile } from "../compile.ts";
import type { Machine } from "../machine/automaton.ts";
import type { Policy } from "../policy.ts";
import { EXIT, Stop, UsageError } from "./exit.ts";
import { readText, STANDARD_INPUT } from "./files.ts";
import { showDiagnostics } from "./output.ts";

export type LoadOptions = {
  readonly let?: ReadonlyMap<string, string> | undefined;
  readonly maxStates: number;
};

/** The name that standard input goes by in messages. */
const STANDARD_INPUT_NAME = "standard-input.tocsin";

/** Reads and compiles a file; all it has to say is in the diagnostics. A file that is not there is a usage error. */
export function load(file: string, options: LoadOptions): Compilation {
  const path = file === STANDARD_INPUT ? STANDARD_INPUT_NAME : file;
  const { text, isText } = readText(file);
  if (!isText) return { diagnostics: [notText(path, text)] };
  const lets = options.let ?? new Map<string, string>();
  return compile(text, {
    path,
    read: (wanted) => readLibrary(path, wanted),
    lets,
    mostStates: options.maxStates,
  });
}

/** Loads a policy that must have a machine; otherwise shows why and stops with exit code 1. */
export function loadMachine(file: string, options: LoadOptions): { policy: Policy; machine: Machine } {
  const { policy, machine, library, diagnostics } = load(file, options);
  const errors = diagnostics.filter(({ severity }) => severity === "error");
  if (policy && machine && errors.length === 0) return { policy, machine };
  showDiagnostics(errors, process.stderr);
  if (library)
    throw new UsageError(`${file} is a library: it declares no policy, so there is no machine to make`);
  throw new Stop(EXIT.findings);
}

/** Ends the command with what is wrong in a question typed at the command line; `example` shows how it is asked. */
export function demandAnswer<T>(
  outcome: { value?: T; diagnostics: readonly Diagnostic[] },
  what: string,
  example: string,
): T {
  const { value, diagnostics } = outcome;
  if (value !== undefined && !hasErrors(diagnostics)) return value;
  const first = diagnostics.find(({ severity }) => severity === "error");
  // What is wrong with the form is told of the sentence it was put into, which nobody typed.
  if (!first || first.code === "syntax")
    throw new UsageError(`${what}: not understood; write it as in ${example}`);
  throw new UsageError(`${what}: ${first.message}${first.hint ? ` (${first.hint})` : ""}`);
}

/** What is said of a file whose bytes are not UTF-8, at the first that is not. */
export function notText(path: string, text: string): Diagnostic {
  const start = Math.max(0, text.indexOf("\uFFFD"));
  const span = { source: makeSource(path, text), start, end: start + 1 };
  return diagnose("not_text", span, "the file is not UTF-8 text from here on", { hint: "save it as UTF-8" });
}

/** A library's text, unless it is missing, is not text, or lies outside the policy's folder through a symbolic link. */
function readLibrary(policyPath: string, path: string): string | null {
  try {
    const folder = realpathSync(dirname(policyPath));
    const real = realpathSync(path);
    if (!real.startsWith(folder.endsWith(sep) ? folder : folder + sep)) return null;
    const { text, isText } = readText(path);
    return isText ? text : null;
  } catch {
    return null;
  }
}
