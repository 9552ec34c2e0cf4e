/** Declarations as pieces of canonical text, with the columns in which like declarations are aligned. */
import type { Piece } from "./layout.ts";
import { allowBreak, putCondition, putSet } from "./print-condition.ts";
import { type Pieces, putCount, putExpression, putName, putText } from "./print-expression.ts";
import { putExpectation, putProcess, putRequirement } from "./print-process.ts";
import type { Declaration } from "./tree.ts";

type Of<Kind extends Declaration["kind"]> = Extract<Declaration, { kind: Kind }>;

/** The pieces of a declaration. */
export function declarationPieces(declaration: Declaration): Piece[] {
  const out: Pieces = [{ text: wordOf(declaration), at: declaration.span.start }];
  putDeclaration(out, declaration);
  return out;
}

function wordOf({ kind }: Declaration): string {
  switch (kind) {
    case "clearBefore":
    case "clearAfter":
      return "clear";
    case "missingAs":
      return "missing";
    default:
      return kind;
  }
}

function putDeclaration(out: Pieces, declaration: Declaration): void {
  switch (declaration.kind) {
    case "policy":
      putName(out, declaration.name);
      if (declaration.title) putText(out, declaration.title);
      return;
    case "use":
      putText(out, declaration.path);
      return;
    case "let":
      putName(out, declaration.name);
      out.push({ text: "=", column: "single" });
      putExpression(out, declaration.value, { open: true, breakLevel: 1 });
      return;
    case "zones":
      putZones(out, declaration);
      return;
    case "letters":
      putLetters(out, declaration);
      return;
    case "group":
      putName(out, declaration.name);
      out.push({ text: "=", column: "single" });
      putSet(out, declaration.set, 1);
      return;
    case "assign":
      putAssignments(out, declaration);
      return;
    case "rule":
      putName(out, declaration.name);
      out.push({ text: "=", column: "single" });
      putCondition(out, declaration.condition, 1);
      return;
    case "signal":
      putSignal(out, declaration);
      return;
    case "process":
      putProcess(out, declaration);
      return;
    case "require":
      putRequirement(out, declaration);
      return;
    case "expect":
      putExpectation(out, declaration);
      return;
    default:
      putSetting(out, declaration);
  }
}

type Setting = Of<"clearBefore" | "clearAfter" | "missing" | "missingAs" | "blocks" | "cadence" | "allow">;

function putSetting(out: Pieces, declaration: Setting): void {
  switch (declaration.kind) {
    case "clearBefore":
      out.push({ text: "before" });
      putSet(out, declaration.set, 1);
      return;
    case "clearAfter":
      out.push({ text: "after" });
      putCondition(out, declaration.condition, 1);
      return;
    case "missing":
      out.push({ text: declaration.response });
      return;
    case "missingAs":
      putName(out, declaration.statistic);
      out.push({ text: ":", tight: true }, { text: "as" });
      putName(out, declaration.letter);
      return;
    case "blocks":
      out.push({ text: "of" });
      putCount(out, declaration.count);
      return;
    case "cadence":
      putExpression(out, declaration.amount);
      putName(out, declaration.unit);
      return;
    case "allow":
      putName(out, declaration.code);
      putText(out, declaration.reason);
      return;
    default:
      declaration satisfies never;
  }
}

/** A line may break after each letter. */
function putZones(out: Pieces, { name, letters, cuts }: Of<"zones">): void {
  putName(out, name);
  out.push({ text: ":", tight: true });
  for (const [i, letter] of letters.entries()) {
    putName(out, letter);
    const cut = cuts[i];
    if (!cut) continue;
    out.push({ text: cut.below, at: cut.span.start, breakLevel: 1 });
    putExpression(out, cut.expression);
    out.push({ text: cut.above, at: cut.span.end - cut.above.length });
  }
}

function putLetters(out: Pieces, { name, letters }: Of<"letters">): void {
  putName(out, name);
  out.push({ text: ":", tight: true });
  for (const [i, letter] of letters.entries()) {
    if (i > 0) out.push({ text: ",", tight: true });
    putName(out, letter.name, i > 0 ? { breakLevel: 1 } : {});
    if (!letter.text) continue;
    out.push({ text: "=" });
    putText(out, letter.text);
  }
}

/** Arrows are aligned where a declaration holds one pair. */
function putAssignments(out: Pieces, { pairs }: Of<"assign">): void {
  for (const [i, pair] of pairs.entries()) {
    if (i > 0) out.push({ text: ",", tight: true });
    const start = out.length;
    putSet(out, pair.success, 2);
    if (i > 0) allowBreak(out, start, 1);
    out.push({ text: "->", ...(pairs.length === 1 && { column: "single" as const }) });
    putSet(out, pair.failure, 2);
  }
}

/** What a signal does when it is raised stands apart from its condition, in a column of its own. */
function putSignal(out: Pieces, { name, condition, response, quiet }: Of<"signal">): void {
  putName(out, name);
  out.push({ text: "when", column: "single" });
  putCondition(out, condition, 2);
  const apart = { column: "double", breakLevel: 1 } as const;
  if (response) out.push({ text: response, ...apart });
  if (!quiet) return;
  out.push({ text: "quiet", ...(!response && apart) }, { text: quiet.kind });
  if (quiet.kind === "for") putCount(out, quiet.count);
  else putCondition(out, quiet.condition, 2);
}
