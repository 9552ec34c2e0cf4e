/** Chances of columns against the same sums in exact fractions. */
import fc from "fast-check";
import Fraction from "fraction.js";
import { describe, expect, test } from "vitest";
import { columnProbabilities } from "../../compiler/chance/column-probabilities.ts";
import { type Chances, letterProbabilities } from "../../compiler/chance/letter-probabilities.ts";
import { doubleOf, exact, fractionOfDouble } from "../../compiler/chance/quantity.ts";
import { zones } from "./given.ts";

/** An alphabet of this many letters. */
function letters(count: number) {
  return zones(Array.from({ length: count - 1 }, (_, i) => [exact(i), "below"] as const));
}

function massOf(weights: readonly number[]): Chances {
  const whole = weights.reduce((a, b) => a + b, 0);
  const probabilities = weights.map((weight) => exact(new Fraction(BigInt(weight), BigInt(whole))));
  const found = letterProbabilities(letters(weights.length), { kind: "mass", probabilities });
  if ("unbuilt" in found) throw new Error(found.unbuilt);
  return found;
}

function valueAt({ high, low }: Chances, i: number): Fraction {
  return fractionOfDouble(high[i]!).add(fractionOfDouble(low[i]!));
}

const weights = fc
  .array(fc.integer({ min: 0, max: 10 ** 6 }), { minLength: 1, maxLength: 5 })
  .map((w) => [1, ...w]);

test("every column is the sum of the products of its symbols, to 2^-97", () => {
  fc.assert(
    fc.property(fc.array(weights, { minLength: 1, maxLength: 3 }), fc.nat(), (lists, seed) => {
      const laws = lists.map(massOf);
      const symbols = lists.reduce((product, list) => product * list.length, 1);
      const columns = 1 + (seed % 7);
      const columnOf = Int32Array.from({ length: symbols }, (_, symbol) => (symbol * 31 + seed) % columns);
      const found = columnProbabilities(
        lists.map((list) => letters(list.length)),
        columnOf,
        columns,
        laws,
      );
      const due = Array.from({ length: columns }, () => new Fraction(0n));
      for (let symbol = 0; symbol < symbols; symbol++) {
        let product = new Fraction(1n);
        // The last alphabet varies fastest.
        for (let rest = symbol, i = lists.length - 1; i >= 0; i--) {
          const size = lists[i]!.length;
          product = product.mul(
            new Fraction(BigInt(lists[i]![rest % size]!), BigInt(lists[i]!.reduce((a, b) => a + b))),
          );
          rest = Math.floor(rest / size);
        }
        due[columnOf[symbol]!] = due[columnOf[symbol]!]!.add(product);
      }
      for (const [column, chance] of due.entries()) {
        const error = doubleOf(valueAt(found, column).sub(chance));
        expect(Math.abs(error)).toBeLessThanOrEqual(2 ** -97 * doubleOf(chance));
      }
    }),
    { numRuns: 200 },
  );
});

describe("sizes", () => {
  const law = massOf([1, 1]);

  test("no alphabet: one symbol, sure", () => {
    expect([...columnProbabilities([], Int32Array.of(0), 1, []).high]).toEqual([1]);
  });

  test("that disagree are a mistake of ours", () => {
    const columnOf = Int32Array.of(0, 1);
    expect(() => columnProbabilities([letters(2)], columnOf, 2, [])).toThrow(RangeError);
    expect(() => columnProbabilities([letters(3)], columnOf, 2, [law])).toThrow(RangeError);
    expect(() => columnProbabilities([letters(2)], Int32Array.of(0), 2, [law])).toThrow(RangeError);
  });

  // Measured on an idle machine: about 3 ms.
  test("65,536 symbols in a moment", () => {
    const sixteen = massOf(Array.from({ length: 16 }, (_, i) => i + 1));
    const alphabets = Array.from({ length: 4 }, () => letters(16));
    const columnOf = Int32Array.from({ length: 65536 }, (_, symbol) => symbol % 37);
    const start = performance.now();
    const found = columnProbabilities(alphabets, columnOf, 37, [sixteen, sixteen, sixteen, sixteen]);
    expect(performance.now() - start).toBeLessThan(300);
    const total = [...found.high, ...found.low].reduce(
      (sum, x) => sum.add(fractionOfDouble(x)),
      new Fraction(0n),
    );
    expect(Math.abs(doubleOf(total.sub(1n)))).toBeLessThan(1e-29);
  });
});
