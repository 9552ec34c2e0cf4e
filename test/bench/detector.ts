/** Batch detection over a million readings, against the barest loop there is over the same tables. */
import { compile } from "../../compiler/compile.ts";
import { machineFile } from "../../compiler/emit/machine-file.ts";
import { Detector, openMachine } from "../../runtime/index.ts";
import { type Figure, timePair } from "./figure.ts";

const READINGS = 1_000_000;

const POLICY = `policy seven_cuts
zones x: a < -3 <= b < -2 <= c < -1 <= d < 0 <= e <= 1 < f <= 2 < g <= 3 < h
rule beyond = {a, h}
rule two    = 2 of 3 g or 2 of 3 b
rule four   = 4 of 5 {f, g} or 4 of 5 {b, c}
rule eight  = 8 {e, f, g} or 8 {b, c, d}
signal s when beyond or two or four or eight
`;

export function benchDetector(): Figure[] {
  const { policy, machine } = compile(POLICY);
  const file = policy && machine ? machineFile(policy, machine) : undefined;
  const opened = openMachine(file);
  if (!file || !opened.machine) throw new Error("no machine");
  const values = normalValues();
  const cuts = [-3, -2, -1, 0, 1, 2, 3];
  const letters = Uint8Array.from(
    values,
    (value) => cuts.filter((cut, i) => (i < 4 ? value >= cut : value > cut)).length,
  );
  const detector = new Detector(opened.machine);
  const raises = new Uint32Array(READINGS);
  const bare = bareLoop(file.tables.next, file.tables.raises, [...file.tables.columnOf], file.tables.columns);
  const reference = new Uint32Array(READINGS);
  bare(letters, reference);
  const checksum = (found: Uint32Array) =>
    found.reduce((sum, mask, at) => (sum + mask * (at % 997)) % 1_000_003, 0);
  const check = (name: string) => {
    if (checksum(raises) !== checksum(reference))
      throw new Error(`${name}: other signals than the bare loop`);
  };
  const fresh = (run: () => void) => () => {
    detector.clear();
    run();
  };
  const byLetter = timePair(
    fresh(() => detector.observeLetters(letters, raises)),
    () => bare(letters, reference),
    25,
    10,
  );
  check("letters");
  const byValue = timePair(
    fresh(() => detector.observeAll(values, raises)),
    () => bare(letters, reference),
    25,
    10,
  );
  check("values");
  const sum = `${checksum(reference)}`;
  return [
    figure("a million letters in a batch", byLetter, 1.3, sum),
    figure("a million raw values, seven cuts", byValue, 3, sum),
  ];
}

function figure(
  name: string,
  [ours, peer]: ReturnType<typeof timePair>,
  most: number,
  checksum: string,
): Figure {
  const ratio = ours.median / peer.median;
  return {
    name,
    state: "warm",
    ours,
    peer: { name: "bare loop on letters", timing: peer },
    faster: 1 / ratio,
    target: `<= ${most} of the loop`,
    reached: ratio <= most,
    checksum,
  };
}

function bareLoop(
  next: readonly number[],
  raises: readonly number[],
  columnOf: readonly number[],
  columns: number,
) {
  const table = Uint32Array.from(next, (state) => state * columns);
  const output = Uint32Array.from(raises);
  const column = Uint8Array.from(columnOf);
  return (letters: Uint8Array, into: Uint32Array): void => {
    let offset = 0;
    for (let i = 0; i < letters.length; i++) {
      const at = offset + (column[letters[i] as number] as number);
      into[i] = output[at] as number;
      offset = table[at] as number;
    }
  };
}

/** Standard normal values from a seeded generator (Box & Muller 1958 on a 32-bit linear congruence). */
function normalValues(): Float64Array {
  let seed = 12345;
  const uniform = () => {
    seed = (Math.imul(seed, 1664525) + 1013904223) >>> 0;
    return (seed + 0.5) / 2 ** 32;
  };
  return Float64Array.from(
    { length: READINGS },
    () => Math.sqrt(-2 * Math.log(uniform())) * Math.cos(2 * Math.PI * uniform()),
  );
}
