/**
 * Misspelt words that the grammar takes for something else: in `when heavy restrat` the end reads as a run of `heavy`
 * trials of a letter `restrat`. It is a mistake of spelling when no `let` gives the count and nothing in the file has the
 * other name. Libraries, and files that use one, may leave such names to others; there the check of names tells.
 */
import { type Diagnostic, diagnose } from "./diagnostic.ts";
import { quote } from "./quote.ts";
import { nearest } from "./spelling.ts";
import type { ReservedWord } from "./tokens.ts";
import type { ConditionTree, Declaration, Name } from "./tree.ts";

export type Misread = { readonly declaration: Declaration; readonly diagnostic: Diagnostic };

const wordsAfterCondition: readonly ReservedWord[] = [
  "restart",
  "continue",
  "quiet",
  "and",
  "or",
  "then",
  "unless",
  "within",
  "except",
  "gap",
];

export function findMisread(declarations: readonly Declaration[]): Misread[] {
  const kinds = new Set(declarations.map((declaration) => declaration.kind));
  if (!kinds.has("policy") || kinds.has("use")) return [];
  const declared = new Set(declarations.flatMap(declaredNames));
  return declarations.flatMap((declaration) => {
    const found: Misread[] = [];
    for (const condition of conditionsOf(declaration))
      eachRun(condition, (count, letter) => {
        const meant =
          declared.has(count.text) && !declared.has(letter.text) && misspelt(letter, count, declarations);
        if (!meant) return;
        const message = `${quote(letter.text)} cannot stand here`;
        const hint = `did you mean ${quote(meant)}?`;
        found.push({ declaration, diagnostic: diagnose("syntax", letter.span, message, { hint }) });
      });
    return found;
  });
}

function misspelt(letter: Name, count: Name, declarations: readonly Declaration[]): string | undefined {
  const isNumber = declarations.some((one) => one.kind === "let" && one.name.text === count.text);
  return isNumber ? undefined : nearest(letter.text, wordsAfterCondition);
}

function declaredNames(declaration: Declaration): string[] {
  switch (declaration.kind) {
    case "zones":
      return [declaration.name.text, ...declaration.letters.map((letter) => letter.text)];
    case "letters":
      return [declaration.name.text, ...declaration.letters.map((letter) => letter.name.text)];
    case "missingAs":
      return [declaration.letter.text];
    default:
      return "name" in declaration ? [declaration.name.text] : [];
  }
}

function conditionsOf(declaration: Declaration): ConditionTree[] {
  switch (declaration.kind) {
    case "rule":
    case "clearAfter":
      return [declaration.condition];
    case "signal":
      return declaration.quiet?.kind === "until"
        ? [declaration.condition, declaration.quiet.condition]
        : [declaration.condition];
    default:
      return [];
  }
}

/** Calls `act` for each run whose count is a name and whose SET is a lone name. */
function eachRun(condition: ConditionTree, act: (count: Name, letter: Name) => void): void {
  switch (condition.kind) {
    case "run":
      if (condition.count.kind === "named" && condition.set.kind === "named")
        act(condition.count.name, condition.set.name);
      break;
    case "separate":
    case "overlapping":
    case "not":
      eachRun(condition.operand, act);
      break;
    case "then":
    case "unless":
    case "and":
    case "or":
      eachRun(condition.left, act);
      eachRun(condition.right, act);
      break;
    default:
      break;
  }
}
