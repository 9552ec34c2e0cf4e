/**
 * What an example should come to, worked out without the project: the chances of the letters, the chain of every signal
 * written by hand, and the closed forms and printed tables that some of the figures are known from. One file for each folder
 * of `examples/` lies in `scenarios/`; here is what they share.
 */
import { type Move, normalTail, type Walk } from "./independent.ts";

export type Chances = Readonly<Record<string, number>>;
type At = Readonly<Record<string, number>>;

/** A figure of the README: what is measured, what it should be, and who says so. */
export type Figure = {
  /** A measure as `require` writes it. */
  readonly measure: string;
  readonly value: number;
  /** How the README prints it. */
  readonly printed: string;
  /** Largest difference that is allowed; one unit of the last digit for a printed table. */
  readonly within: number;
  readonly source: string;
};

export type Example = {
  readonly folder: string;
  readonly policy: string;
  readonly chances: (process: string, at: At) => Chances;
  // The state of each chain is its own affair.
  readonly walks: Readonly<Record<string, Walk<never>>>;
  readonly figures: readonly Figure[];
};

export const chain = <S>(walk: Walk<S>): Walk<never> => walk as unknown as Walk<never>;

/** A figure known exactly, printed to some significant digits. */
export function exact(measure: string, value: number, source: string, digits = 6): Figure {
  return { measure, value, printed: plain(value, digits), within: Math.abs(value) * 1e-9, source };
}

/** A figure read from a printed table. */
export function table(measure: string, printed: string, source: string): Figure {
  const decimals = printed.split(".")[1]?.length ?? 0;
  return { measure, value: Number(printed), printed, within: 10 ** -decimals * 1.000001, source };
}

function plain(value: number, digits: number): string {
  const text = value.toPrecision(digits);
  return text.includes("e") && value >= 1 && value < 1e15 ? String(Math.round(value)) : text;
}

// What of the past a condition needs, a letter at a time.

/** A weak run: successes so far, and failures since the last. */
export type Weak = readonly [successes: number, failures: number];
export const none: Weak = [0, 0];

export function weak([successes, failures]: Weak, gap: number, is: "success" | "failure" | "other"): Weak {
  if (is === "success") return [successes + 1, 0];
  if (is === "failure" && successes > 0 && failures < gap) return [successes, failures + 1];
  return none;
}

export function told(letter: string, success: string, failure: string): "success" | "failure" | "other" {
  return letter === success ? "success" : letter === failure ? "failure" : "other";
}

export function move<S>(to: S, raised: readonly (string | false)[]): Move<S> {
  const rules = raised.filter((rule) => rule !== false);
  return rules.length > 0 ? { raised: rules } : { to };
}

/** The value of a fraction "n/d". */
export function asNumber(fraction: string): number {
  const [n, d] = fraction.split("/").map(Number);
  return n! / (d ?? 1);
}

/** Mean number of trials to the first run of k successes. */
export const run = (k: number, p: number): number => (1 - p ** k) / ((1 - p) * p ** k);

export const feller = "Feller, An Introduction to Probability Theory and Its Applications, vol. 1 (1968)";
export const byHand = (folder: string): string =>
  `the chain written by hand in \`test/examples/scenarios/${folder}.ts\``;
export const withTail = "with Φ from Abramowitz & Stegun (1964), Handbook of Mathematical Functions, 26.2.11";

/** Chances of intervals from the tails at their cuts, lowest letter first. */
export function between(letters: readonly string[], tails: readonly number[]): Record<string, number> {
  const edges = [1, ...tails, 0];
  return Object.fromEntries(letters.map((letter, i) => [letter, edges[i]! - edges[i + 1]!]));
}

/** Chances of intervals of a standard normal value between cuts, each from the tail that is the smaller. */
export function normalBetween(letters: readonly string[], cuts: readonly number[]): Record<string, number> {
  const edges = [-40, ...cuts, 40];
  const chance = (a: number, b: number): number =>
    a >= 0 ? normalTail(a) - normalTail(b) : normalTail(-b) - normalTail(-a);
  return Object.fromEntries(letters.map((letter, i) => [letter, chance(edges[i]!, edges[i + 1]!)]));
}

/** Two alphabets, independent: the trial (a, b) is called "a,b". */
export function product(a: Chances, b: Chances): Record<string, number> {
  return Object.fromEntries(
    Object.entries(a).flatMap(([x, p]) => Object.entries(b).map(([y, q]) => [`${x},${y}`, p * q])),
  );
}
