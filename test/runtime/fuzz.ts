// Loops that throw spoilt machine files and snapshots at the runtime. Whatever comes in, the answer is a list of problems
// or something that works: a machine that opens is run with everything on. A loop throws on the first breach, naming the
// execution, so that the count and the seed it prints find it again.

import { Detector, openMachine } from "../../runtime/index.ts";
import { type Draft, EIGHT_ZONES, fileOf, GOOD_BAD, oneOf, reasonsOf, runOf, twoInARow } from "./machines.ts";

export type Fuzzed = {
  readonly count: number;
  readonly seed: number;
  /** How many of the executions were taken as good. */
  readonly accepted: number;
};

export type Random = (below: number) => number;

/** Whole numbers from 0, below a limit; Mulberry32. */
export function seeded(seed: number): Random {
  let state = seed >>> 0;
  return (below) => {
    state = (state + 0x6d2b79f5) >>> 0;
    let mixed = Math.imul(state ^ (state >>> 15), state | 1);
    mixed ^= mixed + Math.imul(mixed ^ (mixed >>> 7), mixed | 61);
    return Math.floor((((mixed ^ (mixed >>> 14)) >>> 0) / 4294967296) * below);
  };
}

const ODD: readonly unknown[] = [
  ...[null, true, 0, -0, 1, -1, 2, 3, 255, 0.5, 1e9, 2 ** 31, 2 ** 53, 1e308, Number.NaN, "", "x", "NOK"],
  ...["tocsin-machine", "break", "letters", [], [0], [[[]]], {}, { for: 1 }, { until: 0 }, { not: 0 }],
  ...[
    { and: [0, 1] },
    { or: [{ not: 0 }] },
    JSON.parse('{"__proto__": 1}'),
    Array.from({ length: 99 }, () => 1),
  ],
];

/** A copy of a JSON value with one to three of its values replaced, left out, doubled or swapped with a neighbour. */
function spoil(value: unknown, random: Random): unknown {
  const copy = structuredClone(value);
  for (let left = 1 + random(3); left > 0; left--) {
    let at = copy as Record<string, unknown>;
    while (typeof at === "object" && at !== null) {
      const keys = Object.keys(at);
      if (keys.length === 0) break;
      const key = keys[random(keys.length)]!;
      const inner = at[key];
      if (typeof inner === "object" && inner !== null && random(5) > 0) {
        at = inner as Record<string, unknown>;
        continue;
      }
      const way = random(8);
      if (way === 0) delete at[key];
      else if (way === 1) at[keys[random(keys.length)]!] = inner;
      else if (way === 2 && Array.isArray(at)) at.splice(Number(key), 0, inner);
      else if (way === 3 && typeof inner === "number") at[key] = inner + random(3) - 1;
      else at[key] = structuredClone(ODD[random(ODD.length)]);
      break;
    }
  }
  return copy;
}

/** The text with a few characters changed, a stretch left out or doubled, or cut off. */
function scramble(text: string, random: Random): string {
  const at = random(text.length);
  const end = at + random(20);
  switch (random(4)) {
    case 0:
      return text.slice(0, at) + text.slice(end);
    case 1:
      return text.slice(0, end) + text.slice(at);
    case 2:
      return text.slice(0, at);
    default:
      return (
        text.slice(0, at) + String.fromCharCode(random(random(4) === 0 ? 65536 : 128)) + text.slice(at + 1)
      );
  }
}

function noise(random: Random): string {
  return String.fromCharCode(...Array.from({ length: random(60) }, () => random(256)));
}

function draw(good: unknown, text: string, random: Random): unknown {
  const way = random(8);
  if (way === 0) return noise(random);
  if (way < 3) return scramble(text, random);
  return way < 5 ? JSON.stringify(spoil(good, random)) : spoil(good, random);
}

const RULES = [runOf(2, 7, 8), runOf(3, 6, 8), oneOf(0, 8)];
const SEEDS: readonly Draft[] = [
  twoInARow(),
  twoInARow("break"),
  fileOf([GOOD_BAD, { ...GOOD_BAD, name: "w", missing: 1 }], reasonsOf(4, [runOf(2, 3, 4), oneOf(1, 4)], [{}, { formula: 1 }])),
  fileOf(
    [EIGHT_ZONES],
    reasonsOf(
      8,
      RULES,
      [{ formula: { or: [0, { not: { and: [1, 2] } }] }, quiet: { for: 3 } }, { quiet: { until: 2 }, response: "restart" }],
      { block: 3, clearAfter: [1] },
    ),
    "break",
  ),
]; // biome-ignore format: a file a line
const READINGS = [-9, -1, 0, 1, 9, Number.NaN, null, "good", "bad", "NOK", undefined] as const;

/** Runs a detector with everything on; throws only when something is amiss. */
function exercise(detector: Detector, random: Random): void {
  for (let i = 0; i < 8; i++) {
    const raises = detector.observe(READINGS[random(READINGS.length)], READINGS[random(READINGS.length)]);
    if (!Number.isInteger(raises) || raises < 0) throw new Error(`raises ${raises}`);
    if (raises > 0) detector.because();
  }
  detector.observeLetter(random(9) - 1, random(3));
  if (detector.state < 0 || detector.state >= detector.machine.tables.states)
    throw new Error("no such state");
  const problems = detector.restore(JSON.stringify(detector.snapshot()));
  if (problems.length > 0) throw new Error(`its own snapshot is refused: ${JSON.stringify(problems)}`);
  detector.clear();
}

/** Told of each execution as it begins, so that one that never ends is known. */
export type Beat = (execution: number) => void;

function run(count: number, seed: number, beat: Beat, once: (random: Random) => boolean): Fuzzed {
  const random = seeded(seed);
  let accepted = 0;
  for (let i = 0; i < count; i++) {
    beat(i);
    try {
      if (once(random)) accepted++;
    } catch (error) {
      throw new Error(`execution ${i} of seed ${seed}`, { cause: error });
    }
  }
  return { count, seed, accepted };
}

export function fuzzMachines(count: number, seed: number, beat: Beat = () => {}): Fuzzed {
  const texts = SEEDS.map((file) => JSON.stringify(file));
  return run(count, seed, beat, (random) => {
    const pick = random(SEEDS.length);
    const { machine, problems } = openMachine(draw(SEEDS[pick], texts[pick]!, random));
    if ((machine === undefined) !== problems.length > 0) throw new Error("neither a machine nor a problem");
    if (machine !== undefined) exercise(new Detector(machine, { why: true, remember: 5 }), random);
    return machine !== undefined;
  });
}

export function fuzzSnapshots(count: number, seed: number, beat: Beat = () => {}): Fuzzed {
  const detectors = SEEDS.map((file) => new Detector(openMachine(file).machine!, { why: true, remember: 5 }));
  return run(count, seed, beat, (random) => {
    const detector = detectors[random(detectors.length)]!;
    if (random(50) === 0) exercise(detector, random);
    const good = detector.snapshot();
    const problems = detector.restore(draw(good, JSON.stringify(good), random));
    if (problems.length === 0) exercise(detector, random);
    else if (JSON.stringify(detector.snapshot()) !== JSON.stringify(good))
      throw new Error("a refusal left a mark");
    return problems.length === 0;
  });
}

/** One of the good machine files, spoilt as a JSON value. */
export function spoiltMachine(random: Random): unknown {
  return spoil(SEEDS[random(SEEDS.length)], random);
}
