// The example of the language reference, whole: it checks clean, and comes out as it reads.

import { expect, test } from "vitest";
import { doubleOf } from "../../compiler/chance/quantity.ts";
import { checkText, policyOf } from "./policies.ts";

const FILL = `# Invented: fill weight on the 330 ml line, subgroup means of five bottles, in grams.
policy fill_weight "Fill weight, line 2"

let mu    = 331.2
let sigma = 1.4 / sqrt(5)
let d     = 1.62

zones fill:  low < mu - d*sigma <= mid <= mu + d*sigma < high

assign  high -> mid,  low -> mid

rule heavy = 3 high gap 1
rule light = 2 low  gap 1
rule swing = [high low high low]

signal stop  when heavy or light   restart
signal look  when swing            quiet for 20

cadence 15 min
missing break

process steady:                             fill ~ normal(mu, sigma)
process shifted(delta from 0 to 3 by 0.25): fill ~ normal(mu + delta*sigma, sigma)

require arl(stop, steady) >= 100
require arl(stop, shifted(1.5)) <= 10
expect  stop  on high mid 2 high
expect  quiet on high 2 mid 2 high
`;

test("checks clean", () => {
  expect(checkText(FILL).diagnostics).toEqual([]);
});

test("comes out as it reads", () => {
  const policy = policyOf(FILL);
  expect(policy).toMatchObject({
    name: "fill_weight",
    title: "Fill weight, line 2",
    symbols: 3,
    groups: [],
    clearBefore: null,
    clearAfter: [],
    missing: "break",
    block: null,
    cadence: { seconds: 900, text: "15 min" },
    allowances: [],
  });
  const [fill] = policy.alphabets;
  expect(fill?.letters.map(({ name }) => name)).toEqual(["low", "mid", "high"]);
  expect(fill?.cuts.map(({ at, owner }) => [doubleOf(at.value).toFixed(6), owner])).toEqual([
    ["330.185720", "above"],
    ["332.214280", "below"],
  ]);
  expect(policy.rules.map(({ name, condition }) => [name, condition.kind])).toEqual([
    ["heavy", "weakRun"],
    ["light", "weakRun"],
    ["swing", "pattern"],
  ]);
  const [heavy] = policy.rules;
  if (heavy?.condition.kind !== "weakRun") throw new Error("no weak run");
  expect({
    ...heavy.condition,
    set: [...heavy.condition.set],
    failures: [...heavy.condition.failures],
  }).toMatchObject({
    count: 3,
    gap: 1,
    set: [0, 0, 1],
    failures: [0, 1, 0],
    text: "3 high gap 1",
  });
  const [stop, look] = policy.signals;
  expect(stop).toMatchObject({ name: "stop", response: "restart", quiet: null });
  expect(look).toMatchObject({ name: "look", response: "own", quiet: { kind: "for", count: 20 } });
  expect(policy.processes[1]?.parameters[0]?.values).toHaveLength(13);
  expect(policy.requires.map(({ measure }) => measure.text)).toEqual([
    "arl(stop, steady)",
    "arl(stop, shifted(1.5))",
  ]);
  expect(policy.expects[1]?.trials.map(({ symbol }) => symbol)).toEqual([2, 1, 1, 2, 2]);
});
