// Libraries: reached by `use`, read once, in the order of the text, never outside the policy's folder.

import { describe, expect, test } from "vitest";
import { checkPolicy, isLibrary } from "../../compiler/check/check.ts";
import { checkText, codesOf, policyOf } from "./policies.ts";

const HEAD = "policy p\nzones x: low < 0 <= high\n";

describe("use", () => {
  test("stands for the text of the library, at its place", () => {
    const policy = policyOf(`policy p\nuse "a.tocsin"\nletters y: c, d\nsignal s when a & c`, {
      "a.tocsin": 'letters x: a, b\nuse "b.tocsin"\nrule r = 2 b',
      "b.tocsin": "letters z: e, f",
    });
    expect(policy.alphabets.map(({ name }) => name)).toEqual(["x", "z", "y"]);
    expect(policy.sources.map(({ path }) => path)).toEqual(["policy.tocsin", "a.tocsin", "b.tocsin"]);
    expect(policy.source.path).toBe("policy.tocsin");
  });

  test("reads a library once, however often and by whatever way it is reached", () => {
    const reads: string[] = [];
    const files: Readonly<Record<string, string>> = {
      "dir/p.tocsin": `${HEAD}use "lib/a.tocsin"\nuse "./lib/../lib/b.tocsin"\nuse "lib//a.tocsin"\nsignal s when r or q`,
      "dir/lib/a.tocsin": 'use "b.tocsin"\nrule r = 2 high',
      "dir/lib/b.tocsin": 'use "../lib/c.tocsin"\nrule q = 3 high',
      "dir/lib/c.tocsin": "let n = 3",
    };
    const { value, diagnostics } = checkPolicy("dir/p.tocsin", (path) => {
      reads.push(path);
      return files[path] ?? null;
    });
    expect(diagnostics).toEqual([]);
    expect(reads).toEqual(["dir/p.tocsin", "dir/lib/a.tocsin", "dir/lib/b.tocsin", "dir/lib/c.tocsin"]);
    expect(value && !isLibrary(value) ? value.rules.map(({ name }) => name) : null).toEqual(["q", "r"]);
  });

  test("a library may lead up again inside the policy's folder, and no further", () => {
    const use = (path: string) =>
      codesOf(`${HEAD}use "lib/a.tocsin"\nsignal s when high`, {
        "lib/a.tocsin": `use "${path}"`,
        "b.tocsin": "let n = 3",
      });
    expect(use("../b.tocsin")).toEqual([]);
    expect(use("../../b.tocsin")).toEqual(["use_outside"]);
    expect(use("../../policy/b.tocsin")).toEqual(["use_outside"]);
  });

  test.each([
    "/b.tocsin",
    "C:/b.tocsin",
    "c:b.tocsin",
    "\\\\\\\\host\\\\b.tocsin",
    "../b.tocsin",
    "a/../../b.tocsin",
  ])("%s lies outside", (path) => {
    expect(codesOf(`${HEAD}use "${path}"\nsignal s when high`, { "b.tocsin": "let n = 3" })).toEqual([
      "use_outside",
    ]);
  });

  test("a policy that uses itself, and a chain that leads back", () => {
    expect(codesOf(`${HEAD}use "policy.tocsin"\nsignal s when high`)).toEqual(["use_cycle"]);
    const { diagnostics } = checkText(`${HEAD}use "a.tocsin"\nsignal s when high`, {
      "a.tocsin": 'use "b.tocsin"',
      "b.tocsin": 'use "c.tocsin"',
      "c.tocsin": 'use "a.tocsin"',
    });
    expect(diagnostics.map(({ data }) => data?.files)).toEqual([
      ["a.tocsin", "b.tocsin", "c.tocsin", "a.tocsin"],
    ]);
    expect(diagnostics[0]?.span.source.path).toBe("c.tocsin");
  });

  test("a chain of libraries without end is cut off", () => {
    const { diagnostics } = checkPolicy("p.tocsin", (path) => {
      const n = Number(/\d+/.exec(path)?.[0] ?? 0);
      return `use "lib${n + 1}.tocsin"`;
    });
    expect(diagnostics.map(({ code }) => code)).toEqual(["nesting_too_deep"]);
  });

  test("syntax errors are told of every file, each with its own source, and nothing after them", () => {
    const { value, diagnostics } = checkText(`${HEAD}use "a.tocsin"\nsignal s when oops\nrule = 3`, {
      "a.tocsin": "rule r = = 2 high",
    });
    expect(value).toBeUndefined();
    expect(new Set(diagnostics.map(({ span }) => span.source.path))).toEqual(
      new Set(["policy.tocsin", "a.tocsin"]),
    );
    expect(diagnostics.map(({ code }) => code)).not.toContain("unknown_name");
  });

  test("a name that a library and its user both declare", () => {
    const { diagnostics } = checkText(`${HEAD}use "a.tocsin"\nrule r = 2 low\nsignal s when r`, {
      "a.tocsin": "rule r = 2 high",
    });
    expect(diagnostics.map(({ code, span }) => [code, span.source.path])).toEqual([
      ["name_taken", "policy.tocsin"],
    ]);
    expect(diagnostics[0]?.related?.[0]?.span.source.path).toBe("a.tocsin");
  });

  test("a file that is not there", () => {
    const { value, diagnostics } = checkPolicy("nowhere.tocsin", () => null);
    expect(value).toBeUndefined();
    expect(diagnostics.map(({ code }) => code)).toEqual(["use_not_found"]);
  });
});

describe("a file without policy", () => {
  function leftBy(text: string): readonly string[] {
    const { value, diagnostics } = checkText(text);
    expect(diagnostics.filter(({ severity }) => severity === "error")).toEqual([]);
    if (value === undefined || !isLibrary(value)) throw new Error("no library");
    expect(diagnostics.map(({ code }) => code)).toEqual(value.left.length > 0 ? ["library_names"] : []);
    return value.left;
  }

  test("lists every kind of name it leaves to its user, in order of mention", () => {
    const left = leftBy(`let a = 2 * one + sqrt(pi)
group g = {two, three & four} except five
assign six -> seven
rule r = six eight gap seven of nine or [2 ten (eleven | 0..3 twelve)]
rule q = thirteen then (n1 separate fourteen) within n2
signal s when not fifteen and high quiet until sixteen
clear before seventeen
clear after eighteen
missing st1: as away
blocks of n3
process p(d from lo to hi by st): st2 ~ normal(m, d) with away pw, st3 ~ { l1 p1, l2 }, st4 ~ markov { l3 -> { l4 p2, l5 } }
process q2: st2 ~ normal(m, 1) estimated from m1 subgroups of m2 under pr1(v1)
require arl(sig1, pr2(v2) after pr3) >= v3
require quantile(any, pr2, v4) = v5 within v6
expect sig2 on (l6, l7) ? 3 l8
expect all on l9 -> sig3`);
    const due =
      "one two three four five six seven eight nine ten eleven twelve thirteen fourteen fifteen high sixteen seventeen " +
      "eighteen n1 n2 n3 st1 st2 st3 st4 lo hi st m m1 m2 away pw l1 l2 l3 l4 l5 l6 l7 l8 l9 p1 p2 pr1 pr2 pr3 v1 v2 v3 " +
      "v4 v5 v6 sig1 sig2 sig3";
    expect([...left].sort()).toEqual(due.split(" ").sort());
    expect(left.slice(0, 5)).toEqual(["one", "two", "three", "four", "five"]);
  });

  test("leaves nothing when it declares all it mentions", () => {
    expect(leftBy("zones x: low < 0 <= high\nrule r = 3 high")).toEqual([]);
  });

  test("is checked as far as it goes", () => {
    expect(codesOf("let a = 1 / 0\nrule r = 0 high\nrule q = [0.. high]\nrule c = c and high")).toEqual([
      "library_names",
      "division_by_zero",
      "count_out_of_range",
      "pattern_empty",
      "cycle",
    ]);
  });

  test("may leave the assignment of its own letters to its user", () => {
    expect(leftBy("zones x: low < 0 <= high\nrule r = 3 high gap 1")).toEqual([]);
  });
});
