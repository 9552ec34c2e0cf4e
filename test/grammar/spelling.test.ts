import { expect, test } from "vitest";
import { nearest } from "../../grammar/spelling.ts";

test.each([
  ["restrat", ["restart", "require"], "restart"],
  ["RESTART", ["restart"], "restart"],
  ["adn", ["and", "any"], "and"],
  ["anyy", ["and", "any"], "any"],
  ["seperate", ["separate"], "separate"],
  ["sginal", ["signal"], "signal"],
  ["hgih", ["high", "low"], "high"],
  ["high", ["high"], undefined],
  ["high", ["low", "mid"], undefined],
  ["ab", ["ac", "AB"], "AB"],
  ["x", ["y"], undefined],
  ["rul", ["rule", "run"], "rule"],
  ["", ["a"], undefined],
  ["a".repeat(100), ["a".repeat(101)], undefined],
  ["lows", [], undefined],
])("%s among %j is %s", (word, candidates, expected) => {
  expect(nearest(word, candidates)).toBe(expected);
});

test("a word that is far shorter or longer is not looked at twice", () => {
  const candidates = Array.from({ length: 20_000 }, (_, i) => `${"x".repeat(i % 50)}${i}`);
  const begun = process.cpuUsage().user;
  nearest("measurement", candidates);
  expect((process.cpuUsage().user - begun) / 1e6).toBeLessThan(2);
});
