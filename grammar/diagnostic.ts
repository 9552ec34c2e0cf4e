/**
 * What Tocsin has to say about a text: one type for every stage, and the catalogue of all codes.
 *
 * A code is a word, never reused for something else. Each has a golden case under `test/golden/diagnostics/`. The message
 * says what is wrong, with names and values; the hint what to write instead; `related` points to the other place; `data`
 * carries the values for tools.
 */
import type { Span } from "./span.ts";

export type Severity = "error" | "warning" | "note";

export type Diagnostic = {
  readonly code: Code;
  readonly severity: Severity;
  readonly span: Span;
  readonly message: string;
  readonly hint?: string;
  readonly related?: readonly { readonly span: Span; readonly message: string }[];
  readonly data?: Readonly<Record<string, string | number | null | readonly (string | number)[]>>;
};

/** What a stage returns: its value, where there is one, and all it has to say. */
export type Outcome<T> = { readonly value?: T; readonly diagnostics: readonly Diagnostic[] };

type Entry = { readonly severity: Severity; readonly title: string; readonly explanation: string };

const error = (title: string, explanation: string): Entry => ({ severity: "error", title, explanation });
const warning = (title: string, explanation: string): Entry => ({ severity: "warning", title, explanation });
const note = (title: string, explanation: string): Entry => ({ severity: "note", title, explanation });

/** Every code, its severity, a title, and the text of `tocsin check --explain CODE`. */
export const catalogue = {
  // Text
  not_text: error(
    "not text",
    "A policy is UTF-8 text. The file holds bytes that are not, or a NUL character.",
  ),
  unexpected_character: error(
    "unexpected character",
    "A character that begins no word, number or sign of the language.",
  ),
  unterminated_string: error(
    "unterminated string",
    "A string ends with a quotation mark on the line it began on.",
  ),
  bad_number: error(
    "malformed number",
    "Numbers are decimal, with a digit on both sides of a point, and no letter straight after: 12, 0.05, 1e-4, 5%.",
  ),
  syntax: error("syntax error", "The text is not a declaration of the language at this place."),
  nesting_too_deep: error(
    "nesting too deep",
    "Parentheses, braces and operators may be nested 64 deep; one chain of operators may have 1,000 of them.",
  ),
  // Names and files
  name_taken: error(
    "name used twice",
    "Letters, groups, rules, lets, statistics, signals, processes and process parameters share one name space.",
  ),
  name_case: warning(
    "names that differ only in case",
    "Two names that differ only in case are easily taken for one another.",
  ),
  name_not_allowed: error(
    "name not allowed",
    "A signal may not be called `all`, for `expect all` has a meaning of its own; nor a let or a parameter `pi`.",
  ),
  unknown_name: error(
    "unknown name",
    "The name is declared nowhere in the policy and the libraries it uses.",
  ),
  wrong_role: error("name of another kind", "The name is declared, but as something that cannot stand here."),
  cycle: error("defined by itself", "Rules, groups and lets may not lead back to themselves."),
  declared_twice: error("declared twice", "This declaration may stand only once in a policy."),
  use_not_found: error("library not found", "The file named by `use` cannot be read."),
  use_outside: error("library outside the folder", "A library lies in the policy's folder or below it."),
  use_cycle: error("libraries that use each other", "A library may not lead back to itself by `use`."),
  use_policy: error("not a library", "A file with a `policy` declaration cannot be used by another."),
  library_names: note(
    "names left to the user",
    "The names this library mentions and does not declare: its user declares them.",
  ),
  // Numbers
  division_by_zero: error("division by zero", "The divisor is exactly zero."),
  number_domain: error("outside the function's domain", "The function has no value for this argument."),
  number_too_large: error(
    "number out of range",
    "Exact numbers are kept to 1,000 digits and the range of doubles.",
  ),
  unknown_function: error(
    "unknown function",
    "The functions are sqrt exp ln abs min max upper lower c4 d2 d3, and pi.",
  ),
  wrong_operands: error(
    "wrong operands",
    "The function, model or measure takes another number or kind of operands.",
  ),
  open_question: error(
    "question that exact arithmetic leaves open",
    "The numbers are known to double accuracy only, and the answer lies within what that leaves open.",
  ),
  count_not_whole: error(
    "count that is not whole",
    "A count is a whole number, or the name of a `let` that has a whole value.",
  ),
  count_out_of_range: error(
    "count out of range",
    "Counts of trials are from 1 to 1,000,000, gap limits from 0, and k is at most m.",
  ),
  // Alphabets and sets
  cut_unowned: error(
    "cut that belongs to no letter",
    "Exactly one side of a cut carries the `=`; that letter owns the cut.",
  ),
  cut_owned_twice: error(
    "cut that belongs to two letters",
    "Exactly one side of a cut carries the `=`; that letter owns the cut.",
  ),
  cuts_not_increasing: error(
    "cuts that do not increase",
    "Cuts increase from left to right; two may be equal only around a letter that owns both.",
  ),
  cuts_collide: error(
    "cuts that collide when rounded",
    "A detector rounds each cut once to the nearest double; two different cuts became one.",
  ),
  letter_text: error(
    "text that cannot stand for a letter",
    "Each letter is read from a text of its own; an empty text is a missing value.",
  ),
  too_many_letters: error(
    "too many letters",
    "The combinations of letters of all alphabets are limited to 65,536, the letters of `markov` to 500.",
  ),
  set_empty: error("empty SET", "The SET holds no trial."),
  assigned_twice: error(
    "letter assigned twice",
    "All the assigns of a policy are one function: a letter is assigned once.",
  ),
  assigned_to_itself: error(
    "letter assigned to itself",
    "The failures of a success may not hold the success.",
  ),
  assign_unclear: error(
    "assignment of what is no letter",
    "Failures are assigned to letters: to one, or to a choice of several.",
  ),
  // Rules and signals
  gap_unclear: error(
    "gap whose failure is unclear",
    "All letters of the SET of `k SET gap r` need the same assignment, or the failures are named: `gap r of SET`.",
  ),
  gap_overlap: error(
    "success that is also a failure",
    "No trial may be both a success and a failure of one weak run.",
  ),
  pattern_empty: error("pattern that the empty string satisfies", "A pattern needs at least one trial."),
  silent_not: error(
    "`not` that holds on silence",
    "With every completion replaced by no, a signal's condition and the operands of `separate`, `overlapping`, `then` and `unless` must be no.",
  ),
  signal_never: warning("signal that can never be raised", "No stream of trials raises the signal."),
  too_many_signals: error("too many signals", "A policy may declare 31 signals."),
  no_signal: error(
    "policy without a signal",
    "A policy declares at least one signal; a library declares no policy.",
  ),
  no_alphabet: error(
    "policy without an alphabet",
    "A policy declares at least one statistic with `zones` or `letters`.",
  ),
  missing_alters_blocks: warning(
    "missing trials shift the batches",
    "With `blocks`, a missing trial that is refused or skipped does not count, so batches drift; `clear before` marks their start.",
  ),
  unknown_unit: error("unknown unit", "The units of time are s, min, h, day and week."),
  cadence_range: error("cadence out of range", "The time from one trial to the next is more than zero."),
  too_many_states: error(
    "too many states",
    "The machine would be larger than the state budget (`--max-states`).",
  ),
  // Processes
  unknown_model: error("unknown model", "The models are listed in the language reference under `process`."),
  model_parameter: error("model parameter out of range", "The model has no such law."),
  model_mismatch: error(
    "model that does not fit the alphabet",
    "A distribution needs zones; categories need a mass or markov.",
  ),
  probability_range: error("probability out of range", "A probability lies between 0 and 1."),
  probabilities_sum: error(
    "probabilities that do not add up to 1",
    "The probabilities of a mass add up to exactly 1.",
  ),
  law_missing: error(
    "process that lacks an alphabet",
    "A process gives a law for each alphabet that a measured signal reads.",
  ),
  law_twice: error("law given twice", "A process gives each alphabet one law."),
  letter_not_missing: error(
    "letter that does not stand for missing",
    "`with` gives the chance of the letter of `missing … as`.",
  ),
  letter_twice: error(
    "letter named twice in a law",
    "A mass names each letter once, and markov has one row for each.",
  ),
  row_missing: error("markov without a row", "`markov` says of every letter what follows it."),
  sweep_range: error(
    "sweep out of range",
    "A sweep goes from a value up to another by a positive step, in at most 10,000 values.",
  ),
  // Contracts
  unknown_measure: error(
    "unknown measure",
    "The measures are listed in the language reference under `require`.",
  ),
  measure_not_built: error(
    "measure not built yet",
    "The policy is right, but this version cannot measure this model yet.",
  ),
  measure_undefined: error(
    "measure without a value",
    "The measure has no value for this signal and process.",
  ),
  require_fails: error("requirement that fails", "The measure lies outside what the policy requires."),
  require_open: error(
    "requirement that stays open",
    "The proven interval of the measure holds the required value.",
  ),
  expect_fails: error("expectation that fails", "The signals raised on the trials are not those expected."),
  trial_mismatch: error(
    "trial that does not fit the alphabets",
    "A trial names one letter of each alphabet, in declared order.",
  ),
  raise_misplaced: error(
    "raise written where none belongs",
    "`TRIAL -> SIGNAL` belongs to `expect all`; `expect SIGNAL` expects one raise, at the last trial.",
  ),
  // Allowances
  allow_unknown: error("unknown code", "`allow` names the code of a warning."),
  allow_reason: error(
    "allowance without a reason",
    '`allow CODE "reason"` says why the warning is accepted.',
  ),
  allow_idle: warning("nothing left to allow", "The policy has no warning of this code any more."),
} as const satisfies Record<string, Entry>;

export type Code = keyof typeof catalogue;

/** Makes a diagnostic with the severity of its code. */
export function diagnose(
  code: Code,
  span: Span,
  message: string,
  more: Pick<Diagnostic, "hint" | "related" | "data"> = {},
): Diagnostic {
  return { code, severity: catalogue[code].severity, span, message, ...more };
}

/** Diagnostics in the order they are shown: by file, place and code. */
export function sortDiagnostics(diagnostics: readonly Diagnostic[]): Diagnostic[] {
  return [...diagnostics].sort(
    (a, b) =>
      compareText(a.span.source.path, b.span.source.path) ||
      a.span.start - b.span.start ||
      a.span.end - b.span.end ||
      compareText(a.code, b.code),
  );
}

function compareText(a: string, b: string): number {
  return a < b ? -1 : a > b ? 1 : 0;
}

/** Whether any of them is an error. */
export function hasErrors(diagnostics: readonly Diagnostic[]): boolean {
  return diagnostics.some((d) => d.severity === "error");
}
