/**
 * What each example should come to, worked out without the project: the chances of the letters, the chain of every signal
 * written by hand, and the closed forms and printed tables that some of the figures are known from.
 *
 * `examples.test.ts` compares every row of `assess --json` with the chains, the listed figures with their own expression,
 * and the table "Where the figures were checked" of each README with the list.
 */
import {
  chiSquareTail,
  chiSquareUpper,
  erlangTail,
  exactArl,
  law,
  type Move,
  normalTail,
  poissonTail,
  type Walk,
} from "./independent.ts";

type Chances = Readonly<Record<string, number>>;
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

const chain = <S>(walk: Walk<S>): Walk<never> => walk as unknown as Walk<never>;

/** A figure known exactly, printed to some significant digits. */
function exact(measure: string, value: number, source: string, digits = 6): Figure {
  return { measure, value, printed: plain(value, digits), within: Math.abs(value) * 1e-10, source };
}

/** A figure read from a printed table. */
function table(measure: string, printed: string, source: string): Figure {
  const decimals = printed.split(".")[1]?.length ?? 0;
  return { measure, value: Number(printed), printed, within: 10 ** -decimals * 1.000001, source };
}

function plain(value: number, digits: number): string {
  const text = value.toPrecision(digits);
  return text.includes("e") && value >= 1 && value < 1e15 ? String(Math.round(value)) : text;
}

// What of the past a condition needs, a letter at a time.

/** A weak run: successes so far, and failures since the last. */
type Weak = readonly [successes: number, failures: number];
const none: Weak = [0, 0];

function weak([successes, failures]: Weak, gap: number, is: "success" | "failure" | "other"): Weak {
  if (is === "success") return [successes + 1, 0];
  if (is === "failure" && successes > 0 && failures < gap) return [successes, failures + 1];
  return none;
}

function told(letter: string, success: string, failure: string): "success" | "failure" | "other" {
  return letter === success ? "success" : letter === failure ? "failure" : "other";
}

function move<S>(to: S, raised: readonly (string | false)[]): Move<S> {
  const rules = raised.filter((rule) => rule !== false);
  return rules.length > 0 ? { raised: rules } : { to };
}

/** The value of a fraction "n/d". */
function asNumber(fraction: string): number {
  const [n, d] = fraction.split("/").map(Number);
  return n! / (d ?? 1);
}

/** Mean number of trials to the first run of k successes. */
const run = (k: number, p: number): number => (1 - p ** k) / ((1 - p) * p ** k);

const feller = "Feller, An Introduction to Probability Theory and Its Applications, vol. 1 (1968)";
const byHand = "the chain written by hand in `test/examples/figures.ts`";
const withTail = "with Φ from Abramowitz & Stegun (1964), Handbook of Mathematical Functions, 26.2.11";

/** Chances of intervals from the tails at their cuts, lowest letter first. */
function between(letters: readonly string[], tails: readonly number[]): Record<string, number> {
  const edges = [1, ...tails, 0];
  return Object.fromEntries(letters.map((letter, i) => [letter, edges[i]! - edges[i + 1]!]));
}

/** Chances of intervals of a standard normal value between cuts, each from the tail that is the smaller. */
function normalBetween(letters: readonly string[], cuts: readonly number[]): Record<string, number> {
  const edges = [-40, ...cuts, 40];
  const chance = (a: number, b: number): number =>
    a >= 0 ? normalTail(a) - normalTail(b) : normalTail(-b) - normalTail(-a);
  return Object.fromEntries(letters.map((letter, i) => [letter, chance(edges[i]!, edges[i + 1]!)]));
}

/** Two alphabets, independent: the trial (a, b) is called "a,b". */
function product(a: Chances, b: Chances): Record<string, number> {
  return Object.fromEntries(
    Object.entries(a).flatMap(([x, p]) => Object.entries(b).map(([y, q]) => [`${x},${y}`, p * q])),
  );
}

// Bottling

function fillWeight(): Example {
  const chances = (delta: number): Chances => {
    const [low, high] = [normalTail(1.62 + delta), normalTail(1.62 - delta)];
    return { low, mid: 1 - low - high, high };
  };
  type State = { heavy: Weak; light: Weak; swing: number };
  const start: State = { heavy: none, light: none, swing: 0 };
  const swings: Record<string, readonly number[]> = {
    high: [1, 1, 3, 1],
    low: [0, 2, 0, 4],
    mid: [0, 0, 0, 0],
  };
  const step = (state: State, letter: string): State => ({
    heavy: weak(state.heavy, 1, told(letter, "high", "mid")),
    light: weak(state.light, 1, told(letter, "low", "mid")),
    swing: swings[letter]![state.swing]!,
  });
  const rules = (state: State) => {
    const stop = [state.heavy[0] === 3 && "heavy", state.light[0] === 2 && "light"] as const;
    return { stop, look: [state.swing === 4 && "swing"] as const };
  };
  const walk = (signals: "stop" | "look" | "any"): Walk<never> =>
    chain<State>({
      start,
      step: (state, letter) => {
        const next = step(state, letter);
        const { stop, look } = rules(next);
        if (signals === "look" && stop.some(Boolean) && !look[0]) return { to: start };
        const raised = move(next, signals === "stop" ? stop : signals === "look" ? look : [...stop, ...look]);
        return "to" in raised && signals === "stop" ? { to: { ...next, swing: 0 } } : raised;
      },
    });
  const stop = walk("stop");
  return {
    folder: "fill-weight",
    policy: "fill_weight.tocsin",
    chances: (process, at) => chances(process === "steady" ? 0 : at.delta!),
    walks: { stop, look: walk("look"), any: walk("any") },
    figures: [
      exact("arl(stop, steady)", law(stop, chances(0)).arl, `${byHand}, ${withTail}`),
      exact("arl(stop, shifted(1.5))", law(stop, chances(1.5)).arl, `${byHand}, ${withTail}`),
    ],
  };
}

// A rolling mill

function stripGauge(): Example {
  const d = 1.866351;
  const chances = (shift: number): Chances =>
    normalBetween(["thin", "under", "over", "thick"], [-d - shift, -shift, d - shift]);
  type State = { down: Weak; up: Weak };
  const start: State = { down: none, up: none };
  const step = (state: State, letter: string): State => ({
    down: weak(state.down, 1, told(letter, "thick", "over")),
    up: weak(state.up, 1, told(letter, "thin", "under")),
  });
  const walk = (signal: "screw_down" | "screw_up" | "any"): Walk<never> =>
    chain<State>({
      start,
      step: (state, letter) => {
        const next = step(state, letter);
        const down = next.down[0] === 2 && "too_thick";
        const up = next.up[0] === 2 && "too_thin";
        if (signal === "any") return move(next, [down, up]);
        const [own, other] = signal === "screw_down" ? [down, up] : [up, down];
        return move(other ? start : next, [own]);
      },
    });
  const any = walk("any");
  const p = normalTail(d);
  const c = 0.5 - p;
  const afterOne = (1 + c + (c * c) / p + c / (2 * p)) / (1 - p - c * (1 - p) - c);
  return {
    folder: "strip-gauge",
    policy: "strip_gauge.tocsin",
    chances: (process, at) => chances(process === "on_aim" ? 0 : at.shift!),
    walks: { screw_down: walk("screw_down"), screw_up: walk("screw_up"), any },
    figures: [
      exact("arl(any, on_aim)", afterOne + 1 / (2 * p), `the first-step equations solved above, ${withTail}`),
      exact("arl(any, drifted(1))", law(any, chances(1)).arl, `${byHand}, ${withTail}`),
    ],
  };
}

// Injection moulding

function mouldingShots(): Example {
  const [watch, scrap] = [chiSquareUpper(4, 0.1), chiSquareUpper(4, 0.005)];
  const hold: Walk<Weak> = {
    start: none,
    step: (state, letter) => {
      const next = weak(state, 1, letter === "near" ? "failure" : "success");
      return move(next, [next[0] === 3 && "drifting", letter === "far" && "jumped"]);
    },
  };
  const chances = (excess: number): Chances =>
    between(["near", "away", "far"], [chiSquareTail(4, watch, excess), chiSquareTail(4, scrap, excess)]);
  const exactly = exactArl(hold, { near: "9/10", away: "19/200", far: "1/200" });
  return {
    folder: "moulding-shots",
    policy: "moulding_shots.tocsin",
    chances: (process, at) =>
      process === "usual" ? between(["near", "away", "far"], [0.1, 0.005]) : chances(at.excess!),
    walks: { hold: chain(hold), any: chain(hold) },
    figures: [
      exact(
        "arl(hold, usual)",
        asNumber(exactly),
        `${exactly}, ${byHand}, solved in exact fractions by mathjs`,
      ),
      exact(
        "arl(hold, moved(8))",
        law(hold, chances(8)).arl,
        `${byHand}, with noncentral chi-square as a Poisson mixture: Johnson, Kotz & Balakrishnan (1995), Continuous Univariate Distributions, vol. 2, ch. 29`,
      ),
    ],
  };
}

// A hospital's sterile supply

function wetPacks(): Example {
  type State = { since: number; waiting: readonly number[]; usual: number };
  const start: State = { since: 0, waiting: [], usual: 0 };
  /** `since`: trials since the last many or excess, 0 for none in the last four; `waiting`: ages of surges not yet answered. */
  const step = (state: State, letter: string) => {
    const creep = letter !== "usual" && state.since > 0;
    const since = letter !== "usual" ? 1 : state.since === 0 || state.since === 4 ? 0 : state.since + 1;
    const usual = letter === "usual" ? state.usual + 1 : 0;
    const older = usual >= 2 ? [] : state.waiting.map((age) => age + 1);
    const next: State = {
      since,
      usual: usual % 2,
      waiting: [...older.filter((age) => age < 5), ...(letter === "excess" ? [0] : [])],
    };
    return { next, creep: creep && "creep", unanswered: older.includes(5) && "unanswered" } as const;
  };
  const chances = (mean: number): Chances =>
    between(["usual", "many", "excess"], [poissonTail(mean, 7), poissonTail(mean, 9)]);
  const review: Walk<State> = {
    start,
    step: (state, letter) => {
      const { next, creep } = step(state, letter);
      return move({ ...start, since: next.since }, [letter === "excess" && "surge", creep]);
    },
  };
  const escalate: Walk<State> = {
    start,
    step: (state, letter) => {
      const { next, unanswered } = step(state, letter);
      return move({ ...next, since: 0 }, [unanswered]);
    },
  };
  return {
    folder: "sterile-supply",
    policy: "wet_packs.tocsin",
    chances: (process, at) => chances(process === "usual_days" ? 4 : at.level!),
    walks: {
      review: chain(review),
      escalate: chain(escalate),
      any: chain<State>({
        start,
        step: (state, letter) => {
          const { next, creep, unanswered } = step(state, letter);
          return move(next, [letter === "excess" && "surge", creep, unanswered]);
        },
      }),
    },
    figures: [
      table(
        "signalled(review, usual_days, 1)",
        "0.00813",
        "1 − 0.99187, the cumulative Poisson distribution with mean 4 at 9 in the standard tables",
      ),
      exact(
        "arl(review, usual_days)",
        law(review, chances(4)).arl,
        `${byHand}, with the Poisson terms summed`,
      ),
      exact(
        "arl(escalate, usual_days)",
        law(escalate, chances(4)).arl,
        `${byHand}, with the Poisson terms summed`,
      ),
    ],
  };
}

// A weaving shed

function clothRolls(): Example {
  type State = { rejects: readonly boolean[]; fading: number };
  const start: State = { rejects: [], fading: 0 };
  const step = (state: State, letter: string) => {
    const fading = letter === "first" ? 1 : letter === "second" && state.fading === 1 ? 2 : 0;
    const faded = letter === "reject" && state.fading === 2;
    const pair = letter === "reject" && state.rejects.includes(true);
    const next: State = { rejects: [...state.rejects, letter === "reject"].slice(-2), fading };
    return { next, pair: pair && "pair", fading: faded && "fading" } as const;
  };
  const walk = (signal: string): Walk<State> => ({
    start,
    step: (state, letter) => {
      const { next, pair, fading } = step(state, letter);
      if (signal === "any") return move(next, [pair, fading]);
      return signal === "stop_loom"
        ? move({ ...next, fading: 0 }, [pair])
        : move({ ...next, rejects: [] }, [fading]);
    },
  });
  const usual = { first: "3/4", second: "3/20", reject: "1/10" };
  const either = exactArl(walk("any"), usual);
  return {
    folder: "cloth-inspection",
    policy: "cloth_rolls.tocsin",
    chances: (process, at) => {
      const reject = process === "usual" ? 0.1 : at.rejects!;
      return { first: 0.85 - reject, second: 0.15, reject };
    },
    walks: Object.fromEntries(
      ["stop_loom", "tell_weaver", "any"].map((signal) => [signal, chain(walk(signal))]),
    ),
    figures: [
      exact(
        "arl(stop_loom, usual)",
        1190 / 19,
        "1190/19, from (1/p)(1 + 1/(1 − q^(m−1))) with p = 1/10, m = 3: Greenberg (1970), The first occurrence of n successes in N trials, Technometrics 12:627–634",
      ),
      exact(
        "arl(tell_weaver, usual)",
        800 / 9,
        "800/9 = 1/(0.75 · 0.15 · 0.10), for a pattern that cannot overlap itself: Li (1980), A martingale approach to the study of occurrence of sequence patterns in repeated experiments, Annals of Probability 8:1171–1176",
      ),
      exact("arl(any, usual)", asNumber(either), `${either}, ${byHand}, solved in exact fractions by mathjs`),
    ],
  };
}

// A server room

function rackHeat(): Example {
  type State = { agreed: number; silent: number; heat: number; since: number };
  const start: State = { agreed: 0, silent: 0, heat: 0, since: 0 };
  /** `since`: trials since the last trial that ended two minutes of heat, 0 for none in the last three. */
  const step = (state: State, letter: string) => {
    const [front, back] = letter.split(",");
    const both = front === "warm" && back === "hot";
    const heat = front === "warm" || back === "hot" ? Math.min(2, state.heat + 1) : 0;
    const silent = front === "no_front" || back === "no_back";
    const next: State = {
      agreed: both ? state.agreed + 1 : 0,
      silent: silent ? state.silent + 1 : 0,
      heat,
      since: heat === 2 ? 1 : state.since === 0 || state.since === 3 ? 0 : state.since + 1,
    };
    return {
      next,
      agreed: next.agreed === 3 && "agreed",
      blind: next.silent === 4 && "blind",
      dying: silent && state.since > 0 && "dying",
    } as const;
  };
  const heated = (rise: number, noFront: number): Chances => {
    const [warm, hot] = [normalTail((3 - rise) / 1.5), normalTail((3 - rise) / 2)];
    const front = { cool: (1 - warm) * (1 - noFront), warm: warm * (1 - noFront), no_front: noFront };
    return product(front, { mild: (1 - hot) * 0.998, hot: hot * 0.998, no_back: 0.002 });
  };
  const both = (rise: number): number =>
    normalTail((3 - rise) / 1.5) * normalTail((3 - rise) / 2) * 0.998 ** 2;
  const source = (rise: string): string =>
    `(1 − p³)/(q p³) with p the chance of (warm, hot) ${rise}: ${feller}, XIII.7`;
  const sensor: Walk<State> = {
    start,
    step: (state, letter) => {
      const { next, blind, dying } = step(state, letter);
      return move({ ...next, agreed: 0 }, [blind, dying]);
    },
  };
  return {
    folder: "server-room",
    policy: "rack_heat.tocsin",
    chances: (process, at) =>
      process === "failing" ? heated(0, 0.6) : heated(process === "usual" ? 0 : at.rise!, 0.002),
    walks: {
      cooling: chain<State>({
        start,
        step: (state, letter) => {
          const { next, agreed } = step(state, letter);
          return move({ ...start, agreed: next.agreed }, [agreed]);
        },
      }),
      sensor: chain(sensor),
      any: chain<State>({
        start,
        step: (state, letter) => {
          const { next, agreed, blind, dying } = step(state, letter);
          return move(next, [agreed, blind, dying]);
        },
      }),
    },
    figures: [
      exact("arl(cooling, usual)", run(3, both(0)), source("on a usual day")),
      exact("arl(cooling, warmer(6))", run(3, both(6)), source("six degrees warmer")),
      exact("arl(sensor, usual)", law(sensor, heated(0, 0.002)).arl, `${byHand}, ${withTail}`),
      exact("arl(sensor, failing)", law(sensor, heated(0, 0.6)).arl, `${byHand}, ${withTail}`),
    ],
  };
}

// A bakery

function doughPieces(): Example {
  type State = { place: number; run: number; far: readonly boolean[] };
  const start: State = { place: 0, run: 0, far: [] };
  const step = (state: State, letter: string) => {
    const run = letter === "light" ? 0 : state.run + 1;
    const waste = letter === "far" && state.far.includes(true);
    const far = [...state.far, letter === "far"].slice(-3);
    const place = state.place + 1;
    const next: State = place === 16 ? start : { place, run, far: far.includes(true) ? far : [] };
    return { next, creep: run === 5 && "creep", waste: waste && "waste" } as const;
  };
  const look: Walk<State> = {
    start,
    step: (state, letter) => {
      const { next, creep } = step(state, letter);
      return move({ ...next, far: [] }, [creep]);
    },
  };
  const eachHalf = exactArl(look, { light: "1/2", heavy: "1/2" });
  return {
    folder: "bakery",
    policy: "dough_pieces.tocsin",
    chances: (process, at) => {
      const shift = process === "even" ? 0 : at.shift!;
      return normalBetween(["light", "heavy", "far"], [-shift, 2 - shift]);
    },
    walks: {
      look: chain(look),
      adjust: chain<State>({
        start,
        step: (state, letter) => {
          const { next, waste } = step(state, letter);
          return move({ ...next, run: 0 }, [waste]);
        },
      }),
      any: chain<State>({
        start,
        step: (state, letter) => {
          const { next, creep, waste } = step(state, letter);
          return move(next, [creep, waste]);
        },
      }),
    },
    figures: [
      exact(
        "signalled(look, even, 16)",
        12880 / 65536,
        "12880/65536, the words of 16 letters with a run of five or more among all: OEIS A050233, n = 16",
      ),
      exact("arl(look, even)", asNumber(eachHalf), `${byHand}, solved in exact fractions by mathjs`),
    ],
  };
}

// A water works

function filterTurbidity(): Example {
  type Act = { watching: boolean; count: number };
  type State = { pair: number; act: Act };
  const start: State = { pair: 0, act: { watching: true, count: 0 } };
  const quiet: State = { pair: 0, act: { watching: false, count: 0 } };
  const stepAct = (act: Act, letter: string): Act => {
    if (act.watching) return { watching: true, count: letter === "clean" ? 0 : act.count + 1 };
    if (letter !== "clean") return { watching: false, count: 0 };
    return act.count === 11 ? { watching: true, count: 0 } : { watching: false, count: act.count + 1 };
  };
  const step = (state: State, letter: string) => {
    const act = stepAct(state.act, letter);
    const pair = letter === "clean" ? 0 : state.pair + 1;
    const watching = state.act.watching;
    return {
      next: { pair, act },
      pair: pair === 2 && "pair",
      spike: watching && letter === "turbid" && "spike",
      lasting: watching && act.count === 4 && "lasting",
    } as const;
  };
  const chances = (level: number, spread: number): Chances => {
    const z = (cut: number): number => Math.log(cut / level) / spread;
    return normalBetween(["clean", "raised", "turbid"], [z(0.3), z(1)]);
  };
  const page = ({ raised, clean }: Chances): number =>
    (1 - raised! ** 4) / (1 - raised! - clean! * (1 - raised! ** 4));
  // The run that ends in `turbid` is a spike already, so only runs of `raised` count: Page's rule with k = 4.
  const source =
    "Page's warning-line rule, (1 − bᵏ)/(1 − b − a(1 − bᵏ)) with a = P(clean), b = P(raised), k = 4, derived above; the rule is Page (1955), Control charts with warning lines, Biometrika 42:243–257";
  return {
    folder: "waterworks",
    policy: "filter_turbidity.tocsin",
    chances: (process, at) => (process === "usual" ? chances(0.1, 0.5) : chances(at.level!, at.spread!)),
    walks: {
      warn: chain<State>({
        start,
        step: (state, letter) => {
          const { next, pair, spike, lasting } = step(state, letter);
          return move(spike || lasting ? quiet : next, [pair]);
        },
      }),
      act: chain<State>({
        start,
        step: (state, letter) => {
          const { next, spike, lasting } = step(state, letter);
          return move({ ...next, pair: 0 }, [spike, lasting]);
        },
      }),
      any: chain<State>({
        start,
        step: (state, letter) => {
          const { next, pair, spike, lasting } = step(state, letter);
          return move(next, [pair, spike, lasting]);
        },
      }),
    },
    figures: [
      exact("arl(act, usual)", page(chances(0.1, 0.5)), source),
      exact("arl(act, storm(0.4, 0.5))", page(chances(0.4, 0.5)), source),
    ],
  };
}

// A pump house

function pumpVibration(): Example {
  type State = { severe: number; bursts: number; loud: number };
  const start: State = { severe: 0, bursts: 0, loud: 0 };
  const step = (state: State, letter: string) => {
    const severe = letter === "severe" ? state.severe + 1 : 0;
    const loud = letter === "calm" ? 0 : state.loud + 1;
    const next: State =
      loud === 2 ? { severe, bursts: state.bursts + 1, loud: 0 } : { ...state, severe, loud };
    return { next, jolt: severe === 2 && "jolt", bursts: next.bursts === 3 && "bursts" } as const;
  };
  const [loud, severe] = [erlangTail(2, 1, 4.5), erlangTail(2, 1, 11)];
  const worn = erlangTail(2, 3, 11);
  const renewal = `the renewal theorem, ${feller}, XIII.3`;
  return {
    folder: "pump-vibration",
    policy: "pump_vibration.tocsin",
    chances: (process, at) => {
      const wear = process === "running" ? 1 : at.wear!;
      return between(["calm", "rough", "severe"], [erlangTail(2, wear, 4.5), erlangTail(2, wear, 11)]);
    },
    walks: {
      trip: chain<State>({
        start,
        step: (state, letter) => {
          const { next, jolt } = step(state, letter);
          return move({ ...start, severe: next.severe }, [jolt]);
        },
      }),
      inspect: chain<State>({
        start,
        step: (state, letter) => {
          const { next, bursts } = step(state, letter);
          return move({ ...next, severe: 0 }, [bursts]);
        },
      }),
      any: chain<State>({
        start,
        step: (state, letter) => {
          const { next, jolt, bursts } = step(state, letter);
          return move(next, [jolt, bursts]);
        },
      }),
    },
    figures: [
      exact("arl(trip, running)", run(2, severe), `(1 + p)/p² with p = P(severe): ${feller}, XIII.7`),
      exact("arl(inspect, running)", 3 * run(2, loud), `3(1 + p)/p² with p = P(loud): ${feller}, XIII.7`),
      exact(
        "rate(trip, worn(3))",
        1 / (run(2, worn) + 60),
        `1 over the mean wait for a trip plus the 60 quiet trials: ${renewal}`,
      ),
      exact(
        "rate(inspect, running)",
        1 / (3 * run(2, loud) + run(20, 1 - loud)),
        `1 over the mean wait for three bursts plus that for 20 calm seconds: ${renewal}`,
      ),
    ],
  };
}

// A dairy

function milkFat(): Example {
  type State = { rich: Weak; lean: Weak };
  const start: State = { rich: none, lean: none };
  const chances = (shift: number): Chances => {
    const fat = normalBetween(["lean", "in_band", "rich"], [-1.5 - shift, 1.5 - shift]);
    return product(fat, { run: 0.97, adjust: 0.02, wash: 0.01 });
  };
  const walk: Walk<State> = {
    start,
    step: (before, trial) => {
      const [letter, event] = trial.split(",");
      const state = event === "adjust" ? start : before;
      const next: State = {
        rich: weak(state.rich, 1, told(letter!, "rich", "in_band")),
        lean: weak(state.lean, 1, told(letter!, "lean", "in_band")),
      };
      const raised = [next.rich[0] === 3 && "too_rich", next.lean[0] === 3 && "too_lean"];
      return move(event === "wash" ? start : next, raised);
    },
  };
  return {
    folder: "dairy",
    policy: "milk_fat.tocsin",
    chances: (process, at) => chances(process === "steady" ? 0 : at.shift!),
    walks: { standardise: chain(walk), any: chain(walk) },
    figures: [
      exact("arl(standardise, steady)", law(walk, chances(0)).arl, `${byHand}, ${withTail}`),
      exact("arl(standardise, creamy(2))", law(walk, chances(2)).arl, `${byHand}, ${withTail}`),
    ],
  };
}

// Grinding, with the zone tests

function shaftDiameter(): Example {
  type Side = { a: number; b: readonly boolean[]; c: number };
  type State = { high: Side; low: Side };
  const clear: Side = { a: 0, b: [], c: 0 };
  const start: State = { high: clear, low: clear };
  const zones: Record<string, number> = { c: 1, b: 2, a: 3, out: 4 };
  /** `a`: trials since the last point in zone A; `b`: the last four, whether in zone B or beyond; `c`: the run on this side. */
  const step = (side: Side, zone: number) => {
    const b = [...side.b, zone >= 2];
    const rules = [
      zone === 4 && "test_1",
      zone >= 3 && side.a > 0 && "test_2",
      zone >= 2 && b.filter(Boolean).length >= 4 && "test_3",
      zone >= 1 && side.c === 7 && "test_4",
    ];
    const kept = b.slice(-4);
    while (kept[0] === false) kept.shift();
    const next: Side = {
      a: zone >= 3 ? 1 : side.a === 1 ? 2 : 0,
      b: kept,
      c: zone >= 1 ? Math.min(7, side.c + 1) : 0,
    };
    return { next, rules };
  };
  const walk = chain<State>({
    start,
    step: (state, letter) => {
      const [name, side] = letter.split("_");
      const high = step(state.high, side === "high" ? zones[name!]! : 0);
      const low = step(state.low, side === "low" ? zones[name!]! : 0);
      return move({ high: high.next, low: low.next }, [...new Set([...high.rules, ...low.rules])]);
    },
  });
  const letters = ["out_low", "a_low", "b_low", "c_low", "c_high", "b_high", "a_high", "out_high"];
  const source =
    "Champ & Woodall (1987), Exact results for Shewhart control charts with supplementary runs rules, Technometrics 29:393–399, Table 1, all four tests";
  const printed = [
    ["0", "91.75"],
    ["0.4", "36.61"],
    ["0.8", "13.25"],
    ["1", "9.22"],
    ["1.4", "5.42"],
    ["2", "3.13"],
    ["3", "1.67"],
  ] as const;
  return {
    folder: "library",
    policy: "shaft_diameter.tocsin",
    chances: (process, at) => {
      const shift = process === "steady" ? 0 : at.shift!;
      return normalBetween(
        letters,
        [-3, -2, -1, 0, 1, 2, 3].map((z) => z - shift),
      );
    },
    walks: { dress_wheel: walk, any: walk },
    figures: printed.map(([shift, arl]) => table(`arl(dress_wheel, shifted(${shift}))`, arl, source)),
  };
}

export const examples: readonly Example[] = [
  fillWeight(),
  stripGauge(),
  mouldingShots(),
  wetPacks(),
  clothRolls(),
  rackHeat(),
  doughPieces(),
  filterTurbidity(),
  pumpVibration(),
  milkFat(),
  shaftDiameter(),
];
