/**
 * What a name stands for, and what is said when it cannot be found or cannot stand where it was written.
 * In: the names declared (`names.ts`). Out: the entity a mention means, or null once the reason was reported, so that
 * whoever gets null stays silent.
 *
 * In a library an unknown name is no error: it is left to the user of the library, see `library.ts`.
 */
import { type Code, type Diagnostic, diagnose } from "../../grammar/diagnostic.ts";
import type { Span } from "../../grammar/span.ts";
import { nearest } from "../../grammar/spelling.ts";
import type { Name } from "../../grammar/tree.ts";

export type Entity = { readonly name: string; readonly span: Span } & (
  | {
      readonly role: "let" | "statistic" | "group" | "rule" | "signal" | "process";
      /** Place among the declarations of its kind. */
      readonly index: number;
    }
  | { readonly role: "letter"; readonly statistic: number; readonly letter: number; readonly of: string }
  | { readonly role: "parameter"; readonly process: number; readonly parameter: number; readonly of: string }
);

export type Role = Entity["role"];
export type EntityOf<R extends Role> = Entity & { readonly role: R };

/** Unknown words that get a suggestion. */
const MOST_SUGGESTIONS = 100;
/** A policy with more names than this does not list them. */
const MOST_LISTED = 40;

export type More = Pick<Diagnostic, "hint" | "related" | "data">;

export type Scope = {
  readonly names: ReadonlyMap<string, Entity>;
  /** Adds to what the check has to say. */
  readonly report: (code: Code, span: Span, message: string, more?: More) => void;
  /** A file without `policy`: names it does not declare are left to its user. */
  readonly isLibrary: boolean;
  /** Suggestions made so far by unknown word, so that a text full of unknown names costs little. */
  readonly suggestions: Map<string, string | undefined>;
};

/** A scope that appends to `findings`. */
export function makeScope(
  names: ReadonlyMap<string, Entity>,
  findings: Diagnostic[],
  isLibrary: boolean,
): Scope {
  return {
    names,
    report: (code, span, message, more) => findings.push(diagnose(code, span, message, more)),
    isLibrary,
    suggestions: new Map(),
  };
}

/** What an entity is, in words: `a letter of "fill"`. */
export function describe(entity: Entity): string {
  switch (entity.role) {
    case "let":
      return "a number, declared by `let`";
    case "statistic":
      return "a statistic";
    case "letter":
      return `a letter of "${entity.of}"`;
    case "group":
      return "a group";
    case "rule":
      return "a rule";
    case "signal":
      return "a signal";
    case "process":
      return "a process";
    case "parameter":
      return `a parameter of process "${entity.of}"`;
  }
}

/**
 * The entity a mention means when it has one of the roles. `place` ends the sentence "“x” is a rule; …" and says what may
 * stand here.
 */
export function resolve<R extends Role>(
  scope: Scope,
  name: Name,
  roles: readonly R[],
  place: string,
): EntityOf<R> | null {
  const entity = scope.names.get(name.text);
  if (entity === undefined) {
    reportUnknown(scope, name, roles, place);
    return null;
  }
  if (hasRole(entity, roles)) return entity;
  scope.report("wrong_role", name.span, `"${name.text}" is ${describe(entity)}; ${place}`, {
    ...roleHint(entity, roles, suggestion(scope, name.text, roles)),
    related: [{ span: entity.span, message: `"${name.text}" is declared here` }],
    data: { name: name.text, role: entity.role },
  });
  return null;
}

/** What to write instead of a name of another kind, unless a near one is likelier. */
function roleHint(entity: Entity, roles: readonly Role[], near: { hint?: string }): { hint?: string } {
  const { name, role } = entity;
  if (near.hint !== undefined) return near;
  if (role === "rule" && roles.includes("letter")) {
    return { hint: `a rule stands by itself in a condition, joined by \`or\` and \`and\`: \`${name} or …\`` };
  }
  if (role === "let" && roles.includes("letter"))
    return { hint: `a number stands before what it counts: \`${name} SET\`` };
  if (role === "signal" && roles.includes("letter")) {
    return {
      hint: `signals do not listen to one another; give the condition of "${name}" a name with \`rule\` and mention that`,
    };
  }
  if (role === "statistic" && roles.includes("letter"))
    return { hint: `name one of the letters of "${name}"` };
  return {};
}

function hasRole<R extends Role>(entity: Entity, roles: readonly R[]): entity is EntityOf<R> {
  return (roles as readonly Role[]).includes(entity.role);
}

function reportUnknown(scope: Scope, name: Name, roles: readonly Role[], place: string): void {
  if (scope.isLibrary) return;
  const { hint } = suggestion(scope, name.text, roles);
  scope.report("unknown_name", name.span, `nothing is called "${name.text}"; ${place}`, {
    hint: hint ?? declarationHint(scope, name.text, roles),
    data: { name: name.text },
  });
}

/** A hint when some name of a fitting role is spelt almost alike. */
function suggestion(scope: Scope, word: string, roles: readonly Role[]): { hint?: string } {
  const key = `${roles.join(" ")} ${word}`;
  if (!scope.suggestions.has(key) && scope.suggestions.size < MOST_SUGGESTIONS) {
    scope.suggestions.set(key, nearest(word, namesWith(scope, roles)));
  }
  const near = scope.suggestions.get(key);
  return near === undefined ? {} : { hint: `did you mean \`${near}\`?` };
}

function namesWith(scope: Scope, roles: readonly Role[]): string[] {
  return [...scope.names.values()]
    .filter((entity) => roles.includes(entity.role))
    .map((entity) => entity.name);
}

/** How the missing name would be declared, or which names there are. */
function declarationHint(scope: Scope, word: string, roles: readonly Role[]): string {
  if (scope.names.size > 0 && scope.names.size <= MOST_LISTED) {
    const known = namesWith(scope, roles);
    if (known.length > 0) return `known here: ${known.map((name) => `\`${name}\``).join(", ")}`;
  }
  return (roles as readonly string[]).includes("let")
    ? `declare it: \`let ${word} = …\``
    : "declare it, or `use` the library that does";
}
