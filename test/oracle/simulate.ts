/**
 * Run lengths by simulation: streams of independent trials drawn with a seeded generator, read by the twin until the signal
 * is first raised. Slow and rough by nature; it shares nothing with the solver it is a witness for.
 */
import { everyTrial, type Letters, type Policy } from "./policy.ts";
import { begin, step } from "./twin.ts";

/** Numbers evenly spread over [0, 1) from a 32-bit seed: a counter through a mixing function, after SplitMix. */
export function uniforms(seed: number): () => number {
  let counter = seed >>> 0;
  return () => {
    counter = (counter + 0x9e3779b9) >>> 0;
    let word = counter;
    word = Math.imul(word ^ (word >>> 16), 0x21f0aaad);
    word = Math.imul(word ^ (word >>> 15), 0x735a2d97);
    return ((word ^ (word >>> 15)) >>> 0) / 0x1_0000_0000;
  };
}

export type Simulated = {
  readonly meanTrials: number;
  /** One standard error of the mean. */
  readonly standardError: number;
  /** The smallest n that half the runs had reached. */
  readonly medianTrials: number;
};

/**
 * Run lengths of `signal` (or "any") when each combination of letters has the given chance (all add to 1), the first
 * alphabet slowest. A run that reaches `longest` trials throws.
 */
export function simulate(
  policy: Policy,
  chances: readonly number[],
  signal: string,
  options: { readonly runs: number; readonly seed: number; readonly longest?: number },
): Simulated {
  const uniform = uniforms(options.seed);
  const trials = everyTrial(policy);
  const draw = (): Letters => {
    let left = uniform();
    const found = trials.find((_, index) => {
      left -= chances[index] ?? 0;
      return left < 0;
    });
    return found ?? trials.at(-1)!;
  };
  const lengths = Array.from({ length: options.runs }, () =>
    runLength(policy, draw, signal, options.longest ?? 5000),
  );
  const meanTrials = lengths.reduce((sum, length) => sum + length, 0) / lengths.length;
  const squares = lengths.reduce((sum, length) => sum + (length - meanTrials) ** 2, 0);
  const standardError = Math.sqrt(squares / (lengths.length - 1) / lengths.length);
  const sorted = lengths.sort((a, b) => a - b);
  return { meanTrials, standardError, medianTrials: sorted[Math.ceil(sorted.length / 2) - 1]! };
}

function runLength(policy: Policy, draw: () => Letters, signal: string, longest: number): number {
  const { history, state: start } = begin(policy);
  let state = start;
  for (let t = 1; t <= longest; t++) {
    const { state: after, answer } = step(history, state, draw());
    if (signal === "any" ? answer.raised.length > 0 : answer.raised.includes(signal)) return t;
    state = after;
  }
  throw new Error(`no signal in ${longest} trials`);
}
