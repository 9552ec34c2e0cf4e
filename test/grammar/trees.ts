/**
 * Random syntax trees for fast-check, of every kind the grammar has, as the parser would make them (a SET in a SET only
 * where braces are, no choice in a choice) but for their places, which are all the same. Names are often words that are
 * known by their place elsewhere. And the comparison of trees without their places.
 */
import fc from "fast-check";
import { makeSource } from "../../grammar/source.ts";
import { placed, reservedWords } from "../../grammar/tokens.ts";
import type {
  ConditionTree,
  Count,
  Declaration,
  Expression,
  FileTree,
  Law,
  MassTree,
  ModelTree,
  Name,
  NumberLiteral,
  PatternTree,
  ProcessAt,
  Quoted,
  SetTree,
  TrialTree,
} from "../../grammar/tree.ts";

const source = makeSource("random.tocsin", "");
const span = { source, start: 0, end: 0 };

const word = fc.oneof(
  fc.constantFrom("high", "low", "mid", "x", "_", "A1", "normal", "min", "pi", ...Object.keys(placed)),
  fc.stringMatching(/^[A-Za-z_][A-Za-z0-9_]{0,6}$/),
);
const name: fc.Arbitrary<Name> = word
  .filter((text) => !(reservedWords as readonly string[]).includes(text))
  .map((text) => ({ text, span }));
const nameOrAny = fc.oneof(
  { weight: 4, arbitrary: name },
  { weight: 1, arbitrary: fc.constant({ text: "any", span }) },
);
const quoted: fc.Arbitrary<Quoted> = fc
  .oneof(fc.string({ unit: "grapheme", maxLength: 12 }), fc.stringMatching(/^["\\# a]{0,6}$/))
  .filter((value) => !/[\p{Cc}\p{Cs}\u202A-\u202E\u2066-\u2069\uFEFF]/u.test(value))
  .map((value) => ({ value, span }));
const digits = fc.nat(999).map(String);
const number: fc.Arbitrary<NumberLiteral> = fc
  .tuple(fc.oneof(digits, fc.constantFrom("0.05", "12.50", "1e-4", "2E6", "1.5e+3", "007")), fc.boolean())
  .map(([text, percent]) => ({ kind: "number", text, percent, span }));
const count: fc.Arbitrary<Count> = fc.oneof(
  digits.map((text) => ({ kind: "literal", text, span }) as const),
  name.map((one) => ({ kind: "named", name: one, span }) as const),
);

function optional<T, Key extends string>(key: Key, value: fc.Arbitrary<T>): fc.Arbitrary<{ [K in Key]?: T }> {
  return fc
    .option(value, { nil: undefined })
    .map((one) => (one === undefined ? {} : { [key]: one })) as never;
}

function several<T>(value: fc.Arbitrary<T>, minLength = 1): fc.Arbitrary<T[]> {
  return fc.array(value, { minLength, maxLength: minLength + 3 });
}

const { expression } = fc.letrec<{ expression: Expression }>((tie) => ({
  expression: fc.oneof(
    { depthSize: "small", withCrossShrink: true },
    number,
    name.map((one) => ({ kind: "reference", name: one, span }) as const),
    fc
      .tuple(name, several(tie("expression")))
      .map(([one, operands]) => ({ kind: "call", name: one, operands, span })),
    tie("expression").map((operand) => ({ kind: "negate", operand, span })),
    fc
      .tuple(fc.constantFrom("+", "-", "*", "/", "^"), tie("expression"), tie("expression"))
      .map(([operator, left, right]) => ({ kind: "binary", operator, left, right, span })),
  ) as fc.Arbitrary<Expression>,
}));

const { set } = fc.letrec<{ set: SetTree; meet: SetTree; member: SetTree }>((tie) => ({
  set: fc.oneof(
    { depthSize: "small", withCrossShrink: true },
    tie("meet"),
    fc
      .tuple(tie("set"), tie("meet"))
      .map(([left, right]) => ({ kind: "except", left, right, span }) as const),
  ),
  meet: fc.oneof(
    { depthSize: "small", withCrossShrink: true },
    tie("member"),
    fc
      .tuple(tie("meet"), tie("member"))
      .map(([left, right]) => ({ kind: "meet", left, right, span }) as const),
  ),
  member: fc.oneof(
    { depthSize: "small", withCrossShrink: true },
    name.map((one) => ({ kind: "named", name: one, span }) as const),
    fc.constant({ kind: "any", span } as const),
    several(tie("set")).map((members) => ({ kind: "union", members, span }) as const),
  ),
}));

const letters = set.map((one) => ({ kind: "letters", set: one, span }) as const);
const limits = fc
  .tuple(digits, fc.option(digits, { nil: null }), fc.boolean())
  .map(([least, most, plain]) => ({ least, most: plain ? least : most }));

const { pattern } = fc.letrec<{ pattern: PatternTree; sequence: PatternTree; repeat: PatternTree }>(
  (tie) => ({
    pattern: fc.oneof(
      { depthSize: "small", withCrossShrink: true },
      letters,
      tie("repeat"),
      tie("sequence"),
      several(fc.oneof(letters, tie("repeat"), tie("sequence")), 2).map((options) => ({
        kind: "choice",
        options,
        span,
      })),
    ) as fc.Arbitrary<PatternTree>,
    sequence: several(
      fc.oneof(
        { depthSize: "small", withCrossShrink: true },
        letters,
        tie("repeat"),
        several(fc.oneof(letters, tie("repeat")), 2).map(
          (options) => ({ kind: "choice", options, span }) as const,
        ),
      ),
      2,
    ).map((items) => ({ kind: "sequence", items, span })),
    repeat: fc
      .tuple(limits, fc.oneof({ depthSize: "small" }, letters, tie("pattern")))
      .map(([limit, operand]) => ({ kind: "repeat", ...limit, operand, span }) as const),
  }),
);

const { condition } = fc.letrec<{ condition: ConditionTree }>((tie) => ({
  condition: fc.oneof(
    { depthSize: "small", withCrossShrink: true },
    set.map((one) => ({ kind: "set", set: one, span })),
    fc.tuple(count, set).map(([k, one]) => ({ kind: "run", count: k, set: one, span })),
    fc
      .tuple(count, set, count, optional("failures", set))
      .map(([k, one, gap, failures]) => ({ kind: "weakRun", count: k, set: one, gap, ...failures, span })),
    fc
      .tuple(count, count, set)
      .map(([k, window, one]) => ({ kind: "scan", count: k, window, set: one, span })),
    pattern.map((one) => ({ kind: "pattern", pattern: one, span })),
    fc
      .tuple(fc.constantFrom("separate", "overlapping"), count, tie("condition"))
      .map(([kind, k, operand]) => ({ kind, count: k, operand, span })),
    fc
      .tuple(tie("condition"), tie("condition"), optional("within", count))
      .map(([left, right, within]) => ({ kind: "then", left, right, ...within, span })),
    fc
      .tuple(tie("condition"), tie("condition"), count)
      .map(([left, right, within]) => ({ kind: "unless", left, right, within, span })),
    fc
      .tuple(fc.constantFrom("and", "or"), tie("condition"), tie("condition"))
      .map(([kind, left, right]) => ({ kind, left, right, span })),
    tie("condition").map((operand) => ({ kind: "not", operand, span })),
  ) as fc.Arbitrary<ConditionTree>,
}));

const processAt: fc.Arbitrary<ProcessAt> = fc
  .tuple(name, fc.array(expression, { maxLength: 2 }))
  .map(([one, operands]) => ({ name: one, operands, span }));
const mass: fc.Arbitrary<MassTree> = several(
  fc
    .tuple(name, optional("probability", expression))
    .map(([letter, probability]) => ({ letter, ...probability })),
).map((entries) => ({ entries, span }));
const estimated = fc
  .tuple(count, count, optional("under", processAt))
  .map(([subgroups, size, under]) => ({ subgroups, size, ...under, span }));
const model: fc.Arbitrary<ModelTree> = fc.oneof(
  mass.map((one) => ({ kind: "mass", mass: one, span }) as const),
  several(fc.record({ letter: name, mass })).map((rows) => ({ kind: "markov", rows, span }) as const),
  fc
    .tuple(name, several(expression), fc.oneof(optional("ar", expression), optional("estimated", estimated)))
    .map(([one, operands, more]) => ({ kind: "distribution", name: one, operands, ...more, span }) as const),
);
const law: fc.Arbitrary<Law> = fc
  .tuple(name, model, optional("with", fc.record({ letter: name, probability: expression })))
  .map(([statistic, one, more]) => ({ statistic, model: one, ...more, span }));
const trial: fc.Arbitrary<TrialTree> = fc
  .tuple(
    optional(
      "count",
      digits.map((text) => ({ text, span })),
    ),
    fc.oneof(
      fc.option(name).map((letter) => ({ letters: [letter], tuple: false })),
      several(fc.option(name)).map((places) => ({ letters: places, tuple: true })),
    ),
    optional("raises", several(name)),
  )
  .map(([k, places, raises]) => ({ ...k, ...places, ...raises, span }));
const expectation = fc.oneof(
  fc.constantFrom({ kind: "quiet" } as const, { kind: "all" } as const),
  nameOrAny.filter((one) => one.text !== "all").map((one) => ({ kind: "signal", name: one }) as const),
);
const requirement = fc.oneof(
  fc.record({
    kind: fc.constant("bound"),
    comparison: fc.constantFrom(">=", "<=", ">", "<"),
    value: expression,
  }),
  fc.record({ kind: fc.constant("near"), value: expression, within: expression }),
);
const measure = fc
  .tuple(
    name,
    optional(
      "of",
      fc
        .tuple(
          nameOrAny,
          fc.tuple(processAt, optional("after", processAt)).map(([at, after]) => ({ at, ...after, span })),
          optional("argument", expression),
        )
        .map(([signal, process, argument]) => ({ signal, process, ...argument })),
    ),
  )
  .map(([one, of]) => ({ name: one, ...of, span }));
const quiet = fc.oneof(
  count.map((k) => ({ kind: "for", count: k }) as const),
  condition.map((one) => ({ kind: "until", condition: one }) as const),
);
const below = fc.constantFrom("<", "<=");
const zones = fc
  .tuple(name, name, several(fc.tuple(below, expression, below, name)))
  .map(([one, lowest, steps]) => ({
    kind: "zones",
    name: one,
    letters: [lowest, ...steps.map(([, , , letter]) => letter)],
    cuts: steps.map(([under, cut, above]) => ({ below: under, expression: cut, above, span })),
    span,
  }));
const sweeps = fc.array(
  fc.record({ name, from: expression, to: expression, by: expression, span: fc.constant(span) }),
  { maxLength: 2 },
);

/** A record of a kind, with parts that are always there and parts that may be absent. */
function kind(text: string, always: Record<string, fc.Arbitrary<unknown>>, ...more: fc.Arbitrary<object>[]) {
  return fc
    .tuple(fc.record(always), ...more)
    .map(([parts, ...others]) => Object.assign({ kind: text, span }, parts, ...others) as object);
}

const declaration = fc.oneof(
  kind("policy", { name }, optional("title", quoted)),
  kind("let", { name, value: expression }),
  zones,
  kind("letters", {
    name,
    letters: several(fc.tuple(name, optional("text", quoted)).map(([one, text]) => ({ name: one, ...text }))),
  }),
  kind("group", { name, set }),
  kind("assign", { pairs: several(fc.record({ success: set, failure: set, span: fc.constant(span) })) }),
  kind("rule", { name, condition }),
  kind(
    "signal",
    { name, condition },
    optional("response", fc.constantFrom("restart", "continue")),
    optional("quiet", quiet),
  ),
  kind("clearBefore", { set }),
  kind("clearAfter", { condition }),
  kind("missing", { response: fc.constantFrom("refuse", "skip", "break") }),
  kind("missingAs", { statistic: name, letter: name }),
  kind("blocks", { count }),
  kind("cadence", { amount: number.map((one) => ({ ...one, percent: false })), unit: name }),
  kind("process", { name, sweeps, laws: several(law) }),
  kind("require", { measure, requirement }),
  kind("expect", { expectation, trials: several(trial) }),
  kind("allow", { code: name, reason: quoted }),
) as fc.Arbitrary<Declaration>;

/** A file without comments. It uses a library, so that names declared nowhere are no mistakes of spelling. */
export const fileTree: fc.Arbitrary<FileTree> = fc
  .tuple(quoted, fc.array(declaration, { minLength: 1, maxLength: 8 }))
  .map(([path, declarations]) => ({
    source,
    declarations: [{ kind: "use", path, span }, ...declarations],
    comments: [],
  }));

/** A tree, or any part of one, without its places. */
export function withoutSpans(value: unknown): unknown {
  if (Array.isArray(value)) return value.map(withoutSpans);
  if (typeof value !== "object" || value === null) return value;
  const entries = Object.entries(value).filter(([key]) => key !== "span" && key !== "source");
  return Object.fromEntries(entries.map(([key, part]) => [key, withoutSpans(part)]));
}
