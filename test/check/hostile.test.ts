// Texts made to be slow, large or deep: an answer in good time, never an exception.

import { describe, expect, test } from "vitest";
import { around, checkText, codesOf, policyOf } from "./policies.ts";

const SECONDS = 1000;

function timed<T>(limit: number, action: () => T): T {
  const begun = performance.now();
  const result = action();
  expect(performance.now() - begun).toBeLessThan(limit);
  return result;
}

function lines(count: number, line: (i: number) => string): string {
  return Array.from({ length: count }, (_, i) => line(i)).join("\n");
}

describe("many", () => {
  test("mentions of mentions: two to the sixtieth copies of one condition", () => {
    const rules = lines(60, (i) => `rule r${i + 1} = r${i} and r${i}`);
    const policy = timed(3 * SECONDS, () =>
      policyOf(around(`rule r0 = 2 high\n${rules}\nsignal t when r60`)),
    );
    expect(policy.rules).toHaveLength(61);
  });

  test("rules nested through rules beyond what recursion bears", () => {
    const rules = lines(5000, (i) => `rule r${i} = 2 separate r${i + 1}`);
    const codes = timed(10 * SECONDS, () => codesOf(around(`${rules}\nrule r5000 = high`)));
    expect(new Set(codes)).toEqual(new Set(["nesting_too_deep"]));
  });

  test("a cycle of five thousand rules, lets and groups", () => {
    const cycles = lines(5000, (i) => {
      const next = (i + 1) % 5000;
      return `rule r${i} = r${next}\nlet l${i} = l${next}\ngroup g${i} = g${next}`;
    });
    const { diagnostics } = timed(20 * SECONDS, () => checkText(around(cycles)));
    expect(diagnostics.map(({ code }) => code)).toEqual(["cycle", "cycle", "cycle"]);
    for (const { message } of diagnostics) expect(message.length).toBeLessThan(400);
  });

  test("unknown names", () => {
    const rules = lines(3000, (i) => `rule known_name_${i} = 2 unknwn_name_${i}`);
    const codes = timed(15 * SECONDS, () => codesOf(around(rules)));
    expect(new Set(codes)).toEqual(new Set(["unknown_name"]));
    expect(codes).toHaveLength(3000);
  });

  test("letters in one alphabet, and all of them in one SET", () => {
    const names = Array.from({ length: 20_000 }, (_, i) => `a${i}`);
    const text = `policy p\nletters x: ${names.join(", ")}\ngroup g = {${names.slice(1).join(", ")}}\nassign a0 -> g\nsignal s when 3 a0 gap 1`;
    const policy = timed(30 * SECONDS, () => policyOf(text));
    expect(policy.symbols).toBe(20_000);
  });

  test("combinations of letters beyond the limit, without making them", () => {
    const alphabets = lines(200, (i) => `letters x${i}: a${i}, b${i}`);
    const codes = timed(5 * SECONDS, () =>
      codesOf(`policy p\n${alphabets}\nsignal s when a0 & b1 and 3 {a2, oops}`),
    );
    expect(codes).toEqual(["too_many_letters", "unknown_name"]);
  });

  test("operators in one chain, of numbers, SETs and conditions", () => {
    const chain = (item: string, operator: string) =>
      Array.from({ length: 900 }, () => item).join(` ${operator} `);
    const text = around(
      `let a = ${chain("1.1", "+")}\ngroup g = ${chain("any", "&")}\nrule r = ${chain("2 high", "or")}\nrule q = ${chain("high", "then")}`,
    );
    expect(timed(10 * SECONDS, () => codesOf(text))).toEqual([]);
  });

  test("operands of one call", () => {
    const operands = Array.from({ length: 30_000 }, (_, i) => `${i}`).join(", ");
    expect(timed(20 * SECONDS, () => codesOf(around(`let a = max(${operands})`)))).toEqual([]);
  });

  test("values of a sweep, each with arithmetic of its own", () => {
    const process = "process q(d from 0 to 9999 by 1): x ~ normal(sqrt(d + 1) * exp(-d / 100), 1 + d^3)";
    expect(timed(10 * SECONDS, () => codesOf(around(process)))).toEqual([]);
  });
});

test("a factor of 20 ms at every value of a sweep is worked out once", () => {
  const process = "process q(d from 1 to 2000 by 1): x ~ normal(d, d3(5) * d)";
  expect(timed(5 * SECONDS, () => codesOf(around(process)))).toEqual([]);
});

describe("names that are members of every object", () => {
  const NAMES = ["constructor", "toString", "__proto__", "hasOwnProperty", "valueOf"];

  test("may be declared", () => {
    const [a, b, c, d, e] = NAMES;
    const text = `policy p\nzones ${a}: ${b} < 0 <= ${c}\nlet ${d} = 2\nrule ${e} = ${d} ${b}\nsignal s when ${e}\nexpect s on 2 ${b}`;
    expect(codesOf(text)).toEqual([]);
  });

  test("are unknown where they are not", () => {
    for (const name of NAMES) expect(codesOf(around(`rule r = ${name}`))).toEqual(["unknown_name"]);
  });
});

describe("any text", () => {
  const WORDS =
    'policy p zones x : low < <= 0 1 high signal s when rule r = 3 gap of [ ] ( ) { } | & , -> ~ any not and or then within unless separate overlapping process q normal require arl >= expect on quiet until for let a sqrt ^ - + * / 5% missing as blocks cadence min use "a" allow group assign letters clear before after'.split(
      " ",
    );

  test("gives diagnostics whose places lie in their text, and no exception", () => {
    let seed = 20_240_517;
    const random = (below: number) => {
      seed = (Math.imul(seed, 1_103_515_245) + 12_345) >>> 0;
      return Math.floor((seed / 2 ** 32) * below);
    };
    for (let run = 0; run < 1000; run++) {
      const words = Array.from({ length: 1 + random(60) }, () => WORDS[random(WORDS.length)]);
      const text = `${run % 2 ? "policy p zones x: low < 0 <= high signal s when high " : ""}${words.join(" ")}`;
      for (const { span, message } of checkText(text).diagnostics) {
        expect(
          span.start >= 0 && span.start <= span.end && span.end <= span.source.text.length,
          message,
        ).toBe(true);
      }
    }
  });
});
