// Makes the recorded data of the examples. Everything is invented: each series is drawn from a seeded generator and given
// the one fault its README tells of. The same files come out on every machine.
//   node examples/make-data.mjs           writes them
//   node examples/make-data.mjs --check   writes nothing; exit code 1 when a file differs

import { readFileSync, writeFileSync } from "node:fs";
import { join } from "node:path";

/** Numbers over [0, 1) from a 32-bit seed (a counter, mixed). @param {number} seed */
function uniforms(seed) {
  let counter = seed >>> 0;
  return () => {
    counter = (counter + 0x9e3779b9) >>> 0;
    let word = Math.imul(counter ^ (counter >>> 16), 0x21f0aaad);
    word = Math.imul(word ^ (word >>> 15), 0x735a2d97);
    return ((word ^ (word >>> 15)) >>> 0) / 0x1_0000_0000;
  };
}

/** Draws from the laws the policies name. @param {number} seed */
function draws(seed) {
  const uniform = uniforms(seed);
  const normal = (mean = 0, sd = 1) => {
    const radius = Math.sqrt(-2 * Math.log(1 - uniform()));
    return mean + sd * radius * Math.cos(2 * Math.PI * uniform());
  };
  /** @param {number} mean */
  const poisson = (mean) => {
    let count = -1;
    for (let left = 1; left > Math.exp(-mean); left *= 1 - uniform()) count++;
    return count;
  };
  /** @param {number} scale */
  const erlang2 = (scale) => -scale * Math.log((1 - uniform()) * (1 - uniform()));
  return { uniform, normal, poisson, erlang2 };
}

/** @param {number} count @param {(index: number) => T} make @template T */
const times = (count, make) => Array.from({ length: count }, (_, index) => make(index));

/** A table as CSV. @param {readonly string[]} head @param {ReadonlyArray<ReadonlyArray<string | number>>} rows */
const csv = (head, rows) => `${[head, ...rows].map((row) => row.join(",")).join("\n")}\n`;

/** A clock that starts at an hour of a day in March 2025. @param {number} day @param {number} hour @param {number} seconds */
function clock(day, hour, seconds) {
  return new Date(Date.UTC(2025, 2, day, hour) + seconds * 1000).toISOString().slice(0, 19);
}

/** Five bottles every quarter of an hour; after 44 subgroups the line fills 1.2 g too much. */
function fillWeight() {
  const { normal } = draws(33);
  const subgroups = times(64, (index) =>
    times(5, () => Math.round(normal(index < 44 ? 331.2 : 332.3, 1.4) * 10) / 10),
  );
  const taken = (/** @type {number} */ index) => clock(3, 6, index * 900).slice(0, 16);
  const mean = (/** @type {readonly number[]} */ five) => five.reduce((sum, value) => sum + value, 0) / 5;
  return {
    "fill-weight/fills.csv": csv(
      ["taken", "fill"],
      subgroups.map((five, index) => [taken(index), mean(five).toFixed(2)]),
    ),
    "fill-weight/bottles.csv": csv(
      ["taken", "fill"],
      subgroups.flatMap((five, index) => five.map((value) => [taken(index), value.toFixed(1)])),
    ),
  };
}

/** A reading a minute; the rolls warm up and the strip grows thinner, is corrected, and stays. */
function stripGauge() {
  const { normal } = draws(35);
  const rows = times(90, (index) => {
    const drift = index >= 50 && index < 66 ? -0.35 * (index - 49) : 0;
    return [index + 1, normal(800 + drift, 2.5).toFixed(1)];
  });
  return { "strip-gauge/coil.csv": csv(["minute", "gauge"], rows) };
}

/** Four readings a shot, related to one another, and their squared distance from usual; from shot 61 the melt is too hot. */
function mouldingShots() {
  const { normal } = draws(13);
  const rows = times(90, (index) => {
    const z = times(4, () => normal());
    if (index >= 60) z[0] = z[0] + 2.4;
    const [a, b, c, d] = z;
    const melt = 228 + 1.5 * a;
    const pressure = 940 + 12 * (-0.6 * a + 0.8 * b);
    const cushion = 4.2 + 0.15 * (0.5 * b + Math.sqrt(0.75) * c);
    const cycle = 42 + 0.4 * d;
    const distance = a * a + b * b + c * c + d * d;
    return [
      index + 1,
      melt.toFixed(1),
      pressure.toFixed(0),
      cushion.toFixed(2),
      cycle.toFixed(2),
      distance.toFixed(2),
    ];
  });
  return {
    "moulding-shots/shots.csv": csv(["shot", "melt", "pressure", "cushion", "cycle", "distance"], rows),
  };
}

/** Packs found wet a day, for three months; from day 61 a valve leaks and nobody sees to it. */
function wetPacks() {
  const { poisson } = draws(14);
  const rows = times(75, (index) => [clock(1, 0, index * 86_400).slice(0, 10), poisson(index < 60 ? 4 : 9)]);
  return { "sterile-supply/days.csv": csv(["day", "wet"], rows) };
}

/** Rolls of two looms as they come to the table; loom B starts to fail after 50 rolls. */
function clothRolls() {
  const { uniform } = draws(15);
  const rows = times(100, (index) => {
    const loom = uniform() < 0.5 ? "A" : "B";
    const reject = loom === "B" && index >= 50 ? 0.3 : 0.04;
    const drawn = uniform();
    return [index + 1, loom, drawn < reject ? "X" : drawn < reject + 0.15 ? "2nd" : "1st"];
  });
  return { "cloth-inspection/rolls.csv": csv(["roll", "loom", "verdict"], rows) };
}

/** Two hours of one rack. The cooling fails with minute 71, is back with 86; the front sensor is silent from minute 111. */
function rackHeat() {
  const { normal } = draws(16);
  const rows = times(120, (index) => {
    const rise = index >= 70 && index < 85 ? Math.min(6, (index - 69) * 1.5) : 0;
    const front = index >= 110 || index === 31 ? "" : normal(24 + rise, 1.5).toFixed(1);
    return [clock(5, 22, index * 60), front, normal(37 + rise, 2).toFixed(1)];
  });
  return { "server-room/night.csv": csv(["time", "front", "back"], rows) };
}

/** Six trays of sixteen pieces; the divider's piston creeps from the fifth tray on. */
function doughPieces() {
  const { normal } = draws(17);
  const rows = times(96, (index) => {
    const tray = Math.floor(index / 16);
    const shift = tray < 4 ? 0 : 6;
    return [tray + 1, (index % 16) + 1, normal(250 + shift, 4).toFixed(0)];
  });
  return { "bakery/pieces.csv": csv(["tray", "place", "piece"], rows) };
}

/** Twelve hours of filtered water; a storm reaches the filter after six. */
function filterTurbidity() {
  const { normal } = draws(18);
  const rows = times(144, (index) => {
    const level = index >= 72 && index < 100 ? 0.1 + 0.3 * Math.min(1, (index - 71) / 6) : 0.1;
    return [clock(9, 0, index * 300).slice(0, 16), Math.exp(normal(Math.log(level), 0.5)).toFixed(3)];
  });
  return { "waterworks/filter3.csv": csv(["time", "ntu"], rows) };
}

/** Ten minutes before and ten after midnight, a reading a second; a bearing wears from 23:55 on, and the radio drops some. */
function pumpVibration() {
  const { erlang2, uniform } = draws(48);
  const rows = times(1200, (index) => {
    const wear = index < 300 ? 1 : 1 + Math.min(1, (index - 300) / 600);
    const value = erlang2(wear).toFixed(2);
    return [clock(11, 23, 3000 + index).slice(11), uniform() < 0.01 ? "" : value];
  });
  return {
    "pump-vibration/before-midnight.csv": csv(["time", "velocity"], rows.slice(0, 600)),
    "pump-vibration/after-midnight.csv": csv(["time", "velocity"], rows.slice(600)),
  };
}

/** A day and a half of milk; the cream valve sticks at sample 120, is turned back late, and is washed at the end of a shift. */
function milkFat() {
  const { normal } = draws(20);
  const rows = times(200, (index) => {
    const shift = index >= 120 && index < 140 ? 0.04 : 0;
    const event = index === 60 || index === 140 ? "adjusted" : index % 48 === 47 ? "washed" : "run";
    return [clock(12, 6, index * 600).slice(0, 16), normal(3.5 + shift, 0.02).toFixed(3), event];
  });
  return { "dairy/milk.csv": csv(["time", "fat", "event"], rows) };
}

/** A shaft an hour; the wheel is dressed too late: from shaft 41 the diameter lies 1.2 standard deviations high. */
function shaftDiameter() {
  const { normal } = draws(21);
  const rows = times(60, (index) => [index + 1, normal(index < 40 ? 24.98 : 24.9848, 0.004).toFixed(4)]);
  return { "library/shafts.csv": csv(["shaft", "diameter"], rows) };
}

const files = {
  ...fillWeight(),
  ...stripGauge(),
  ...mouldingShots(),
  ...wetPacks(),
  ...clothRolls(),
  ...rackHeat(),
  ...doughPieces(),
  ...filterTurbidity(),
  ...pumpVibration(),
  ...milkFat(),
  ...shaftDiameter(),
};

for (const [name, text] of Object.entries(files)) {
  const path = join(import.meta.dirname, name);
  if (!process.argv.includes("--check")) writeFileSync(path, text);
  else if (readFileSync(path, "utf8") !== text) {
    process.stderr.write(`${name} is not what the generator makes\n`);
    process.exitCode = 1;
  }
}
