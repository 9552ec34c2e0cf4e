/**
 * Processes: sweeps and laws, checked for form and, at every value of their sweeps, for their numbers.
 * In: `process` declarations. Out: processes by index, null where a fault was reported: `formed` are those whose sweeps
 * and laws can be read, `sound` those of them that have numbers everywhere. The numbers are made again by `process-at.ts`
 * where they are needed.
 */
import type { Diagnostic } from "../../grammar/diagnostic.ts";
import type { Law } from "../../grammar/tree.ts";
import type { Alphabet, Process, Quantity } from "../policy.ts";
import type { Of } from "./declarations.ts";
import { listNames } from "./figures.ts";
import { checkFixedProcess, type Processes } from "./measures.ts";
import { mentionsParameters, modelsAt, withPoint } from "./process-at.ts";
import { resolve } from "./scope.ts";
import { checkSweeps } from "./sweeps.ts";
import { shorten, type Values } from "./values.ts";

/** Checks all processes. */
export function checkProcesses(
  declarations: readonly Of<"process">[],
  alphabets: readonly Alphabet[],
  values: Values,
  findings: Diagnostic[],
): { readonly formed: Processes; readonly sound: Processes } {
  const found = declarations.map((declaration) => checkForm(declaration, alphabets, values));
  const formed = found.map(({ process, isWhole }) => (isWhole ? process : null));
  const sound = found.map(({ process, grid }, index) => {
    const hasNumbers = checkNumbers(process, grid, alphabets, values, findings);
    return hasNumbers ? (formed[index] ?? null) : null;
  });
  for (const process of formed) if (process !== null) checkSamples(process, alphabets, formed, values);
  return { formed, sound };
}

type Found = {
  readonly process: Process;
  /** The values of each parameter, null for one whose fault was reported. */
  readonly grid: readonly (readonly Quantity[] | null)[];
  /** Whether the process may be named by measures. */
  readonly isWhole: boolean;
};

function checkForm(declaration: Of<"process">, alphabets: readonly Alphabet[], values: Values): Found {
  const parameters = checkSweeps(declaration.sweeps, values);
  const laws: (Law | null)[] = alphabets.map(() => null);
  let isWhole = !parameters.includes(null);
  for (const law of declaration.laws) {
    const entity = resolve(values.scope, law.statistic, ["statistic"], "a law is given for a statistic");
    const first = entity === null ? null : laws[entity.index];
    if (entity === null) isWhole = false;
    else if (first) isWhole = reportTwice(declaration, law, first, values);
    else laws[entity.index] = law;
  }
  const process = {
    name: declaration.name.text,
    parameters: declaration.sweeps.map(({ name, span }, index) => ({
      name: name.text,
      values: parameters[index]?.values ?? [],
      span,
    })),
    laws,
    span: declaration.span,
  };
  return { process, grid: parameters.map((parameter) => parameter?.values ?? null), isWhole };
}

function reportTwice({ name }: Of<"process">, law: Law, first: Law, values: Values): false {
  values.scope.report(
    "law_twice",
    law.statistic.span,
    `process "${name.text}" gives "${law.statistic.text}" a second law`,
    {
      hint: "keep one of the two; chances of letters go into one `{ … }`",
      related: [{ span: first.span, message: "its first law is here" }],
      data: { process: name.text, statistic: law.statistic.text },
    },
  );
  return false;
}

/** Works out the laws at every value of the sweeps, and reports the first where something is wrong. */
function checkNumbers(
  process: Process,
  grid: Found["grid"],
  alphabets: readonly Alphabet[],
  values: Values,
  findings: Diagnostic[],
): boolean {
  const hangs = mentionsParameters(process);
  for (const point of points(grid)) {
    const before = findings.length;
    modelsAt(process, alphabets, values, point);
    if (findings.length > before) {
      const here = findings
        .splice(before)
        .map((finding) => withPoint(finding, process, point as readonly Quantity[]));
      findings.push(...here);
      return false;
    }
    if (!hangs) return true;
  }
  return true;
}

/** All combinations of values, the last parameter fastest; a parameter with a fault stays null. */
function* points(grid: Found["grid"]): Generator<readonly (Quantity | null)[]> {
  const [first, ...others] = grid;
  if (first === undefined) {
    yield [];
    return;
  }
  for (const value of first ?? [null]) for (const rest of points(others)) yield [value, ...rest];
}

/** A process lacks the law of a statistic that the signals read. */
export function checkLawsGiven(
  declarations: readonly Of<"process">[],
  processes: Processes,
  alphabets: readonly Alphabet[],
  isRead: readonly boolean[],
  values: Values,
): void {
  for (const [index, process] of processes.entries()) {
    const name = declarations[index]?.name;
    if (process === null || name === undefined) continue;
    const lacking = alphabets.filter((_, alphabet) => isRead[alphabet] && process.laws[alphabet] === null);
    if (lacking.length === 0) continue;
    const names = lacking.map((alphabet) => alphabet.name);
    values.scope.report(
      "law_missing",
      name.span,
      `process "${name.text}" gives no law for ${listNames(names)}, which the signals read`,
      {
        hint: `add a law: \`${names[0]} ~ …\``,
        related: lacking
          .slice(0, 6)
          .map((alphabet) => ({ span: alphabet.span, message: `"${alphabet.name}" is declared here` })),
        data: { process: name.text, statistics: names },
      },
    );
  }
}

/** The process that a phase 1 sample is drawn under gives the same statistic a normal law. */
function checkSamples(
  process: Process,
  alphabets: readonly Alphabet[],
  processes: Processes,
  values: Values,
): void {
  const parameters = new Map(process.parameters.map(({ name, values: range }) => [name, range[0] ?? null]));
  for (const [index, law] of process.laws.entries()) {
    const under = law?.model.kind === "distribution" ? law.model.estimated?.under : undefined;
    if (under === undefined) continue;
    const use = checkFixedProcess(under, "under", processes, { ...values, parameters });
    if (use === null) continue;
    const model = processes[use.process]?.laws[index]?.model;
    const isNormal = model?.kind === "distribution" && model.name.text === "normal" && model.ar === undefined;
    if (isNormal) continue;
    const statistic = alphabets[index]?.name ?? "";
    const message = `the sample is drawn under ${shorten(under)}, which gives "${statistic}" no law \`normal(mean, sd)\``;
    values.scope.report("model_mismatch", under.span, message, {
      hint: `name a process whose law of "${statistic}" is a plain \`normal(mean, sd)\``,
      data: { process: under.name.text, statistic },
    });
  }
}
