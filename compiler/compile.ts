/**
 * The library's face: the text of a policy becomes a checked policy and its minimal machine, and from these everything
 * else that Tocsin does.
 *
 * User mistakes are returned as diagnostics, never thrown. Nothing is read or written but through `read`.
 */
import { type Diagnostic, hasErrors } from "../grammar/diagnostic.ts";
import { checkPolicy, isLibrary, type Library } from "./check/check.ts";
import type { Machine } from "./machine/automaton.ts";
import { buildMachine } from "./machine/build.ts";
import type { Policy } from "./policy.ts";

export type CompileOptions = {
  /** How the policy's file is named in messages; libraries are looked for beside it. */
  readonly path?: string;
  /** The text of a library, by its path, or null when it cannot be read. Without it a policy can use no library. */
  readonly read?: (path: string) => string | null;
  /** Expressions that replace those of lets, by name. */
  readonly lets?: ReadonlyMap<string, string>;
  /** The state budget; 2,000,000 unless said. */
  readonly mostStates?: number;
};

export type Compilation = {
  /** The checked policy, where the text has no error. */
  readonly policy?: Policy;
  /** A file without a `policy` declaration, checked as far as it goes. */
  readonly library?: Library;
  /** The minimal machine, where there is a policy and it fits the state budget. */
  readonly machine?: Machine;
  readonly diagnostics: readonly Diagnostic[];
};

/** Compiles the text of a policy. */
export function compile(text: string, options: CompileOptions = {}): Compilation {
  const path = options.path ?? "policy.tocsin";
  const read = (wanted: string) => (wanted === path ? text : (options.read?.(wanted) ?? null));
  const { value, diagnostics } = checkPolicy(path, read, options.lets ? { lets: options.lets } : {});
  if (!value || hasErrors(diagnostics)) return { diagnostics };
  if (isLibrary(value)) return { library: value, diagnostics };
  const built = buildMachine(
    value,
    options.mostStates === undefined ? {} : { mostStates: options.mostStates },
  );
  const all = [...diagnostics, ...built.diagnostics];
  return built.value
    ? { policy: value, machine: built.value, diagnostics: all }
    : { policy: value, diagnostics: all };
}

export { type Code, catalogue, type Diagnostic, type Severity } from "../grammar/diagnostic.ts";
export { renderDiagnostic } from "../grammar/render.ts";
export { positionAt } from "../grammar/source.ts";
export { machineFile } from "./emit/machine-file.ts";
export type { Machine } from "./machine/automaton.ts";
