/**
 * Run lengths that others printed, asked of the built command through the text of a policy. A printed value is met to one
 * unit of its last digit; a value known exactly, to 1e-11 of itself. The values are in units of the plotted statistic's own
 * standard deviation, from the start, the signalling trial counted.
 *
 * "From memory" marks a source that was recalled and then confirmed by an independent exact computation.
 */
import { describe, expect, test } from "vitest";
import { type Assessment, assess, row } from "./assess.ts";

/** Fails unless the value is within one unit of the last printed digit. */
function expectPrinted(value: number | null, printed: string): void {
  const unit = 10 ** -(printed.split(".")[1]?.length ?? 0);
  expect(value).not.toBeNull();
  expect(Math.abs(value! - Number(printed)), `${value} against the printed ${printed}`).toBeLessThanOrEqual(
    unit * 1.000001,
  );
}

/** Fails unless the value is the exact one, to 1e-11 of itself. */
function expectExact(value: number | null | undefined, exact: number): void {
  expect(value, `against ${exact}`).toBeTypeOf("number");
  expect(Math.abs(value! / exact - 1), `${value} against ${exact}`).toBeLessThan(1e-11);
}

const zones = `policy published
zones x: out_low < -3 <= a_low < -2 <= b_low < -1 <= c_low < 0
  <= c_high <= 1 < b_high <= 2 < a_high <= 3 < out_high
rule c1 = {out_low, out_high}
rule c2 = 2 of 3 a_high or 2 of 3 a_low
rule c3 = 4 of 5 {a_high, b_high} or 4 of 5 {a_low, b_low}
rule c4 = 8 {a_high, b_high, c_high} or 8 {a_low, b_low, c_low}
process steady: x ~ normal(0, 1)
process shifted(d from 0 to 3 by 0.2): x ~ normal(d, 1)
`;

describe("Champ & Woodall (1987), Exact results for Shewhart control charts with supplementary runs rules, Technometrics 29:393–399, Table 1 (from memory; reprinted in Montgomery, Introduction to Statistical Quality Control)", () => {
  const shifts = [0, 0.4, 0.8, 1, 1.4, 2, 3];
  const table: Readonly<Record<string, readonly string[]>> = {
    c1: ["370.40", "200.08", "71.55", "43.89", "18.25", "6.30", "2.00"],
    "c1 or c2": ["225.44", "104.46", "33.12", "20.01", "8.69", "3.65", "1.68"],
    "c1 or c4": ["152.73", "59.76", "21.07", "14.58", "8.60", "4.89", "1.99"],
    "c1 or c2 or c3 or c4": ["91.75", "36.61", "13.25", "9.22", "5.42", "3.13", "1.67"],
  };
  const states: Readonly<Record<string, number>> = { c1: 1, "c1 or c2": 7, "c1 or c2 or c3 or c4": 215 };
  test.each(Object.entries(table))("%s", async (condition, printed) => {
    const assessment = await assess(`${zones}signal out when ${condition}\n`, "--signal", "out");
    for (const [i, d] of shifts.entries())
      expectPrinted(row(assessment, "out", "shifted", d).arl, printed[i]!);
    expect(assessment.states).toBe(states[condition] ?? assessment.states);
  });

  test("the zone tests from the long run, given no signal so far: 88.617 (own computation, not published)", async () => {
    const assessment = await assess(
      `${zones}signal out when c1 or c2 or c3 or c4\n`,
      ...["--signal", "out", "--process", "steady", "--after", "steady"],
    );
    const settled = assessment.runs.filter(({ after }) => after !== null);
    expect(settled).toHaveLength(1);
    expectPrinted(settled[0]!.arl, "88.617");
  });

  test("the median of a single point beyond three sigma is 257, from ln(1/2)/ln(1 − p); Palm (1990), Tables of run length percentiles, Journal of Quality Technology 22:289–298, gives about 256 (from memory)", async () => {
    const assessment = await assess(`${zones}signal out when c1\n`, "--process", "steady", "--signal", "out");
    expect(row(assessment, "out", "steady").mrl).toBe(257);
    expect(row(assessment, "out", "steady").quantiles["0.5"]).toBe(257);
  });
});

describe("Hurwitz & Mathur (1992), A very simple set of process control rules, Quality Engineering 5:21–29, Table 4", () => {
  const shifts = [0, 0.4, 0.8, 1, 1.4, 2, 2.6, 3];
  test.each([
    ["1.5", ["93.09", "47.72", "17.72", "11.58", "5.82", "2.91", "1.91", "1.59"]],
    ["1.75", ["179.05", "85.33", "28.29", "17.45", "7.84", "3.41", "2.05", "1.63"]],
  ])("one point beyond 3, or two in a row between %s and 3 on one side", async (limit, printed) => {
    const assessment = await assess(`policy published
zones x: out_low < -3 <= far_low < -${limit} <= mid <= ${limit} < far_high <= 3 < out_high
rule point = {out_low, out_high}
rule two   = 2 far_low or 2 far_high
signal out when point or two
process shifted(d from 0 to 3 by 0.2): x ~ normal(d, 1)
`);
    for (const [i, d] of shifts.entries())
      expectPrinted(row(assessment, "out", "shifted", d).arl, printed[i]!);
  });
});

/** A policy over three or four letters beyond ±limit whose one signal is `out`. */
function beyond(limit: string, rules: string): Promise<Assessment> {
  return assess(`policy published
zones x: low < -${limit} <= under < 0 <= over <= ${limit} < high
${rules}
process steady: x ~ normal(0, 1)
`);
}

const upperTail = (assessment: Assessment): number => row(assessment, "tail", "steady").signalled["10"]!;

describe("two in succession", () => {
  // A second signal on the single letter gives the tail probability itself: 1 − (1 − p)^10.
  const tailOf = (assessment: Assessment): number => -Math.expm1(Math.log1p(-upperTail(assessment)) / 10);

  test("on one side, L = 1.7814: Klein (2000), Two alternatives to the Shewhart X̄ control chart, Journal of Quality Technology 32:427–431 (from memory); (1 + p)/(2p²)", async () => {
    const assessment = await beyond("1.7814", "signal out when 2 high or 2 low\nsignal tail when high");
    const p = tailOf(assessment);
    expectExact(row(assessment, "out", "steady").arl, (1 + p) / (2 * p * p));
    expectPrinted(row(assessment, "out", "steady").arl, "370.4");
  });

  test("on either side, L ≈ 1.932: Derman & Ross (1997), Statistical Aspects of Quality Control; (1 + P)/P²", async () => {
    const rules = "signal out when 2 {high, low}\nsignal tail when {high, low}";
    const assessment = await beyond("1.932", rules);
    const p = tailOf(assessment);
    expectExact(row(assessment, "out", "steady").arl, (1 + p) / (p * p));
    // One unit of the limit's last digit on either side encloses the run length of a point beyond three sigma.
    expect(row(await beyond("1.931", rules), "out", "steady").arl).toBeLessThan(370.398);
    expect(row(await beyond("1.933", rules), "out", "steady").arl).toBeGreaterThan(370.398);
  });
});

describe("readings of “2 of 3”, each at the limit that gives 370.398 (own computation, not published)", () => {
  test.each([
    ["1.929342", "the same side, the third anywhere", "signal out when 2 of 3 high or 2 of 3 low"],
    [
      "1.926489",
      "the same side, the third between the limits",
      "signal out when 2 high gap 1 of {under, over} or 2 low gap 1 of {under, over}",
    ],
    [
      "1.866351",
      "the same side, the third between the centre and that limit",
      "assign high -> over, low -> under\nsignal out when 2 high gap 1 or 2 low gap 1",
    ],
    ["2.069769", "either side", "signal out when 2 of 3 {high, low}"],
  ])("L = %s: %s", async (limit, _, rules) => {
    const { arl } = row(await beyond(limit, rules), "out", "steady");
    // The run length moves by about 1,700 for a unit of the limit, so its sixth decimal is worth 0.002.
    expect(Math.abs(arl! - 370.398347)).toBeLessThan(0.002);
  });
});

const coin = (rules: string): string => `policy coin
letters toss: H, T
${rules}
process fair: toss ~ {H 1/2, T 1/2}
process tenth: toss ~ {H 10%, T}
`;

describe("Feller, An Introduction to Probability Theory and Its Applications, vol. 1, XIII.7 (from memory)", () => {
  const rules = [1, 2, 3, 4, 5, 6].map((k) => `signal run_${k} when ${k} H`).join("\n");

  test("mean and variance of the trials to the first run of k heads", async () => {
    const assessment = await assess(coin(rules));
    const means = [2, 6, 14, 30, 62, 126];
    const variances = [2, 22, 142, 734, 3390];
    for (const [i, mean] of means.entries()) expectExact(row(assessment, `run_${i + 1}`, "fair").arl, mean);
    for (const [i, variance] of variances.entries())
      expectExact(row(assessment, `run_${i + 1}`, "fair").sdrl, Math.sqrt(variance));
    for (let k = 1; k <= 6; k++) {
      const [p, q, pk] = [0.1, 0.9, 0.1 ** k];
      const run = row(assessment, `run_${k}`, "tenth");
      expectExact(run.arl, (1 - pk) / (q * pk));
      expectExact(run.sdrl, Math.sqrt((1 - (2 * k + 1) * q * pk - p * pk * pk) / (q * q * pk * pk)));
    }
  });

  // Of the 16 words of four tosses 8 hold two heads in a row, of the 4 words of two tosses 1: P(T ≤ n) is q itself.
  test("a quantile that falls on a tie is the smallest n with P(T ≤ n) ≥ q", async () => {
    const run = row(await assess(coin(rules), "--process", "fair"), "run_2", "fair");
    expect(run.mrl).toBe(4);
    expect(run.quantiles["0.25"]).toBe(2);
  });

  test("the chance of no run of k heads in n tosses is near β/αⁿ⁺¹, and 9/64 for n = 10, k = 2 (seen)", async () => {
    const assessment = await assess(coin(rules), "--by", "10,20,30");
    expectExact(1 - row(assessment, "run_2", "fair").signalled["10"]!, 9 / 64);
    const constants = [
      [2, 1.23606797, 1.44721359],
      [3, 1.08737802, 1.23683983],
      [4, 1.03758012, 1.13268577],
    ] as const;
    for (const [k, alpha, beta] of constants)
      for (const n of [20, 30]) {
        const none = 1 - row(assessment, `run_${k}`, "fair").signalled[String(n)]!;
        // Eight decimals of the printed constants, raised to the power.
        expect(Math.abs(none / (beta / alpha ** (n + 1)) - 1)).toBeLessThan((n + 2) * 1e-8);
      }
  });
});

describe("waits for patterns of a fair coin", () => {
  test("Feller XIII.8; Li (1980), Annals of Probability 8:1171–1176; Graham, Knuth & Patashnik, Concrete Mathematics, §8.4 (from memory)", async () => {
    const waits = {
      HH: 6,
      HT: 4,
      HHH: 14,
      HHT: 8,
      HTH: 10,
      HHTT: 16,
      HTHT: 20,
      HHTTHH: 70,
      HHHHHH: 126,
    };
    for (const [pattern, mean] of Object.entries(waits)) {
      const assessment = await assess(
        coin(`signal seen when [${[...pattern].join(" ")}]`),
        "--process",
        "fair",
      );
      expectExact(row(assessment, "seen", "fair").arl, mean);
    }
  });

  test("which comes first: Penney (1969), Journal of Recreational Mathematics 2:241; Guibas & Odlyzko (1981), Journal of Combinatorial Theory A 30:183–208; OEIS A238644", async () => {
    const races = [
      ["THTH", "HTHH", 9 / 14],
      ["HTT", "TTT", 7 / 8],
      ["THH", "HHT", 3 / 4],
    ] as const;
    for (const [a, b, chance] of races) {
      const rules = [a, b].map((pattern) => `rule ${pattern} = [${[...pattern].join(" ")}]`).join("\n");
      const assessment = await assess(
        coin(`${rules}\nsignal race when ${a} or ${b}\nsignal alone_a when ${a}\nsignal alone_b when ${b}`),
        ...["--process", "fair"],
      );
      expectExact(row(assessment, "race", "fair").first[a], chance);
      expectExact(row(assessment, "race", "fair").first[b], 1 - chance);
      if (a === "THTH") {
        expectExact(row(assessment, "alone_a", "fair").arl, 20);
        expectExact(row(assessment, "alone_b", "fair").arl, 18);
      }
    }
  });

  test("ABRACADABRA over 26 letters: 26¹¹ + 26⁴ + 26 trials: Li (1980)", async () => {
    const letters = [..."ABCDEFGHIJKLMNOPQRSTUVWXYZ"];
    const assessment = await assess(`policy monkey
letters key: ${letters.join(", ")}
signal done when [${[..."ABRACADABRA"].join(" ")}]
process typing: key ~ {${letters.map((letter) => `${letter} 1/26`).join(", ")}}
`);
    const { arl } = row(assessment, "done", "typing");
    expect(Math.abs(arl! / 3670344487444778 - 1)).toBeLessThan(1e-12);
  });
});

describe("the sooner of two runs, and scans", () => {
  test("2 successes or 3 failures at p = 2/3: 65/19, the success run first with chance 52/57: Feller XIII.8 (from memory)", async () => {
    const assessment = await assess(`policy sooner
letters trial: S, F
rule successes = 2 S
rule failures  = 3 F
signal either when successes or failures
process biased: trial ~ {S 2/3, F}
`);
    const run = row(assessment, "either", "biased");
    expectExact(run.arl, 65 / 19);
    expectExact(run.first.successes, 52 / 57);
    expectExact(run.first.failures, 5 / 57);
  });

  test("2 of m: Greenberg (1970), The first occurrence of n successes in N trials, Technometrics 12:627–634 (from memory)", async () => {
    const rules = [2, 3, 4, 5, 10].map((m) => `signal of_${m} when 2 of ${m} H`).join("\n");
    const assessment = await assess(coin(rules));
    expectExact(row(assessment, "of_3", "fair").arl, 14 / 3);
    expectExact(row(assessment, "of_4", "fair").arl, 30 / 7);
    expectExact(row(assessment, "of_3", "tenth").arl, 1190 / 19);
    for (const m of [2, 3, 4, 5, 10])
      expectExact(row(assessment, `of_${m}`, "tenth").arl, 10 * (1 + 1 / (1 - 0.9 ** (m - 1))));
  });
});

describe("sizes of machines", () => {
  const states = async (condition: string): Promise<number> =>
    (await assess(coin(`signal seen when ${condition}`), "--process", "fair")).states;

  test("a one-sided k-of-m scan has C(m, k − 1) states: the orders of the recurrences of OEIS A118647 (3 of 4) and A120118 (3 of 5)", async () => {
    expect(await states("3 of 4 H")).toBe(6);
    expect(await states("3 of 5 H")).toBe(10);
    expect(await states("6 of 12 H")).toBe(792);
  });

  // The exercise counts acceptors, which remember the last n letters in a state. Here a signal is an output of a move, so that
  // the letter just read need not be remembered: n − 1 letters are, and the letter before those decides.
  test("the n-th letter from the end: 2ⁿ states as an acceptor (Aho, Sethi & Ullman, Compilers, exercise 3.25), half of them here", async () => {
    for (const n of [2, 3, 5, 8]) expect(await states(`[H ${n - 1} any] continue`)).toBe(2 ** (n - 1));
  });
});
