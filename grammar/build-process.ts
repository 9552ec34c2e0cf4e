/** Concrete syntax → tree, for processes, requirements and expectations. */
import { buildCount, buildExpression, buildOperands } from "./build-expression.ts";
import {
  has,
  name,
  nameOf,
  nodeSpan,
  optionalPart,
  optionalToken,
  part,
  parts,
  type Syntax,
  token,
  tokenSpan,
  tokens,
} from "./syntax-node.ts";
import type {
  Declaration,
  Law,
  MassTree,
  MeasureTree,
  ModelTree,
  Name,
  ProcessAt,
  ProcessReference,
  Requirement,
  Sweep,
  TrialTree,
} from "./tree.ts";

export function buildProcess(from: Syntax): Declaration {
  return {
    kind: "process",
    name: name(from),
    sweeps: parts(from, "sweep").map(buildSweep),
    laws: parts(from, "law").map(buildLaw),
    span: nodeSpan(from),
  };
}

function buildSweep(from: Syntax): Sweep {
  const [start, end, step] = parts(from, "expression");
  return {
    name: name(from),
    from: buildExpression(start ?? part(from, "a start")),
    to: buildExpression(end ?? part(from, "an end")),
    by: buildExpression(step ?? part(from, "a step")),
    span: nodeSpan(from),
  };
}

function buildLaw(from: Syntax): Law {
  const statistic = name(from, "statistic");
  const model = buildModel(part(from, "model"));
  const span = nodeSpan(from);
  if (!has(from, "WITH")) return { statistic, model, span };
  const probability = buildExpression(part(from, "expression"));
  return { statistic, model, with: { letter: name(from, "letter"), probability }, span };
}

function buildModel(from: Syntax): ModelTree {
  const span = nodeSpan(from);
  const distribution = optionalPart(from, "distribution");
  if (distribution) return buildDistribution(distribution);
  if (!has(from, "MARKOV")) return { kind: "mass", mass: buildMass(part(from, "mass")), span };
  const rows = parts(from, "markovRow").map((row) => ({
    letter: name(row),
    mass: buildMass(part(row, "mass")),
  }));
  return { kind: "markov", rows, span };
}

function buildMass(from: Syntax): MassTree {
  const entries = parts(from, "massEntry").map((entry) => {
    const probability = optionalPart(entry, "expression");
    return { letter: name(entry), ...(probability && { probability: buildExpression(probability) }) };
  });
  return { entries, span: nodeSpan(from) };
}

function buildDistribution(from: Syntax): ModelTree {
  const ar = optionalPart(from, "expression");
  const estimated = optionalPart(from, "estimated");
  return {
    kind: "distribution",
    name: name(from),
    operands: buildOperands(part(from, "operands")),
    ...(ar && { ar: buildExpression(ar) }),
    ...(estimated && { estimated: buildEstimated(estimated) }),
    span: nodeSpan(from),
  };
}

function buildEstimated(from: Syntax) {
  const [subgroups, size] = parts(from, "count");
  const under = optionalPart(from, "processAt");
  return {
    subgroups: buildCount(subgroups ?? part(from, "subgroups")),
    size: buildCount(size ?? part(from, "a size")),
    ...(under && { under: buildProcessAt(under) }),
    span: nodeSpan(from),
  };
}

function buildProcessAt(from: Syntax): ProcessAt {
  const operands = optionalPart(from, "operands");
  return { name: name(from), operands: operands ? buildOperands(operands) : [], span: nodeSpan(from) };
}

export function buildRequire(from: Syntax): Declaration {
  const measure = buildMeasure(part(from, "measure"));
  return { kind: "require", measure, requirement: buildRequirement(from), span: nodeSpan(from) };
}

function buildRequirement(from: Syntax): Requirement {
  const [value, within] = parts(from, "expression").map(buildExpression);
  const comparison = optionalPart(from, "comparison");
  if (!value) return part(from, "a value") as never;
  if (comparison) return { kind: "bound", comparison: comparisonOf(comparison), value };
  return { kind: "near", value, within: within ?? buildExpression(part(from, "a tolerance")) };
}

function comparisonOf(from: Syntax): ">=" | "<=" | ">" | "<" {
  switch (token(from, "sign").tokenType.name) {
    case "AtLeast":
      return ">=";
    case "AtMost":
      return "<=";
    case "More":
      return ">";
    default:
      return "<";
  }
}

function buildMeasure(from: Syntax): MeasureTree {
  const signal = optionalPart(from, "signalReference");
  if (!signal) return { name: name(from), span: nodeSpan(from) };
  const argument = optionalPart(from, "expression");
  const of = {
    signal: name(signal, "signal"),
    process: buildProcessReference(part(from, "processReference")),
    ...(argument && { argument: buildExpression(argument) }),
  };
  return { name: name(from), of, span: nodeSpan(from) };
}

function buildProcessReference(from: Syntax): ProcessReference {
  const [at, after] = parts(from, "processAt").map(buildProcessAt);
  if (!at) return part(from, "processAt") as never;
  return { at, ...(after && { after }), span: nodeSpan(from) };
}

export function buildExpect(from: Syntax): Declaration {
  const signal = optionalToken(from, "signal");
  const expectation =
    signal === undefined
      ? ({ kind: "quiet" } as const)
      : signal.image === "all"
        ? ({ kind: "all" } as const)
        : ({ kind: "signal", name: nameOf(from.source, signal) } as const);
  return { kind: "expect", expectation, trials: parts(from, "trial").map(buildTrial), span: nodeSpan(from) };
}

function buildTrial(from: Syntax): TrialTree {
  const digits = optionalToken(from, "Whole");
  const tuple = optionalPart(from, "tuple");
  const raises = optionalPart(from, "raises");
  return {
    ...(digits && { count: { text: digits.image, span: tokenSpan(from.source, digits) } }),
    letters: parts(tuple ?? from, "place").map(buildPlace),
    tuple: tuple !== undefined,
    ...(raises && { raises: tokens(raises, "Name").map((at) => nameOf(from.source, at)) }),
    span: nodeSpan(from),
  };
}

function buildPlace(from: Syntax): Name | null {
  return has(from, "Name") ? name(from) : null;
}
