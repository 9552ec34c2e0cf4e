/**
 * What a policy says once: the response to a missing trial, the batches, the cadence.
 * In: their declarations. Out: their checked forms, null where there is none or a fault was reported.
 */
import type { Name } from "../../grammar/tree.ts";
import { doubleOf } from "../chance/quantity.ts";
import type { Cadence, Policy } from "../policy.ts";
import { readCount } from "./counts.ts";
import type { Declared, Of } from "./declarations.ts";
import { readNumber, sizeText } from "./literals.ts";
import type { Scope } from "./scope.ts";
import { shorten, type Values } from "./values.ts";

/** The only declaration of its kind; reports any more. */
export function only<D extends { readonly span: Of<"blocks">["span"] }>(
  declarations: readonly D[],
  what: string,
  scope: Scope,
): D | null {
  const [first, ...others] = declarations;
  for (const other of others) {
    scope.report("declared_twice", other.span, `${what} is declared a second time; once is enough`, {
      hint: "keep one of the two",
      related: [{ span: first!.span, message: "it is first declared here" }],
    });
  }
  return first ?? null;
}

/** The size of a batch, and a warning where missing trials would shift the batches. */
export function checkBlocks(
  declared: Declared,
  missing: Policy["missing"],
  allHaveLetters: boolean,
  values: Values,
): number | null {
  const blocks = only(declared.blocks, "`blocks`", values.scope);
  if (blocks === null) return null;
  const size = readCount(blocks.count, 1, "the size of a batch", values);
  if (missing !== "break" && !allHaveLetters && declared.clearsBefore.length === 0) {
    const how = missing === "skip" ? "skipped" : "refused";
    const message = `a missing trial is ${how} and does not count, so every batch after it begins a trial late`;
    const response = declared.responses[0];
    values.scope.report("missing_alters_blocks", blocks.span, message, {
      hint: "mark where a batch begins with `clear before SET`, or let a missing trial count with `missing break`",
      related:
        response === undefined
          ? []
          : [{ span: response.span, message: `\`missing ${missing}\` is said here` }],
      data: { missing },
    });
  }
  return size;
}

const secondsByUnit: ReadonlyMap<string, number> = new Map([
  ["s", 1],
  ["min", 60],
  ["h", 3600],
  ["day", 86_400],
  ["week", 604_800],
]);

/** The time from one trial to the next. */
export function checkCadence(declared: Declared, scope: Scope): Cadence | null {
  const cadence = only(declared.cadences, "`cadence`", scope);
  if (cadence === null) return null;
  const { amount, unit } = cadence;
  const seconds = secondsByUnit.get(unit.text);
  if (seconds === undefined) return unknownUnit(unit, scope);
  const number = readNumber(amount.text, amount.percent);
  if (typeof number === "string") {
    scope.report("number_too_large", amount.span, `${shorten(amount)} ${sizeText(number)}`);
    return null;
  }
  const total = doubleOf(number.value) * seconds;
  if (total > 0 && Number.isFinite(total)) return { seconds: total, text: `${amount.text} ${unit.text}` };
  scope.report(
    "cadence_range",
    amount.span,
    `the time from one trial to the next is more than 0, not ${shorten(amount).slice(1, -1)}`,
  );
  return null;
}

function unknownUnit(unit: Name, scope: Scope): null {
  const plural = [...secondsByUnit.keys()].find(
    (known) => unit.text.replace(/s$/, "").startsWith(known) && known !== "s",
  );
  const hint =
    plural === undefined ? `the units are ${[...secondsByUnit.keys()].join(", ")}` : `write \`${plural}\``;
  scope.report("unknown_unit", unit.span, `"${unit.text}" is no unit of time`, {
    hint,
    data: { unit: unit.text },
  });
  return null;
}
