/**
 * Real readings, not ours: 1,461 days of Seattle weather, 2012 to 2015, from NOAA (a work of the US government), carried by the
 * npm package vega-datasets 3.2.1 as `seattle-weather.csv`. They are read as recorded data are, run through the detector asked
 * why, and each day is compared with the slow twin, which sees letters found here by plain comparison.
 *
 * The policy is invented and forecasts nothing.
 */
import { createReadStream, readFileSync } from "node:fs";
import { dirname, join } from "node:path";
import { fileURLToPath } from "node:url";
import { expect, it } from "vitest";
import { readCsv } from "../../compiler/data/csv.ts";
import { machineFile } from "../../compiler/emit/machine-file.ts";
import { Detector, openMachine } from "../../runtime/index.ts";
import { compiled } from "../machine/compiled.ts";
import {
  and,
  choice,
  meet,
  not,
  or,
  pattern,
  row,
  rule,
  run,
  scan,
  signal,
  times,
  unless,
  weak,
} from "../oracle/build.ts";
import type { Policy, Row } from "../oracle/policy.ts";
import { answers } from "../oracle/twin.ts";

const entry = fileURLToPath(import.meta.resolve("vega-datasets"));
const DATA = join(dirname(entry).replace(/build$/, ""), "data/seattle-weather.csv");

const TEXT = `# Invented, for a test on real readings.
policy weather_watch
zones wind: calm < 2 <= breezy <= 4.5 < strong
zones temp_max: frosty <= 4.4 < mild < 27.8 <= hot
letters weather: drizzle, rain, sun, snow, fog
assign strong -> breezy
rule blow  = 3 strong gap 1
rule wet   = 5 of 7 {rain, snow}
rule turn  = [sun 1..3 (rain | snow) sun]
rule bleak = 2 frosty & {rain, snow, fog}
rule dry   = rain unless {rain, drizzle, snow} within 9
signal storm when blow and not hot or bleak
signal soak  when wet and not turn restart
signal swing when turn or dry quiet for 10
`;

const TWIN: Policy = {
  lets: [],
  alphabets: [
    { name: "wind", kind: "zones", letters: ["calm", "breezy", "strong"], missingAs: null },
    { name: "temp_max", kind: "zones", letters: ["frosty", "mild", "hot"], missingAs: null },
    { name: "weather", kind: "letters", letters: ["drizzle", "rain", "sun", "snow", "fog"], missingAs: null },
  ],
  groups: [],
  assigns: [{ from: { kind: "letter", name: "strong" }, to: { kind: "letter", name: "breezy" } }],
  rules: [
    { name: "blow", condition: weak(3, "strong", 1) },
    { name: "wet", condition: scan(5, 7, "rain|snow") },
    { name: "turn", condition: pattern(row("sun", times(1, 3, choice("rain", "snow")), "sun")) },
    { name: "bleak", condition: run(2, meet("frosty", "rain|snow|fog")) },
    { name: "dry", condition: unless(run(1, "rain"), run(1, "rain|drizzle|snow"), 9) },
  ],
  signals: [
    signal(or(and(rule("blow"), not(run(1, "hot"))), rule("bleak")), { name: "storm" }),
    signal(and(rule("wet"), not(rule("turn"))), { name: "soak", response: "restart" }),
    signal(or(rule("turn"), rule("dry")), { name: "swing", quiet: { kind: "for", count: 10 } }),
  ],
  clearBefore: [],
  clearAfter: [],
  missing: "refuse",
  blocks: null,
};

/** The letters of every day, by comparison alone. */
function lettersByHand(): Row[] {
  const [, ...lines] = readFileSync(DATA, "utf8").trim().split(/\r?\n/);
  return lines.map((line) => {
    const [, , warmest, , wind, weather] = line.split(",");
    const [w, t] = [Number(wind), Number(warmest)];
    return [
      w < 2 ? "calm" : w <= 4.5 ? "breezy" : "strong",
      t <= 4.4 ? "frosty" : t < 27.8 ? "mild" : "hot",
      weather ?? null,
    ];
  });
}

it("the detector on real weather says what the slow twin says, and why", async () => {
  const { policy, machine } = compiled(TEXT);
  const opened = openMachine(machineFile(policy, machine));
  if (!opened.machine) throw new Error("refused");
  const detector = new Detector(opened.machine, { why: true });
  const statistics = policy.alphabets.map(({ name, kind }) => ({ name, kind }));
  const found: unknown[] = [];
  for await (const item of readCsv(createReadStream(DATA), { statistics, time: "date" })) {
    if (item.kind === "problems") throw new Error(JSON.stringify(item.problems));
    const raised = detector.namesOf(detector.observe(...item.values));
    found.push({
      raised,
      because: detector
        .because()
        .map(({ rule: name, from, to }) => `${name} ${from}..${to}`)
        .sort(),
    });
  }
  const days = lettersByHand();
  const due = answers(TWIN, days).map(({ raised, because }) => ({
    raised: [...raised],
    because: because.map(({ rule: name, trials: [from, to] }) => `${name} ${from}..${to}`).sort(),
  }));
  expect(days.length).toBe(1461);
  expect(found).toEqual(due);
  for (const name of ["storm", "soak", "swing"])
    expect(due.filter(({ raised }) => raised.includes(name)).length, name).toBeGreaterThan(3);
});
