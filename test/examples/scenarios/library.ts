/** Grinding: the four zone tests, each side with a memory of its own. */
import { chain, type Example, move, normalBetween, table } from "../example.ts";

export function shaftDiameter(): Example {
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
