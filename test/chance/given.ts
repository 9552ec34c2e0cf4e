/** What the tests of `compiler/chance` are given: exact numbers from text, alphabets of zones, and relative errors. */
import Fraction from "fraction.js";
import { exact } from "../../compiler/chance/quantity.ts";
import type { Alphabet, LetterModel, Quantity } from "../../compiler/policy.ts";
import type { Source } from "../../grammar/source.ts";

const NOWHERE = {
  start: 0,
  end: 0,
  source: { name: "test", text: "", lineStarts: [0] } as unknown as Source,
};

/** A decimal ("0.05", "1e-300") or a ratio ("1/3"), exactly. */
export function rational(text: string): Fraction {
  const [mantissa = "", exponent = "0"] = text.split("e");
  const power = Number(exponent);
  const ten = 10n ** BigInt(Math.abs(power));
  const value = new Fraction(mantissa);
  return power < 0 ? value.div(ten) : value.mul(ten);
}

export function given(text: string): Quantity {
  return exact(rational(text));
}

export type Owner = "below" | "above";

/** An alphabet of zones with these cuts; `missing` is the index of the letter that stands for missing. */
export function zones(
  cuts: readonly (readonly [string | Quantity, Owner])[],
  missing: number | null = null,
): Alphabet {
  const letters = Math.max(cuts.length + 1, (missing ?? 0) + 1);
  return {
    name: "x",
    kind: "zones",
    letters: Array.from({ length: letters }, (_, i) => ({ name: `zone${i}`, text: null, span: NOWHERE })),
    cuts: cuts.map(([at, owner]) => ({ at: typeof at === "string" ? given(at) : at, owner, span: NOWHERE })),
    missing,
    span: NOWHERE,
  };
}

export function distribution(family: string, parameters: readonly string[], missing = "0"): LetterModel {
  return { kind: "distribution", family, parameters: parameters.map(given), missing: given(missing) };
}

/** |found/due − 1|, and for a due 0 (or below 1e-300, where doubles run out of digits) the absolute error. */
export function relativeError(found: number, due: number): number {
  return Math.abs(due) < 1e-300 ? Math.abs(found - due) : Math.abs(found / due - 1);
}
