/** Concrete syntax → tree: one declaration that was parsed without an error. */
import { buildCondition, buildSet } from "./build-condition.ts";
import { buildCount, buildExpression, numberLiteral } from "./build-expression.ts";
import { buildExpect, buildProcess, buildRequire } from "./build-process.ts";
import { InternalError } from "./internal-error.ts";
import {
  has,
  name,
  nameOf,
  nodeSpan,
  optionalPart,
  optionalToken,
  part,
  parts,
  quoted,
  type Syntax,
  token,
  tokenSpan,
  tokens,
} from "./syntax-node.ts";
import type { CutTree, Declaration } from "./tree.ts";

/** The declaration of a `declaration` node. */
export function buildDeclaration(from: Syntax): Declaration {
  const [kind] = Object.keys(from.node.children);
  if (kind === undefined) throw new InternalError("a declaration without content");
  return buildKind(kind, part(from, kind));
}

function buildKind(kind: string, at: Syntax): Declaration {
  const span = nodeSpan(at);
  switch (kind) {
    case "policy":
      return { kind, name: name(at), ...(has(at, "Text") && { title: quoted(at) }), span };
    case "use":
      return { kind, path: quoted(at), span };
    case "let":
      return { kind, name: name(at), value: buildExpression(part(at, "expression")), span };
    case "zones":
      return buildZones(at);
    case "letters":
      return buildLetters(at);
    case "group":
      return { kind, name: name(at), set: buildSet(part(at, "set")), span };
    case "assign":
      return { kind, pairs: parts(at, "assignPair").map(buildPair), span };
    case "rule":
      return { kind, name: name(at), condition: buildCondition(part(at, "condition")), span };
    case "signal":
      return buildSignal(at);
    case "process":
      return buildProcess(at);
    case "require":
      return buildRequire(at);
    case "expect":
      return buildExpect(at);
    default:
      return buildSetting(kind, at);
  }
}

function buildSetting(kind: string, at: Syntax): Declaration {
  const span = nodeSpan(at);
  switch (kind) {
    case "clear":
      if (has(at, "BEFORE")) return { kind: "clearBefore", set: buildSet(part(at, "set")), span };
      return { kind: "clearAfter", condition: buildCondition(part(at, "condition")), span };
    case "missing":
      return buildMissing(at);
    case "blocks":
      return { kind, count: buildCount(part(at, "count")), span };
    case "cadence": {
      const amount = numberLiteral(at, tokenSpan(at.source, token(at, "Numeral")));
      return { kind, amount, unit: name(at), span };
    }
    case "allow":
      return { kind, code: name(at), reason: quoted(at), span };
    default:
      throw new InternalError(`a declaration of the unknown kind ${kind}`);
  }
}

function buildZones(at: Syntax): Declaration {
  return {
    kind: "zones",
    name: name(at),
    letters: tokens(at, "letter").map((letter) => nameOf(at.source, letter)),
    cuts: parts(at, "cut").map(buildCut),
    span: nodeSpan(at),
  };
}

function buildCut(from: Syntax): CutTree {
  const [below, above] = parts(from, "below").map((sign) =>
    token(sign, "sign").tokenType.name === "Less" ? ("<" as const) : ("<=" as const),
  );
  const expression = buildExpression(part(from, "expression"));
  if (!below || !above) return part(from, "two signs") as never;
  return { below, expression, above, span: nodeSpan(from) };
}

function buildLetters(at: Syntax): Declaration {
  const letters = parts(at, "letterEntry").map((entry) => ({
    name: name(entry),
    ...(has(entry, "Text") && { text: quoted(entry) }),
  }));
  return { kind: "letters", name: name(at), letters, span: nodeSpan(at) };
}

function buildPair(from: Syntax) {
  const [success, failure] = parts(from, "set").map(buildSet);
  if (!success || !failure) return part(from, "two sets") as never;
  return { success, failure, span: nodeSpan(from) };
}

function buildSignal(at: Syntax): Declaration {
  const response = optionalToken(at, "response")?.image;
  const quiet = optionalPart(at, "quiet");
  return {
    kind: "signal",
    name: name(at),
    condition: buildCondition(part(at, "condition")),
    ...((response === "restart" || response === "continue") && { response }),
    ...(quiet && { quiet: buildQuiet(quiet) }),
    span: nodeSpan(at),
  };
}

function buildQuiet(from: Syntax): NonNullable<(Declaration & { kind: "signal" })["quiet"]> {
  if (has(from, "FOR")) return { kind: "for", count: buildCount(part(from, "count")) };
  return { kind: "until", condition: buildCondition(part(from, "condition")) };
}

function buildMissing(at: Syntax): Declaration {
  const span = nodeSpan(at);
  if (has(at, "statistic"))
    return { kind: "missingAs", statistic: name(at, "statistic"), letter: name(at, "letter"), span };
  const response = token(at, "response").image;
  if (response === "refuse" || response === "skip" || response === "break")
    return { kind: "missing", response, span };
  throw new InternalError(`a response to missing values called ${response}`);
}
