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

/** @type {ReadonlyArray<Fault>} */
export const faults = inCompiler.map(([what, room, find, put]) => ({
  what,
  file: `compiler/machine/${room}.ts`,
  find,
  put,
  tests: "test/property",
}));
