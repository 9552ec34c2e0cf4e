// A loop that reads spoilt CSV: whatever the bytes, rows and then at most one item of problems, and nothing thrown; and the
// same whatever the chunks. A breach names the execution, so that the count and the seed find it again.

import { type DataItem, readCsv } from "../../compiler/data/csv.ts";
import type { Wanted } from "../../compiler/data/header.ts";
import { type Beat, type Fuzzed, seeded } from "../runtime/fuzz.ts";
import { chunked, collect } from "./rows.ts";

type Random = ReturnType<typeof seeded>;

const WANTED: Wanted = {
  statistics: [
    { name: "x", kind: "zones" },
    { name: "v", kind: "letters" },
  ],
  stream: "s",
};
const PIECES = [
  "x,v,s",
  "x",
  ",",
  ",",
  "\n",
  "\n",
  "\r\n",
  "\r",
  '"',
  '""',
  "1",
  "-2.5e3",
  "NaN",
  "a",
  " ",
  "é",
  "𝄞",
];
const GOOD = 'x,v,s\n1,a,L1\n2.5,"b, c",L2\n\n,"d ""e""\nf",\n-3e2,a,L1\n';

/** A good table with some bytes changed, a heap of pieces of CSV, or any bytes at all. */
function draw(random: Random): Uint8Array {
  const way = random(4);
  if (way === 0) return Uint8Array.from({ length: random(80) }, () => random(256));
  if (way === 1) {
    const pieces = Array.from({ length: random(30) }, () => PIECES[random(PIECES.length)]);
    return new TextEncoder().encode(`x,v,s\n${pieces.join("")}`);
  }
  const bytes = new TextEncoder().encode(GOOD);
  for (let left = random(4); left > 0; left--) {
    const at = random(bytes.length);
    if (random(3) === 0) bytes.copyWithin(at, random(bytes.length), random(bytes.length));
    else bytes[at] = way === 2 ? random(256) : (PIECES[random(PIECES.length)]?.charCodeAt(0) ?? 0) & 0x7f;
  }
  return random(4) === 0 ? bytes.subarray(0, random(bytes.length)) : bytes;
}

async function read(bytes: Uint8Array, size: number): Promise<string> {
  const items: AsyncIterable<DataItem> = readCsv(chunked(bytes, size), WANTED, { mostRecordBytes: 60 });
  return JSON.stringify(await collect(items));
}

/** Accepted are the executions without a problem. */
export async function fuzzCsv(count: number, seed: number, beat: Beat = () => {}): Promise<Fuzzed> {
  const random = seeded(seed);
  let accepted = 0;
  for (let i = 0; i < count; i++) {
    beat(i);
    const bytes = draw(random);
    const found = await read(bytes, 65536).catch((cause: unknown) => {
      throw new Error(`execution ${i} of seed ${seed}: ${JSON.stringify([...bytes])}`, { cause });
    });
    if (found.endsWith('"problems":[]}')) accepted++;
    if (i % 16 !== 0) continue;
    const pieces = await read(bytes, 1 + random(5));
    if (pieces !== found)
      throw new Error(`execution ${i} of seed ${seed}: ${found} in one, ${pieces} in pieces`);
  }
  return { count, seed, accepted };
}
