/**
 * The one name space of a policy: letters, groups, rules, lets, statistics, signals, processes and their parameters.
 * In: the declarations by kind. Out: what each name stands for. The first declaration of a name keeps it; a later one is
 * reported with the place of the first. Names that differ only in case are warned about.
 */
import type { Diagnostic } from "../../grammar/diagnostic.ts";
import { diagnose } from "../../grammar/diagnostic.ts";
import type { Declaration, Name } from "../../grammar/tree.ts";
import type { Declared, Of, Statistic } from "./declarations.ts";
import { describe, type Entity } from "./scope.ts";

type Body = Entity extends infer E ? (E extends Entity ? Omit<E, "name" | "span"> : never) : never;

/** The names of a statistic's letters as declared, those added by `missing … as` left out. */
export function letterNames(statistic: Statistic): readonly Name[] {
  return statistic.kind === "zones" ? statistic.letters : statistic.letters.map((letter) => letter.name);
}

/** Reads all names, in the order of the text; `findings` receives what is wrong with them. */
export function declareNames(
  declarations: readonly Declaration[],
  declared: Declared,
  findings: Diagnostic[],
): ReadonlyMap<string, Entity> {
  const names = new Map<string, Entity>();
  const counts = { let: 0, statistic: 0, group: 0, rule: 0, signal: 0, process: 0 };
  for (const declaration of declarations) {
    switch (declaration.kind) {
      case "let":
      case "group":
      case "rule":
      case "signal":
        declareName(names, declaration.name, plain(declaration.kind, counts[declaration.kind]++), findings);
        break;
      case "zones":
      case "letters":
        declareStatistic(names, declaration, counts.statistic++, findings);
        break;
      case "process":
        declareProcess(names, declaration, counts.process++, findings);
        break;
      default:
    }
  }
  for (const { statistic, letter } of addedLetters(declared, names)) {
    const of = declared.statistics[statistic];
    if (of === undefined) continue;
    const place = letterNames(of).length;
    declareName(names, letter, { role: "letter", statistic, letter: place, of: of.name.text }, findings);
  }
  warnOfCase(names, findings);
  return names;
}

function plain(role: "let" | "group" | "rule" | "signal", index: number): Body {
  return { role, index };
}

/** A statistic and its letters; those of a second statistic of one name are not complained of again. */
function declareStatistic(
  names: Map<string, Entity>,
  statistic: Statistic,
  index: number,
  findings: Diagnostic[],
): void {
  const isSecond = names.get(statistic.name.text)?.role === "statistic";
  declareName(names, statistic.name, { role: "statistic", index }, findings);
  for (const [letter, name] of letterNames(statistic).entries()) {
    if (isSecond && names.has(name.text)) continue;
    declareName(names, name, { role: "letter", statistic: index, letter, of: statistic.name.text }, findings);
  }
}

function declareProcess(
  names: Map<string, Entity>,
  process: Of<"process">,
  index: number,
  findings: Diagnostic[],
): void {
  declareName(names, process.name, { role: "process", index }, findings);
  for (const [parameter, { name }] of process.sweeps.entries()) {
    declareName(
      names,
      name,
      { role: "parameter", process: index, parameter, of: process.name.text },
      findings,
    );
  }
}

/** The letters that `missing STAT: as LETTER` adds: those the statistic does not have. */
function addedLetters(
  declared: Declared,
  names: ReadonlyMap<string, Entity>,
): { readonly statistic: number; readonly letter: Name }[] {
  const added: { statistic: number; letter: Name }[] = [];
  for (const { statistic, letter } of declared.missingLetters) {
    const owner = names.get(statistic.text);
    if (owner?.role !== "statistic") continue;
    const of = declared.statistics[owner.index];
    if (of === undefined || letterNames(of).some((own) => own.text === letter.text)) continue;
    if (!added.some((earlier) => earlier.statistic === owner.index))
      added.push({ statistic: owner.index, letter });
  }
  return added;
}

function declareName(names: Map<string, Entity>, name: Name, body: Body, findings: Diagnostic[]): void {
  const entity: Entity = { ...body, name: name.text, span: name.span };
  reportNotAllowed(entity, findings);
  const first = names.get(name.text);
  if (first === undefined) {
    names.set(name.text, entity);
    return;
  }
  findings.push(
    diagnose(
      "name_taken",
      name.span,
      `"${name.text}" is already ${describe(first)}; it cannot be ${describe(entity)} too`,
      {
        hint: "give one of the two another name",
        related: [{ span: first.span, message: `"${name.text}" is first declared here` }],
        data: { name: name.text, first: first.role, second: entity.role },
      },
    ),
  );
}

function reportNotAllowed(entity: Entity, findings: Diagnostic[]): void {
  if (entity.role === "signal" && entity.name === "all") {
    findings.push(
      diagnose("name_not_allowed", entity.span, 'a signal may not be called "all"', {
        hint: "`expect all on …` would no longer tell the signal from all signals",
        data: { name: entity.name },
      }),
    );
  }
  if ((entity.role === "let" || entity.role === "parameter") && entity.name === "pi") {
    findings.push(
      diagnose(
        "name_not_allowed",
        entity.span,
        '"pi" is the number 3.14159… and cannot be given another value',
        {
          hint: "choose another name",
          data: { name: entity.name },
        },
      ),
    );
  }
}

function warnOfCase(names: ReadonlyMap<string, Entity>, findings: Diagnostic[]): void {
  const byFolded = new Map<string, Entity>();
  for (const entity of names.values()) {
    const folded = entity.name.toLowerCase();
    const first = byFolded.get(folded);
    if (first === undefined) {
      byFolded.set(folded, entity);
      continue;
    }
    findings.push(
      diagnose(
        "name_case",
        entity.span,
        `"${entity.name}" (${describe(entity)}) and "${first.name}" (${describe(first)}) differ only in case`,
        {
          hint: "give one of the two another name",
          related: [{ span: first.span, message: `"${first.name}" is declared here` }],
          data: { name: entity.name, other: first.name },
        },
      ),
    );
  }
}
