/** One figure of the bench: ours, a peer's, their ratio, what is to be reached, and a checksum of the results. */

export type Timing = { readonly median: number; readonly least: number };

export type Figure = {
  readonly name: string;
  readonly state: "warm" | "cold";
  /** Milliseconds. */
  readonly ours: Timing;
  readonly peer: { readonly name: string; readonly timing: Timing } | null;
  /** Peer over ours: how many times faster. */
  readonly faster: number | null;
  readonly target: string;
  readonly reached: boolean;
  readonly checksum: string;
};

/** Times a task: `rounds` counted runs after `warmUp` others, milliseconds. */
export function time(task: () => unknown, rounds: number, warmUp: number): Timing {
  for (let i = 0; i < warmUp; i++) task();
  const times = Array.from({ length: rounds }, () => {
    const before = performance.now();
    task();
    return performance.now() - before;
  });
  return summary(times);
}

/** Times two tasks in turn, A B A B …, so that both see the same machine. */
export function timePair(
  a: () => unknown,
  b: () => unknown,
  rounds: number,
  warmUp: number,
): [Timing, Timing] {
  const times: [number[], number[]] = [[], []];
  for (let i = -warmUp; i < rounds; i++) {
    for (const [which, task] of [a, b].entries()) {
      const before = performance.now();
      task();
      if (i >= 0) times[which as 0 | 1].push(performance.now() - before);
    }
  }
  return [summary(times[0]), summary(times[1])];
}

export function summary(times: readonly number[]): Timing {
  const sorted = [...times].sort((a, b) => a - b);
  return { median: sorted[sorted.length >> 1] ?? Number.NaN, least: sorted[0] ?? Number.NaN };
}

/** A table for people. */
export function formatFigures(figures: readonly Figure[]): string {
  const rows = figures.map(({ name, state, ours, peer, faster, target, reached, checksum }) => [
    name,
    state,
    `${show(ours.median)} (${show(ours.least)})`,
    peer ? `${peer.name} ${show(peer.timing.median)} (${show(peer.timing.least)})` : "",
    faster === null ? "" : `${faster.toPrecision(3)} x`,
    target,
    reached ? "reached" : "MISSED",
    checksum,
  ]);
  const head = ["figure", "", "ours ms", "peer ms", "faster", "to reach", "", "checksum"];
  const all = [head, ...rows];
  const widths = head.map((_, column) => Math.max(...all.map((row) => (row[column] ?? "").length)));
  return `${all
    .map((row) =>
      row
        .map((cell, column) => cell.padEnd(widths[column] ?? 0))
        .join("  ")
        .trimEnd(),
    )
    .join("\n")}\n`;
}

function show(milliseconds: number): string {
  return milliseconds.toPrecision(3);
}
