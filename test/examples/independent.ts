/**
 * Tail probabilities and run lengths worked out without the project: the witness that the figures of the examples are
 * compared with. Nothing of grammar/, compiler/ or runtime/ is imported.
 *
 * Tails are sums of 64-digit numbers (mathjs BigNumber), so that nothing is lost to subtraction. Run lengths come from a
 * chain whose moves are written out by hand (`scenarios/`): mean and standard deviation by elimination without subtraction, or in exact fractions
 * by mathjs's `lusolve`; the distribution by stepping the chain forward. Slow, plain, and good to about 1e-11.
 */
import { all, type BigNumber, create, type Fraction, type MathNumericType } from "mathjs";

const math = create(all!, { number: "BigNumber", precision: 64 });
const big = (value: number | string): BigNumber => math.bignumber(value);

/** P(Z > z) for a standard normal Z: 1/2 minus the density times Σ z^(2n+1) / (1·3·5…(2n+1)) (Abramowitz & Stegun 26.2.11). */
export function normalTail(z: number): number {
  const x = big(z);
  let term = x;
  let sum = x;
  for (let n = 1; term.abs().gt("1e-70"); n++) {
    term = term
      .times(x)
      .times(x)
      .div(2 * n + 1);
    sum = sum.plus(term);
  }
  const pi = big(-1).acos();
  const density = x.times(x).div(-2).exp().div(pi.times(2).sqrt());
  return big(0.5).minus(density.times(sum)).toNumber();
}

/** P(X > k) for a Poisson X, one minus the terms up to k. */
export function poissonTail(mean: number, k: number): number {
  let term = big(-mean).exp();
  let sum = term;
  for (let n = 1; n <= k; n++) {
    term = term.times(mean).div(n);
    sum = sum.plus(term);
  }
  return big(1).minus(sum).toNumber();
}

/** P(X > x) for a gamma X of whole shape: the chance of fewer than `shape` events by x (Erlang). */
export function erlangTail(shape: number, scale: number, x: number): number {
  return erlang(shape, big(x).div(scale)).toNumber();
}

function erlang(shape: number, x: BigNumber): BigNumber {
  let term = x.neg().exp();
  let sum = term;
  for (let n = 1; n < shape; n++) {
    term = term.times(x).div(n);
    sum = sum.plus(term);
  }
  return sum;
}

/** P(X > x) for chi-square with an even number of degrees of freedom and a noncentrality: a Poisson mixture of Erlang tails. */
export function chiSquareTail(evenDf: number, x: number, noncentrality = 0): number {
  const half = big(noncentrality).div(2);
  let weight = half.neg().exp();
  let sum = big(0);
  for (let j = 0; weight.gt("1e-30"); j++) {
    sum = sum.plus(weight.times(erlang(evenDf / 2 + j, big(x).div(2))));
    weight = weight.times(half).div(j + 1);
  }
  return sum.toNumber();
}

/** The x that a chi-square value exceeds with the given probability, by bisection. */
export function chiSquareUpper(evenDf: number, probability: number): number {
  let [low, high] = [0, 400];
  for (let i = 0; i < 60; i++) {
    const middle = (low + high) / 2;
    if (chiSquareTail(evenDf, middle) > probability) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}

/** What a chain does on a letter: it moves on, or it signals (and names the rules that made it). */
export type Move<S> = { readonly to: S } | { readonly raised: readonly string[] };

/** A chain written by hand, for the first time one signal is raised. */
export type Walk<S> = { readonly start: S; readonly step: (state: S, letter: string) => Move<S> };

type Moves = readonly {
  readonly letter: string;
  readonly to: number | null;
  readonly raised: readonly string[];
}[];

/** All states that can be reached, the start first, and where each letter leads from each. */
function explore<S>(walk: Walk<S>, letters: readonly string[]): readonly Moves[] {
  const numbers = new Map([[JSON.stringify(walk.start), 0]]);
  const states = [walk.start];
  const rows: Moves[] = [];
  for (let at = 0; at < states.length; at++) {
    rows.push(
      letters.map((letter) => {
        const move = walk.step(states[at]!, letter);
        if ("raised" in move) return { letter, to: null, raised: move.raised };
        const key = JSON.stringify(move.to);
        if (!numbers.has(key)) {
          numbers.set(key, states.length);
          states.push(move.to);
        }
        return { letter, to: numbers.get(key)!, raised: [] };
      }),
    );
  }
  return rows;
}

export type Law = {
  readonly arl: number;
  readonly sdrl: number;
  /** P(T ≤ n). */
  readonly signalled: (n: number) => number;
  /** The smallest n with P(T ≤ n) ≥ q. */
  readonly quantile: (q: number) => number;
  /** For each rule the chance that it is one of those that make the first signal. */
  readonly first: Readonly<Record<string, number>>;
};

const laws = new WeakMap<Walk<never>, Map<string, Law>>();

/** The law of the run length of a chain whose letters are drawn independently with the given chances. Worked out once. */
export function law<S>(walk: Walk<S>, chances: Readonly<Record<string, number>>): Law {
  const known = laws.get(walk as unknown as Walk<never>) ?? new Map<string, Law>();
  laws.set(walk as unknown as Walk<never>, known);
  const key = JSON.stringify(chances);
  const found = known.get(key) ?? workOut(walk, chances);
  known.set(key, found);
  return found;
}

/** The chances of moving from state to state, and of signalling from each. */
function chainOf(rows: readonly Moves[], chances: Readonly<Record<string, number>>) {
  const matrix = rows.map((moves) => {
    const row: number[] = rows.map(() => 0);
    for (const { letter, to } of moves) if (to !== null) row[to]! += chances[letter]!;
    return row;
  });
  const exits = rows.map((moves) =>
    moves.reduce((sum, { letter, to }) => sum + (to === null ? chances[letter]! : 0), 0),
  );
  return { matrix, exits };
}

/** The mean run length from each state. */
function meansOf(rows: readonly Moves[], chances: Readonly<Record<string, number>>): readonly number[] {
  const { matrix, exits } = chainOf(rows, chances);
  return solve(matrix, exits, [rows.map(() => 1)])[0]!;
}

function workOut<S>(walk: Walk<S>, chances: Readonly<Record<string, number>>): Law {
  const rows = explore(walk, Object.keys(chances));
  const { matrix, exits } = chainOf(rows, chances);
  const means = meansOf(rows, chances);
  const later = rows.map((moves) =>
    moves.reduce((sum, { letter, to }) => sum + (to === null ? 0 : chances[letter]! * means[to]!), 0),
  );
  const rules = [...new Set(rows.flatMap((moves) => moves.flatMap(({ raised }) => raised)))];
  const attributed = rules.map((rule) =>
    rows.map((moves) =>
      moves.reduce((sum, { letter, raised }) => sum + (raised.includes(rule) ? chances[letter]! : 0), 0),
    ),
  );
  const [squares, ...first] = solve(matrix, exits, [later.map((value) => 1 + 2 * value), ...attributed]);
  const arl = means[0]!;
  return {
    arl,
    sdrl: Math.sqrt(squares![0]! - arl * arl),
    first: Object.fromEntries(rules.map((rule, i) => [rule, first[i]![0]!])),
    ...distribution(rows, chances),
  };
}

/**
 * The mean run length under `after` from the long-run state under `before`, given that the signal has not been raised: the law of
 * the states is stepped under `before` and scaled up to 1 until it no longer changes.
 */
export function settledArl<S>(
  walk: Walk<S>,
  before: Readonly<Record<string, number>>,
  after: Readonly<Record<string, number>>,
): number {
  const rows = explore(walk, Object.keys(before));
  const means = meansOf(rows, after);
  let places: number[] = rows.map((_, i) => (i === 0 ? 1 : 0));
  for (let n = 0; n < 5000; n++) {
    const next: number[] = rows.map(() => 0);
    rows.forEach((moves, i) => {
      for (const { letter, to } of moves) if (to !== null) next[to]! += places[i]! * before[letter]!;
    });
    const left = next.reduce((sum, place) => sum + place, 0);
    places = next.map((place) => place / left);
  }
  return places.reduce((sum, place, i) => sum + place * means[i]!, 0);
}

/** Steps the chain forward; beyond `longest` trials the hazard has long settled and the rest is geometric. */
function distribution(rows: readonly Moves[], chances: Readonly<Record<string, number>>) {
  const longest = 20_000;
  const last = 1_600;
  let places: number[] = rows.map((_, i) => (i === 0 ? 1 : 0));
  const reached = [0];
  const left = [1];
  const stepOn = (): void => {
    const next: number[] = rows.map(() => 0);
    let signalled = 0;
    rows.forEach((moves, i) => {
      for (const { letter, to } of moves) {
        if (to === null) signalled += places[i]! * chances[letter]!;
        else next[to]! += places[i]! * chances[letter]!;
      }
    });
    places = next;
    reached.push(reached.at(-1)! + signalled);
    left.push(places.reduce((sum, place) => sum + place, 0));
  };
  const hazard = (): number => {
    while (reached.length <= longest) stepOn();
    const [before, after] = [reached[longest - last]!, reached[longest]!];
    return -Math.log1p(-(after - before) / left[longest - last]!) / last;
  };
  const signalled = (n: number): number => {
    if (n > longest) return 1 - left[longest]! * Math.exp(-hazard() * (n - longest));
    while (reached.length <= n) stepOn();
    return reached[n]!;
  };
  const quantile = (q: number): number => {
    while (reached.at(-1)! < q && reached.length <= longest) stepOn();
    const n = reached.findIndex((value) => value >= q);
    return n >= 0 ? n : longest + Math.ceil(Math.log(left[longest]! / (1 - q)) / hazard());
  };
  return { signalled, quantile };
}

/**
 * Solves x = b + Q x for each b, from the start's row on, without a subtraction: a state is taken out by sharing its moves among
 * those that lead to it (Grassmann, Taksar & Heyman 1985, Operations Research 33:1107–1116).
 */
function solve(
  moves: readonly (readonly number[])[],
  exits: readonly number[],
  rights: readonly (readonly number[])[],
): number[][] {
  const n = moves.length;
  const rows = moves.map((row, i) => [...row, exits[i]!, ...rights.map((right) => right[i]!)]);
  const leaving = (k: number): number =>
    rows[k]!.reduce((sum, p, j) => (j < k || j === n ? sum + p : sum), 0);
  for (let k = n - 1; k > 0; k--) {
    const leave = leaving(k);
    for (let i = 0; i < k; i++) {
      const share = rows[i]![k]! / leave;
      if (share === 0) continue;
      for (let j = 0; j < rows[i]!.length; j++) if (j < k || j >= n) rows[i]![j]! += share * rows[k]![j]!;
    }
  }
  return rights.map((_, r) => {
    const x: number[] = [];
    for (let k = 0; k < n; k++) {
      const known = x.reduce((sum, value, j) => sum + rows[k]![j]! * value, rows[k]![n + 1 + r]!);
      x.push(known / leaving(k));
    }
    return x;
  });
}

/** The mean run length as an exact fraction "n/d", from chances written as fractions, by mathjs's dense solver. */
export function exactArl<S>(walk: Walk<S>, chances: Readonly<Record<string, string>>): string {
  const zero = math.fraction(0);
  const one = math.fraction(1);
  const rows = explore(walk, Object.keys(chances));
  const matrix: Fraction[][] = rows.map((moves, i) => {
    const row = rows.map((_, j) => (i === j ? one : zero));
    for (const { letter, to } of moves)
      if (to !== null) row[to] = math.subtract(row[to]!, math.fraction(chances[letter]!)) as Fraction;
    return row;
  });
  const solution = math.lusolve(matrix as MathNumericType[][], rows.map(() => one) as MathNumericType[]);
  const [value] = (solution as unknown as Fraction[][])[0]!;
  return value!.toFraction();
}
