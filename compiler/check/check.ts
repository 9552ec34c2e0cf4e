/**
 * The check: from the text of a policy to the policy, with everything that is wrong with it.
 * In: a path, the way to read files, and lets given other values. Out: the policy, or the library, when there is no error;
 * and all diagnostics, in the order of the text. After a syntax error in any file nothing else is checked, since a
 * declaration that could not be read would be missed everywhere. Warnings are given as they are; `applyAllowances` takes
 * the allowed ones out once all stages have spoken.
 */
import {
  type Diagnostic,
  diagnose,
  hasErrors,
  type Outcome,
  sortDiagnostics,
} from "../../grammar/diagnostic.ts";
import type { Source } from "../../grammar/source.ts";
import type { Policy } from "../policy.ts";
import { checkAllows } from "./allowances.ts";
import { checkAlphabets } from "./alphabets.ts";
import { checkAssigns } from "./assigns.ts";
import { checkContracts } from "./contracts.ts";
import { type Declared, sortDeclarations } from "./declarations.ts";
import { listNames } from "./figures.ts";
import { type Files, type Read, readFiles } from "./files.ts";
import { evaluateLets } from "./lets.ts";
import { namesLeft } from "./library.ts";
import { declareNames } from "./names.ts";
import { checkLawsGiven, checkProcesses } from "./processes.ts";
import { alphabetsRead } from "./reading.ts";
import { checkRules } from "./rules.ts";
import { makeScope, type Scope } from "./scope.ts";
import { evaluateGroups } from "./sets.ts";
import { checkBlocks, checkCadence, only } from "./settings.ts";
import { checkClearsAfter, checkClearsBefore, checkSignal, checkSignalCount } from "./signals.ts";
import { MOST_SYMBOLS, numberTrials, type Trials } from "./trials.ts";

export type { Read } from "./files.ts";

/** A file without `policy`, for `use` alone. */
export type Library = {
  readonly kind: "library";
  readonly source: Source;
  readonly sources: readonly Source[];
  /** The names it mentions and leaves to its user to declare. */
  readonly left: readonly string[];
};

export type CheckOptions = {
  /** Expressions that take the place of those of lets, by name (`--let d=2`). */
  readonly lets?: ReadonlyMap<string, string>;
};

/** Tells a library from a policy. */
export function isLibrary(checked: Policy | Library): checked is Library {
  return "kind" in checked;
}

/** Reads and checks a policy or a library. */
export function checkPolicy(path: string, read: Read, options: CheckOptions = {}): Outcome<Policy | Library> {
  const findings: Diagnostic[] = [];
  const files = readFiles(path, read, findings);
  if (hasErrors(findings)) return { diagnostics: sortDiagnostics(findings) };
  const declared = sortDeclarations(files.declarations);
  const names = declareNames(files.declarations, declared, findings);
  const scope = makeScope(names, findings, declared.policies.length === 0);
  const policy = checkDeclared(declared, files, scope, options, findings);
  const value = scope.isLibrary ? makeLibrary(files, scope, findings) : policy;
  const diagnostics = sortDiagnostics(findings);
  return hasErrors(findings) || value === null ? { diagnostics } : { value, diagnostics };
}

/** All checks but those of files and names; null when a part could not be made, its fault being reported. */
function checkDeclared(
  declared: Declared,
  files: Files,
  scope: Scope,
  options: CheckOptions,
  findings: Diagnostic[],
): Policy | null {
  checkPresence(declared, scope);
  const lets = evaluateLets(declared.lets, options.lets ?? new Map(), scope, findings);
  const values = { scope, lets: lets.values, parameters: null };
  const alphabets = checkAlphabets(declared, values);
  const trials = numberAll(
    alphabets.map(({ letters }) => letters.length),
    declared,
    scope,
  );
  const sets = evaluateGroups(declared.groups, alphabets, trials, scope);
  const rules = checkRules(declared.rules, {
    sets,
    values,
    assignments: checkAssigns(declared.assigns, sets),
  });
  const signals = declared.signals.map((declaration) => checkSignal(declaration, rules, values));
  checkSignalCount(declared.signals, scope);
  const reader = {
    signals: signals.filter((signal) => signal !== null),
    clearBefore: checkClearsBefore(declared.clearsBefore, sets),
    clearAfter: checkClearsAfter(declared.clearsAfter, rules),
  };
  const missing = only(declared.responses, "the response to a missing trial", scope)?.response ?? "refuse";
  const haveLetters = alphabets.length > 0 && alphabets.every((alphabet) => alphabet.missing !== null);
  const block = checkBlocks(declared, missing, haveLetters, values);
  const cadence = checkCadence(declared, scope);
  const { formed, sound } = checkProcesses(declared.processes, alphabets, values, findings);
  if (trials !== null && !scope.isLibrary) {
    checkLawsGiven(declared.processes, formed, alphabets, alphabetsRead(reader, trials), values);
  }
  const { requires, expects } = checkContracts(declared, sound, alphabets, trials, values);
  const allowances = checkAllows(declared.allows, scope);
  const [head] = declared.policies;
  const [source] = files.sources;
  if (head === undefined || source === undefined || trials === null || hasErrors(findings)) return null;
  return {
    name: head.name.text,
    title: head.title?.value ?? null,
    source,
    sources: files.sources,
    alphabets,
    symbols: trials.symbols,
    lets: new Map(
      declared.lets.map(({ name, span }, index) => [
        name.text,
        { value: lets.values[index]!, expression: lets.expressions[index]!, span },
      ]),
    ),
    groups: declared.groups.map(({ name, span }, index) => ({
      name: name.text,
      set: sets.groups[index]!.trials,
      span,
    })),
    rules: declared.rules.map(({ name, span }, index) => ({
      name: name.text,
      condition: rules.conditions[index]!,
      span,
    })),
    ...reader,
    missing,
    block,
    cadence,
    processes: sound.map((process) => process!),
    requires,
    expects,
    allowances,
  };
}

/** A policy has a name, an alphabet and a signal. */
function checkPresence(declared: Declared, scope: Scope): void {
  const head = only(declared.policies, "`policy`", scope);
  if (head === null) return;
  if (declared.statistics.length === 0) {
    scope.report("no_alphabet", head.span, `policy "${head.name.text}" declares no statistic`, {
      hint: "say how a trial is classified: `zones weight: low < 1 <= fine <= 2 < high`",
    });
  }
  if (declared.signals.length === 0) {
    scope.report("no_signal", head.span, `policy "${head.name.text}" declares no signal`, {
      hint: "say when to raise one: `signal stop when 3 high`",
    });
  }
}

/** Numbers the combinations of letters, if they are not too many. */
function numberAll(sizes: readonly number[], declared: Declared, scope: Scope): Trials | null {
  const trials = numberTrials(sizes);
  if (trials !== null) return trials;
  const last = declared.statistics.at(-1)!;
  const most = MOST_SYMBOLS.toLocaleString("en-US");
  const combinations = sizes.reduce((product, size) => product * size, 1);
  const message =
    sizes.length === 1
      ? `"${last.name.text}" has ${combinations.toLocaleString("en-US")} letters; at most ${most} are possible`
      : `the letters of all statistics make ${combinations.toLocaleString("en-US")} combinations; at most ${most} are possible`;
  scope.report("too_many_letters", last.name.span, message, {
    hint: "give a statistic fewer letters, or make two policies of it",
    data: { combinations: Number.isFinite(combinations) ? combinations : null, most: MOST_SYMBOLS },
  });
  return null;
}

/** A library, with a note of the names it leaves to its user. */
function makeLibrary(files: Files, scope: Scope, findings: Diagnostic[]): Library | null {
  const [source] = files.sources;
  if (source === undefined) return null;
  const mentioned = namesLeft(files.declarations, scope.names);
  const left = [...mentioned.keys()];
  if (left.length > 0) {
    const span = { source, start: 0, end: 0 };
    findings.push(
      diagnose("library_names", span, `this library leaves ${listNames(left, 40)} to its user`, {
        hint: "a policy that uses it declares them",
        related: [...mentioned]
          .slice(0, 40)
          .map(([name, { span: at }]) => ({ span: at, message: `"${name}" is first mentioned here` })),
        data: { names: left },
      }),
    );
  }
  return { kind: "library", source, sources: files.sources, left };
}
