/**
 * Chances of zones: against `zones.json` (mpmath at 60 digits or exact sums, see `make-fixtures.py`), against identities
 * between families, closed forms, and exact rational sums worked out here.
 */
import Fraction from "fraction.js";
import { describe, expect, test } from "vitest";
import { FAMILIES } from "../../compiler/chance/families.ts";
import { type Chances, letterProbabilities } from "../../compiler/chance/letter-probabilities.ts";
import { doubleOf, exact, fractionOfDouble } from "../../compiler/chance/quantity.ts";
import type { Alphabet, LetterModel } from "../../compiler/policy.ts";
import { distribution, given, type Owner, rational, relativeError, zones } from "./given.ts";
import cases from "./zones.json" with { type: "json" };

type Cuts = readonly (readonly [string, Owner])[];

function chancesOf(alphabet: Alphabet, model: LetterModel): Chances {
  const found = letterProbabilities(alphabet, model);
  if ("unbuilt" in found) throw new Error(found.unbuilt);
  return found;
}

/** By zone, as doubles; every cut owned by the lower letter. */
function highs(family: string, parameters: readonly string[], cuts: readonly string[]): number[] {
  const owned: Cuts = cuts.map((cut) => [cut, "below"]);
  return [...chancesOf(zones(owned), distribution(family, parameters)).high];
}

/** The exact sum of what the doubles say. */
function total({ high, low }: Chances): Fraction {
  return [...high, ...low].reduce((sum, x) => sum.add(fractionOfDouble(x)), new Fraction(0n));
}

/** What a family may be off by, relative to each letter; half the families meet 5e-16. */
const ACCURACY: Readonly<Record<string, number>> = { gamma: 2e-15, chi_square: 3e-15 };

describe("against 25 digits", () => {
  test.each(cases.map((row) => [row.family, row.parameters.join(", "), row] as const))(
    "%s(%s)",
    (family, _, row) => {
      const found = chancesOf(zones(row.cuts as unknown as Cuts), distribution(family, row.parameters));
      expect(found.high).toHaveLength(row.chances.length);
      for (const [i, due] of row.chances.entries()) {
        const error = relativeError(found.high[i]!, Number(due));
        expect(error, `zone ${i}, ${due}`).toBeLessThan(ACCURACY[family] ?? 1e-15);
      }
      expect(Math.abs(doubleOf(total(found).sub(1n)))).toBeLessThan(1e-15);
    },
  );
});

describe("identities", () => {
  const cuts = ["0.001", "0.4", "1", "2.5", "2.5001", "9", "40", "900"];

  /** Both find the same chances, to 2e-15 of each. */
  function expectSame(a: number[], b: number[]) {
    expect(a).toHaveLength(b.length);
    for (const [i, x] of a.entries()) expect(relativeError(x, b[i]!), `zone ${i}`).toBeLessThan(2e-15);
  }

  test("exponential(2) is chi_square(2), gamma(1, 2) and weibull(1, 2)", () => {
    const due = highs("exponential", ["2"], cuts);
    expectSame(highs("chi_square", ["2"].concat("0"), cuts), due);
    expectSame(highs("gamma", ["1", "2"], cuts), due);
    expectSame(highs("weibull", ["1", "2"], cuts), due);
  });

  test("chi_square(1) is the square of a standard normal", () => {
    const squares = ["0.0001", "1", "4", "16", "64", "900"];
    const roots = ["0.01", "1", "2", "4", "8", "30"];
    const normal = highs("normal", ["0", "1"], ["0", ...roots]);
    expectSame(
      highs("chi_square", ["1", "0"], squares),
      normal.slice(1).map((chance) => 2 * chance),
    );
  });

  test("chi_square(1, λ) is the square of a normal of mean √λ", () => {
    const lower = highs("normal", ["3", "1"], ["-8", "-2", "-1", "1", "2", "8"]);
    const [below64, below4, below1] = [
      lower[1]! + lower[2]! + lower[3]! + lower[4]! + lower[5]!,
      lower[2]! + lower[3]! + lower[4]!,
      lower[3]!,
    ];
    const found = highs("chi_square", ["1", "9"], ["1", "4", "64"]);
    expectSame(found, [below1, below4 - below1, below64 - below4, lower[0]! + lower[6]!]);
  });

  // Student with 1 degree of freedom: P(T > t) = atan(1/t)/π; with 2: (1 − t/√(2 + t²))/2 = 1/(√(2+t²)(√(2+t²) + t)).
  test("student with 1 and 2 degrees of freedom in closed form", () => {
    for (const t of [0.001, 0.5, 1, 3, 100, 1e6, 1e12]) {
      const one = highs("student", ["1", "0", "1"], [String(t)])[1]!;
      expect(relativeError(one, Math.atan(1 / t) / Math.PI)).toBeLessThan(1e-15);
      const root = Math.sqrt(2 + t * t);
      const two = highs("student", ["2", "0", "1"], [String(t)])[1]!;
      expect(relativeError(two, 1 / (root * (root + t)))).toBeLessThan(1e-15);
    }
  });

  test("location and scale move the cuts, exactly", () => {
    const standard = highs("normal", ["0", "1"], ["-3", "-1", "0", "2", "8"]);
    expect(highs("normal", ["331.2", "0.7"], ["329.1", "330.5", "331.2", "332.6", "336.8"])).toEqual(
      standard,
    );
    const student = highs("student", ["4.5", "0", "1"], ["-3", "8"]);
    expect(highs("student", ["4.5", "0.1", "0.01"], ["0.07", "0.18"])).toEqual(student);
  });

  test("lognormal is normal in the logarithm", () => {
    expectSame(highs("lognormal", ["0", "1"], ["1"]), [0.5, 0.5]);
  });

  test("a zone that ends where the support does has chance 0", () => {
    for (const [family, parameters] of [
      ["gamma", ["2", "1"]],
      ["weibull", ["2", "1"]],
      ["exponential", ["1"]],
      ["lognormal", ["0", "1"]],
      ["chi_square", ["3", "2"]],
    ] as const) {
      expect(highs(family, parameters, ["-5", "-1", "0"]).slice(0, 3), family).toEqual([0, 0, 0]);
    }
    expect(highs("uniform", ["2", "4"], ["1", "2", "3", "4", "9"])).toEqual([0, 0, 0.5, 0.5, 0, 0]);
  });

  test("cuts at the ends of the doubles give 0 and 1, no NaN", () => {
    for (const { name, parameters, law } of FAMILIES.values()) {
      if (law === null) continue;
      const some: string[] = parameters.map((_, i) => (i === 1 ? "0.5" : "0.75"));
      if (name === "uniform" || name === "binomial") some[0] = name === "uniform" ? "0" : "7";
      const [lowest, low, middle, high, highest] = highs(name, some, ["-1e300", "-1e35", "1e35", "1e300"]);
      expect(middle, name).toBe(1);
      // Student's tail at 1e35 with 0.75 degrees of freedom is not nothing.
      expect(Math.max(lowest!, low!, high!, highest!), name).toBeLessThan(
        name === "student" ? 1e-25 : 1e-300,
      );
    }
  });
});

describe("numbers no double can hold", () => {
  test("a scale of 1e-400 and cuts 1e-390 away are decided, not NaN", () => {
    for (const family of ["normal", "laplace", "logistic"]) {
      const found = highs(family, ["0", "1e-400"], ["-2e-390", "-1e-390", "0", "1e-390", "2e-390"]);
      expect(found, family).toEqual([0, 0, 0.5, 0.5, 0, 0]);
    }
    expect(highs("exponential", ["1e-400"], ["1e-401", "1e-390", "1e-380"])[2]).toBe(0);
    expect(highs("gamma", ["2", "1e400"], ["1e399", "1e401"])[1]).toBeCloseTo(0.994821760612168, 14);
  });
});

describe("counts", () => {
  /** C(n, k) p^k (1−p)^(n−k), exactly. */
  function binomialMass(n: number, k: number, p: Fraction): Fraction {
    let coefficient = 1n;
    for (let i = 1; i <= k; i++) coefficient = (coefficient * BigInt(n - k + i)) / BigInt(i);
    const q = p.neg().add(1n);
    return new Fraction(coefficient * p.n ** BigInt(k) * q.n ** BigInt(n - k), p.d ** BigInt(n));
  }

  test("binomial zones are the exact rational sums, for every cut of 30 trials", () => {
    for (const text of ["0.02", "1/3", "0.97"]) {
      const cuts = Array.from({ length: 30 }, (_, k) => String(k));
      const found = highs("binomial", ["30", text], cuts);
      for (const [k, chance] of found.entries()) {
        const due = doubleOf(binomialMass(30, k, rational(text)));
        expect(relativeError(chance, due), `p ${text}, k ${k}`).toBeLessThan(1e-15);
      }
    }
  });

  test("geometric zones are exact powers", () => {
    const q = rational("0.9");
    const found = highs("geometric", ["0.1"], ["0", "4", "5", "99"]);
    const tail = (k: number) => new Fraction(q.n ** BigInt(k), q.d ** BigInt(k));
    const due = [
      tail(0).sub(tail(1)),
      tail(1).sub(tail(5)),
      tail(5).sub(tail(6)),
      tail(6).sub(tail(100)),
      tail(100),
    ];
    for (const [i, chance] of found.entries()) {
      expect(relativeError(chance, doubleOf(due[i]!))).toBeLessThan(1e-15);
    }
  });

  test("geometric is the negative binomial for one success, also at a chance of one in a billion", () => {
    const cuts = ["0", "3", "1000", "1000000", "1000000000", "20000000000"];
    for (const p of ["0.3", "0.01", "1e-9"]) {
      const [a, b] = [highs("geometric", [p], cuts), highs("negative_binomial", ["1", p], cuts)];
      for (const [i, x] of a.entries())
        expect(relativeError(x, b[i]!), `p ${p}, zone ${i}`).toBeLessThan(3e-15);
    }
  });

  test("at most k failures before the r-th success: at least r successes in k + r trials", () => {
    for (const k of [0, 3, 20, 60]) {
      const [atMost, more] = highs("negative_binomial", ["4", "0.2"], [String(k)]);
      const [fewer, enough] = highs("binomial", [String(k + 4), "0.2"], ["3"]);
      expect(relativeError(atMost!, enough!)).toBeLessThan(2e-15);
      expect(relativeError(more!, fewer!)).toBeLessThan(2e-15);
    }
  });

  test("the owner of a cut on an integer has that integer; between integers there is none to own", () => {
    const masses = highs("poisson", ["4"], ["0", "1", "2", "3"]);
    const at = (cuts: Cuts) => [...chancesOf(zones(cuts), distribution("poisson", ["4"])).high];
    expect(at([["2", "above"]])[0]).toBeCloseTo(masses[0]! + masses[1]!, 15);
    expect(at([["2", "below"]])[0]).toBeCloseTo(masses[0]! + masses[1]! + masses[2]!, 15);
    expect(at([["2.5", "above"]])).toEqual(at([["2.5", "below"]]));
    expect(at([["-0.5", "above"]])[0]).toBe(0);
    expect(at([["0", "above"]])[0]).toBe(0);
  });

  test("two equal cuts leave their letter the mass of that count, or nothing", () => {
    const between = (cuts: Cuts, family: string, parameters: string[]) =>
      chancesOf(zones(cuts), distribution(family, parameters)).high[1]!;
    const twice = (at: string): Cuts => [
      [at, "above"],
      [at, "below"],
    ];
    expect(relativeError(between(twice("0"), "poisson", ["4"]), Math.exp(-4))).toBeLessThan(1e-15);
    expect(between(twice("0.5"), "poisson", ["4"])).toBe(0);
    expect(between(twice("3"), "binomial", ["4", "0.5"])).toBeCloseTo(0.25, 16);
    expect(between(twice("0"), "normal", ["0", "1"])).toBe(0);
  });

  test("certain counts", () => {
    expect(highs("binomial", ["5", "0"], ["0", "4"])).toEqual([1, 0, 0]);
    expect(highs("binomial", ["5", "1"], ["0", "4"])).toEqual([0, 0, 1]);
    expect(highs("geometric", ["1"], ["0", "4"])).toEqual([1, 0, 0]);
    expect(highs("negative_binomial", ["2.5", "1"], ["0", "4"])).toEqual([1, 0, 0]);
  });

  // exp(−λ) λ^k/k! summed from k upward in plain doubles, all positive: good to 1e-13 here, by another road.
  test("a wide zone far out in the tail adds up its masses", () => {
    const [lambda, from, to] = [1000, 1500, 1600];
    let term = Math.exp(-lambda / 2);
    for (let k = 1; k <= from; k++) term *= lambda / k;
    term *= Math.exp(-lambda / 2);
    let sum = 0;
    for (let k = from; k <= to; k++) {
      sum += term;
      term *= lambda / (k + 1);
    }
    const found = highs("poisson", ["1000"], [String(from - 1), String(to)])[1]!;
    expect(relativeError(found, sum)).toBeLessThan(1e-12);
  });
});

describe("masses and missing values", () => {
  const three = zones([
    ["-1", "below"],
    ["1", "below"],
  ]);

  test("a mass keeps 32 digits, and adds up to 1", () => {
    const probabilities = ["1/3", "1/7", "11/21"].map(given);
    const found = chancesOf(three, { kind: "mass", probabilities });
    expect(Math.abs(doubleOf(total(found).sub(1n)))).toBeLessThan(1e-31);
    const [third] = [fractionOfDouble(found.high[0]!).add(fractionOfDouble(found.low[0]!))];
    expect(Math.abs(doubleOf(third.sub(rational("1/3"))))).toBeLessThan(1e-32);
  });

  test("a letter of its own takes the chance of a missing value, and thins the others", () => {
    const apart = zones(
      [
        ["-1", "below"],
        ["1", "below"],
      ],
      3,
    );
    const plain = chancesOf(three, distribution("normal", ["0", "1"]));
    const found = chancesOf(apart, distribution("normal", ["0", "1"], "0.1"));
    expect(found.high).toHaveLength(4);
    expect(found.high[3]).toBe(0.1);
    for (let i = 0; i < 3; i++)
      expect(relativeError(found.high[i]!, 0.9 * plain.high[i]!)).toBeLessThan(3e-16);
    expect(Math.abs(doubleOf(total(found).sub(1n)))).toBeLessThan(1e-31);
  });

  test("a zone that also stands for missing has both chances", () => {
    const shared = zones(
      [
        ["-1", "below"],
        ["1", "below"],
      ],
      1,
    );
    const found = chancesOf(shared, distribution("normal", ["0", "1"], "0.1"));
    expect(found.high[1]).toBeCloseTo(0.9 * 0.6826894921370859 + 0.1, 15);
    expect(Math.abs(doubleOf(total(found).sub(1n)))).toBeLessThan(1e-31);
  });

  test("one zone has everything", () => {
    expect([...chancesOf(zones([]), distribution("normal", ["0", "1"])).high]).toEqual([1]);
  });
});

describe("what is not built, and what is a mistake of ours", () => {
  const two = zones([["3", "below"]]);
  const none = exact(0n);
  const models: [string, LetterModel][] = [
    ["markov", { kind: "markov", rows: [] }],
    ["ar", { kind: "autoregressive", mean: none, sd: given("1"), phi: given("0.5"), missing: none }],
    [
      "estimated",
      { kind: "estimated", mean: none, sd: given("1"), subgroups: 20, size: 5, under: null, missing: none },
    ],
    ["signed_rank", distribution("signed_rank", ["10"])],
    ["exceedance", distribution("exceedance", ["100", "5", "3"])],
  ];

  test.each(models)("%s is refused by name", (name, model) => {
    expect(letterProbabilities(two, model)).toEqual({ unbuilt: name });
  });

  test("an unknown name, and a distribution on categories", () => {
    expect(() => letterProbabilities(two, distribution("cauchy", []))).toThrow(RangeError);
    const letters: Alphabet = { ...two, kind: "letters", cuts: [] };
    expect(() => letterProbabilities(letters, distribution("normal", ["0", "1"]))).toThrow(RangeError);
  });
});

// Calibration asks thousands of times. The bound is twenty times what is measured on an idle machine.
test("a normal law with seven cuts takes well under a millisecond", () => {
  const cuts: Cuts = ["-3", "-2", "-1", "0", "1", "2", "3"].map((cut) => [cut, "below"]);
  const [alphabet, model] = [zones(cuts), distribution("normal", ["331.2", "0.63"])];
  for (let i = 0; i < 2000; i++) chancesOf(alphabet, model);
  const start = performance.now();
  for (let i = 0; i < 2000; i++) chancesOf(alphabet, model);
  expect((performance.now() - start) / 2000).toBeLessThan(0.4);
});
