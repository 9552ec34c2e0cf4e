/**
 * Refusals, and the checks of single JSON values that make them. A check takes a value nobody has vouched for and where it
 * stands; it gives back a typed copy, or `undefined` after noting why not. Nothing here throws on any JSON value, and no
 * list is read further than its own length. Of a list of numbers only the first wrong one is noted, and of all problems
 * the first hundred, so that a hostile file cannot make a long report.
 */

/** Words, never reused: what is wrong with a machine file or a snapshot. */
export type ProblemCode =
  | "not_json"
  | "not_a_machine"
  | "not_a_snapshot"
  | "wrong_version"
  | "other_machine"
  | "no_reasons"
  | "wrong_type"
  | "missing_field"
  | "unknown_field"
  | "bad_number"
  | "bad_length"
  | "out_of_range"
  | "bad_text"
  | "bad_order"
  | "duplicate_name"
  | "too_deep"
  | "too_many";

export type Problem = {
  readonly code: ProblemCode;
  /** JSON path of the offending value: `$.tables.next[12]`. */
  readonly where: string;
  /** What is wrong, one sentence with the values. */
  readonly what: string;
};

const MOST_PROBLEMS = 100;

export function note(problems: Problem[], code: ProblemCode, where: string, what: string): undefined {
  if (problems.length < MOST_PROBLEMS) problems.push({ code, where, what });
  return undefined;
}

/** A value nobody has vouched for, in a few words. */
export function show(value: unknown): string {
  if (typeof value === "string") {
    return value.length > 40 ? `${JSON.stringify(value.slice(0, 40))}…` : JSON.stringify(value);
  }
  if (typeof value === "number") return Object.is(value, -0) ? "-0" : String(value);
  if (typeof value === "boolean" || value === null) return String(value);
  if (value === undefined) return "nothing";
  return Array.isArray(value) ? "a list" : typeof value === "object" ? "an object" : `a ${typeof value}`;
}

/** JSON text to its value; a mark of byte order in front is passed over. A value that is no text stands for itself. */
export function readJson(input: unknown, problems: Problem[]): { readonly json: unknown } | undefined {
  if (typeof input !== "string") return { json: input };
  try {
    return { json: JSON.parse(input.startsWith("\uFEFF") ? input.slice(1) : input) };
  } catch {
    return note(
      problems,
      "not_json",
      "$",
      input.trim() === "" ? "the text is empty" : "the text is not JSON",
    );
  }
}

/** An object with exactly these fields. */
export function checkObject<F extends string>(
  value: unknown,
  where: string,
  fields: readonly F[],
  problems: Problem[],
): Readonly<Record<F, unknown>> | undefined {
  if (typeof value !== "object" || value === null || Array.isArray(value)) {
    return note(problems, "wrong_type", where, `an object is due here, not ${show(value)}`);
  }
  const before = problems.length;
  for (const field of fields) {
    if (!Object.hasOwn(value, field))
      note(problems, "missing_field", `${where}.${field}`, "this field is missing");
  }
  for (const key of Object.keys(value)) {
    if (!(fields as readonly string[]).includes(key)) {
      note(problems, "unknown_field", where, `this version of the format has no field ${show(key)} here`);
    }
  }
  return problems.length === before ? (value as Record<F, unknown>) : undefined;
}

/** A list of `least` to `most` entries. */
export function checkList(
  value: unknown,
  where: string,
  least: number,
  most: number,
  problems: Problem[],
): readonly unknown[] | undefined {
  if (!Array.isArray(value)) {
    return note(problems, "wrong_type", where, `a list is due here, not ${show(value)}`);
  }
  const due = least === most ? `${least}` : most === Infinity ? `at least ${least}` : `${least} to ${most}`;
  if (value.length < least || value.length > most) {
    return note(problems, "bad_length", where, `this list has ${value.length} entries; due are ${due}`);
  }
  // JSON has no lists with holes, JavaScript has, and what walks a list may pass over them.
  for (let i = 0; i < value.length; i++) {
    if (!(i in value)) return note(problems, "wrong_type", `${where}[${i}]`, "this list has a hole here");
  }
  return value;
}

/** A text of at least one character. */
export function checkText(value: unknown, where: string, problems: Problem[]): string | undefined {
  if (typeof value !== "string") {
    return note(problems, "wrong_type", where, `a text is due here, not ${show(value)}`);
  }
  return value === "" ? note(problems, "bad_text", where, "this text is empty") : value;
}

/** A name as the language has them: letters, digits and `_`, no digit first. */
export function checkName(value: unknown, where: string, problems: Problem[]): string | undefined {
  const text = checkText(value, where, problems);
  if (text === undefined || /^[A-Za-z_][A-Za-z0-9_]*$/.test(text)) return text;
  return note(problems, "bad_text", where, `${show(text)} is not a name`);
}

/** One of the given words. */
export function checkWord<W extends string>(
  value: unknown,
  where: string,
  words: readonly W[],
  problems: Problem[],
): W | undefined {
  const word = words.find((candidate) => candidate === value);
  if (word !== undefined) return word;
  const due = words.map(show).join(" or ");
  return note(problems, "bad_text", where, `${due} is due here, not ${show(value)}`);
}

/** A whole number from `least` to `most`. */
export function checkWhole(
  value: unknown,
  where: string,
  least: number,
  most: number,
  problems: Problem[],
): number | undefined {
  if (typeof value === "number" && Number.isInteger(value) && value >= least && value <= most)
    return value + 0;
  return note(problems, ...refuseWhole(value, where, least, most));
}

/** A list of exactly `length` whole numbers from `least` to `most`, copied. */
export function checkWholes<A extends Int32Array | Uint8Array | Float64Array>(
  value: unknown,
  where: string,
  least: number,
  most: number,
  Copy: new (length: number) => A,
  length: number,
  problems: Problem[],
): A | undefined {
  const list = checkList(value, where, length, length, problems);
  if (list === undefined) return undefined;
  for (let i = 0; i < length; i++) {
    const entry = list[i];
    if (typeof entry !== "number" || !Number.isInteger(entry) || entry < least || entry > most) {
      return note(problems, ...refuseWhole(entry, `${where}[${i}]`, least, most));
    }
  }
  const copy = new Copy(length);
  for (let i = 0; i < length; i++) copy[i] = list[i] as number;
  return copy;
}

function refuseWhole(
  value: unknown,
  where: string,
  least: number,
  most: number,
): [ProblemCode, string, string] {
  if (typeof value !== "number") {
    return ["wrong_type", where, `a whole number is due here, not ${show(value)}`];
  }
  if (!Number.isInteger(value)) return ["bad_number", where, `${show(value)} is not a whole number`];
  return ["out_of_range", where, `${value} is not from ${least} to ${most}`];
}

/** Notes each name that stands before in the list. */
export function checkDistinct(
  names: readonly string[],
  where: (i: number) => string,
  problems: Problem[],
): void {
  const seen = new Set<string>();
  names.forEach((name, i) => {
    if (seen.has(name)) note(problems, "duplicate_name", where(i), `${show(name)} stands here a second time`);
    seen.add(name);
  });
}
