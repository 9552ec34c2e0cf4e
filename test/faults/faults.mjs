// Faults to seed, one at a time, each a slip that a person could make. `find` stands once in the file.

/** @typedef {{what: string, file: string, find: string, put: string, tests: string}} Fault */

/** @type {ReadonlyArray<readonly [what: string, room: string, find: string, put: string]>} */
const inCompiler = [
  ["a weak run forgives one failure too many", "trackers", "state % stride < gap", "state % stride <= gap"],
  [
    "a run completes once and not again",
    "trackers",
    "Math.min(held + 1, count - 1)",
    "Math.min(held + 1, count)",
  ],
  ["a long scan loses what passes from word to word", "trackers", "carry = old >>> 31;", "carry = 0;"],
  [
    "a short scan keeps a success too long",
    "trackers",
    "oldest <= window - 1 - (count - held)",
    "oldest <= window - (count - held)",
  ],
  ["`overlapping` clears like `separate`", "trackers", 'kind === "separate" && ', ""],
  [
    "the count of completions is one too high",
    "trackers",
    "const completes = done === count;",
    "const completes = done > count;",
  ],
  ["`within` never runs out", "trackers", "within === null ? 1 : rest - 1", "within === null ? 1 : rest"],
  [
    "of two copies the older serves",
    "trackers",
    "if (later > (into[target] as number))",
    "if (into[target] === 0)",
  ],
  ["`unless` does not listen", "trackers", "waiting !== 0 && right.output[index] === 0", "waiting !== 0"],
  ["an upper limit of a repetition is one too low", "pattern", "copy < most", "copy < most - 1"],
  ["`1..` does not repeat", "pattern", "  link(once, once, positions);\n", ""],
  [
    "an `or` is explained by all its operands",
    "formula",
    "if (holdsNode(operand, completes) === wanted) attribute",
    "attribute",
  ],
  ["a raise clears nothing", "signal", "if (!keeps) into.fill(0);", ""],
  ["a quiet time is one trial short", "signal", "? signal.quiet.count : 1", "? signal.quiet.count - 1 : 1"],
  [
    "a broken trial ends `quiet until`",
    "signal",
    "if (column === columns) return 1;",
    "if (column === columns) return 0;",
  ],
  ["a restart ends the quiet times that begin with it", "build", "raised[s] === 0 || ", ""],
  [
    "a block's edge leaves `clear after` its memory",
    "build",
    "    into.fill(0, signals.length, placeAt);\n",
    "",
  ],
  [
    "`clear after` forgets the place in the block",
    "build",
    "if (cleared) into.fill(0);",
    "if (cleared) into.fill(0, 0, placeAt);",
  ],
  [
    "states are merged that outputs tell apart",
    "minimise",
    "(blockOf[state] as number) * outputs.size + out",
    "(blockOf[state] as number) * outputs.size",
  ],
  ["refinement begins with too few splitters", "minimise", "if (block !== largest)", "if (block > largest)"],
  ["columns are merged that lead elsewhere", "columns", "next[row + a] !== next[row + b] || ", ""],
];

/** @type {ReadonlyArray<readonly [what: string, file: string, find: string, put: string, tests: string]>} */
const inSolver = [
  [
    "certificate too small",
    "certificate.ts",
    "(chain.shape.widestRow + 4) * UNIT * OUTWARD",
    "0",
    "certificate mean",
  ],
  [
    "bound ignores the weight of the gain",
    "certificate.ts",
    "const share = (gainError * weight) / ((1 - excess) * gain);",
    "const share = gainError;",
    "certificate",
  ],
  ["excess not divided out", "certificate.ts", "/ ((1 - excess) * gain)", "/ gain", "certificate"],
  [
    "difference from 1 as pivot",
    "elimination.ts",
    "let leaving = exit[place]!;",
    "let leaving = exit[place]! * (1 + 1e-9);",
    "mean",
  ],
  [
    "fill dropped",
    "elimination.ts",
    "slot[fill[at++]!]! += share * slot[outSlot[o]!]!;",
    "slot[fill[at++]!]! += 0 * share;",
    "mean",
  ],
  [
    "exits of eliminated places lost",
    "elimination.ts",
    "exit[inPlace[i]!]! += share * exitShare;",
    "",
    "mean",
  ],
  [
    "downstream bound forgotten",
    "mean.ts",
    "return (share + base.bound + share * base.bound + UNIT) * (1 + 1e-9);",
    "return share;",
    "mean certificate",
  ],
  [
    "base not the least",
    "mean.ts",
    "least = Math.min(least, steps[j]!);",
    "least = Math.max(least === Number.POSITIVE_INFINITY ? 0 : least, steps[j]!);",
    "mean long-cycles",
  ],
  ["loop variance lost", "variance.ts", "+ chain.loop[i]!;", ";", "mean closed"],
  [
    "law: bracket reversed",
    "law.ts",
    "low: none ? 0 : low * (1 - error),",
    "low: none ? 0 : high * (1 - error),",
    "law",
  ],
  [
    "law: rounding ignored",
    "law.ts",
    "return (t + law.period + 2) * (law.chain.shape.widestRow + 3) * UNIT;",
    "return 0;",
    "law",
  ],
  [
    "law: phases ignored",
    "period.ts",
    "return { period, phaseOf: level.map((steps) => steps % period) };",
    "return { period: 1, phaseOf: new Int32Array(size) };",
    "law long-run raise",
  ],
  [
    "long run not averaged over the block",
    "long-run.ts",
    "for (let i = 0; i < sums.length; i++) sums[i]! += current[i]! / period;",
    "for (let i = 0; i < sums.length; i++) sums[i] = current[i]!;",
    "long-run",
  ],
  [
    "cost not carried to the kept place",
    "contraction.ts",
    "weight[at] = visits;",
    "weight[at] = at === place ? 1 : 0;",
    "mean certificate long",
  ],
  [
    "refinement: wrong sign",
    "refinement.ts",
    "add(sum, -values.high[i]!, -values.low[i]!);",
    "add(sum, -values.high[i]!, values.low[i]!);",
    "long-cycles",
  ],
  [
    "refinement reports plain bound",
    "refinement.ts",
    "const error = (widestRow + 8) * DOUBLE_DOUBLE_UNIT;",
    "const error = (widestRow + 8) * 1e-17;",
    "long-cycles",
  ],
  [
    "prime passed over wrongly",
    "exact-mean.ts",
    "if (leaving === 0) return 0;",
    "if (leaving === 0) continue;",
    "exact",
  ],
  [
    "tie by float",
    "quantile.ts",
    "if (exact && single !== null) {",
    "if (exact && single === null) {",
    "law",
  ],
  [
    "rate without class chances",
    "closed-classes.ts",
    "const share = closed.length === 1 ? 1 : averageOver(law, endChances(system, k));",
    "const share = 1;",
    "raise",
  ],
  [
    "hopeless counted",
    "endings.ts",
    "if (!hope) hopeless.fill(1, classStart[k]!, classStart[k + 1]!);",
    "",
    "law",
  ],
  [
    "view merges kinds",
    "view.ts",
    "const apart = !kinds.includes(0) && new Set(kinds).size === kinds.length;",
    "const apart = true;",
    "view",
  ],
  [
    "powers lose low part",
    "powers.ts",
    "addProduct(sums[j]!, high, low, other, a.low[i * size + j]!);",
    "addProduct(sums[j]!, high, 0, other, 0);",
    "law",
  ],
  [
    "advances forgotten",
    "raise-counts.ts",
    "const base = averageOver(law, only.advances);",
    "const base = 0;",
    "raise",
  ],
  [
    "stop early never",
    "sweeps.ts",
    "if (largest <= limits.change && largest * factor <= 10 * limits.change) break;",
    "if (largest <= 1e-3) break;",
    "mean raise",
  ],
];

/** @type {ReadonlyArray<Fault>} */
export const faults = [
  ...inCompiler.map(([what, room, find, put]) => ({
    what,
    file: `compiler/machine/${room}.ts`,
    find,
    put,
    tests: "test/property",
  })),
  ...inSolver.map(([what, file, find, put, tests]) => ({
    what,
    file: `compiler/analysis/${file}`,
    find,
    put,
    tests: tests
      .split(" ")
      .map((name) => `test/analysis/${name}`)
      .join(" "),
  })),
];
