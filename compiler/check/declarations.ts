/**
 * The declarations of a policy and its libraries, sorted by kind and kept in textual order within a kind.
 * In: the declarations in the order in which the text reads once every `use` is replaced by its library.
 * Out: one list for each kind; places in these lists are the indices that names resolve to.
 */
import type { Declaration } from "../../grammar/tree.ts";

export type Of<K extends Declaration["kind"]> = Extract<Declaration, { kind: K }>;

/** A declaration that makes an alphabet. */
export type Statistic = Of<"zones" | "letters">;

export type Declared = {
  readonly policies: readonly Of<"policy">[];
  readonly lets: readonly Of<"let">[];
  readonly statistics: readonly Statistic[];
  readonly groups: readonly Of<"group">[];
  readonly assigns: readonly Of<"assign">[];
  readonly rules: readonly Of<"rule">[];
  readonly signals: readonly Of<"signal">[];
  readonly clearsBefore: readonly Of<"clearBefore">[];
  readonly clearsAfter: readonly Of<"clearAfter">[];
  readonly responses: readonly Of<"missing">[];
  readonly missingLetters: readonly Of<"missingAs">[];
  readonly blocks: readonly Of<"blocks">[];
  readonly cadences: readonly Of<"cadence">[];
  readonly processes: readonly Of<"process">[];
  readonly requires: readonly Of<"require">[];
  readonly expects: readonly Of<"expect">[];
  readonly allows: readonly Of<"allow">[];
};

function ofKind<K extends Declaration["kind"]>(declarations: readonly Declaration[], kind: K): Of<K>[] {
  return declarations.filter((declaration): declaration is Of<K> => declaration.kind === kind);
}

/** Sorts declarations by kind. */
export function sortDeclarations(all: readonly Declaration[]): Declared {
  return {
    policies: ofKind(all, "policy"),
    lets: ofKind(all, "let"),
    statistics: all.filter((d): d is Statistic => d.kind === "zones" || d.kind === "letters"),
    groups: ofKind(all, "group"),
    assigns: ofKind(all, "assign"),
    rules: ofKind(all, "rule"),
    signals: ofKind(all, "signal"),
    clearsBefore: ofKind(all, "clearBefore"),
    clearsAfter: ofKind(all, "clearAfter"),
    responses: ofKind(all, "missing"),
    missingLetters: ofKind(all, "missingAs"),
    blocks: ofKind(all, "blocks"),
    cadences: ofKind(all, "cadence"),
    processes: ofKind(all, "process"),
    requires: ofKind(all, "require"),
    expects: ofKind(all, "expect"),
    allows: ofKind(all, "allow"),
  };
}
