// `tocsin assess`: the tables for people and the JSON for programs, held against what is known of two heads in a row.

import { describe, expect, test } from "vitest";
import { COIN, OVEN, placeWith } from "./command.ts";

/** Raised only where two heads come before any tails: with a chance of a quarter. */
const UNSURE = `policy coin "Two heads at once"

letters toss: heads, tails

signal at_once when 2 heads and not (tails then 2 heads)
signal pair    when 2 heads

process fair: toss ~ {heads 0.5, tails 0.5}
`;
const TWO = `policy two "Two statistics"

zones   heat: low < 0 <= high
letters door: open, shut

signal hot  when 2 (high)
signal door_open when open

cadence 1 h

process steady: heat ~ normal(-2, 1), door ~ {open 1%, shut 99%}
`.replace("2 (high)", "2 high");
const { tocsin, write } = placeWith({
  "coin.tocsin": COIN,
  "oven.tocsin": OVEN,
  "unsure.tocsin": UNSURE,
  "two.tocsin": TWO,
});

type Row = {
  readonly signal: string;
  readonly process: string;
  readonly at: Readonly<Record<string, number>>;
  readonly after: string | null;
  readonly arl: number | null;
};

function assess(file: string, ...options: string[]) {
  const { status, stdout, stderr } = tocsin(["assess", file, "--json", ...options]);
  expect({ status, stderr }).toEqual({ status: 0, stderr: "" });
  return JSON.parse(stdout) as { readonly runs: readonly Row[] };
}

/** Which rows there are, as `signal process(values)`. */
function rowsOf({ runs }: { readonly runs: readonly Row[] }): string[] {
  return runs.map(({ signal, process, at }) => `${signal} ${process}(${Object.values(at).join(", ")})`);
}

describe("--json", () => {
  const near = (value: number) => expect.closeTo(value, 9);
  const row = {
    process: "fair",
    at: {},
    after: null,
    arl: near(6),
    reason: null,
    ever: 1,
    relativeErrorBound: expect.any(Number),
    sdrl: near(Math.sqrt(22)),
    mrl: 4,
    quantiles: { "0.05": 2, "0.25": 2, "0.5": 4, "0.75": 8, "0.95": 15 },
    signalled: { "10": near(1 - 144 / 1024), "100": near(1 - 9.27372692193079e20 / 2 ** 100) },
    rate: near(1 / 6),
    first: { "2 heads": 1 },
  };

  test("one object, and a row for every signal and for any, each process, each value", () => {
    const found = assess("coin.tocsin");
    const { runs, ...head } = found as unknown as Record<string, unknown> & {
      runs: Record<string, unknown>[];
    };
    expect(head).toEqual({
      policy: "coin",
      title: "Two heads",
      states: 2,
      signals: ["pair"],
      cadence: null,
      letters: [
        { process: "fair", at: {}, letters: { toss: { heads: 0.5, tails: 0.5 } } },
        { process: "bent", at: { p: 0.25 }, letters: { toss: { heads: 0.25, tails: 0.75 } } },
        { process: "bent", at: { p: 0.75 }, letters: { toss: { heads: 0.75, tails: 0.25 } } },
      ],
    });
    expect(rowsOf(found)).toEqual(
      ["fair()", "bent(0.25)", "bent(0.75)"].flatMap((process) => [`pair ${process}`, `any ${process}`]),
    );
    expect(runs[0]).toEqual({ signal: "pair", ...row });
    expect(runs[1]).toEqual({ signal: "any", ...row });
    expect(found.runs[2]?.arl).toBeCloseTo((1 + 0.25) / 0.25 ** 2, 9);
    expect(found.runs[0]).toHaveProperty(
      "relativeErrorBound",
      expect.toSatisfy((bound: number) => bound > 0 && bound <= 1e-12),
    );
  });

  test("a signal that is not certain has no mean, why not, and the chance that it ever is raised", () => {
    const { runs } = assess("unsure.tocsin");
    expect(runs[0]).toMatchObject({
      signal: "at_once",
      arl: null,
      reason: "it is not certain to be raised: with chance 0.25 it ever is",
      ever: near(0.25),
      relativeErrorBound: null,
      sdrl: null,
      mrl: null,
      quantiles: {
        "0.05": 2,
        "0.25": expect.toSatisfy((n) => n === 2 || n === null),
        "0.5": null,
        "0.95": null,
      },
      signalled: { "10": near(0.25) },
      rate: 0,
    });
    expect(runs[1]).toMatchObject({ signal: "pair", arl: near(6), reason: null, ever: 1 });
  });

  test("several statistics, and a cadence", () => {
    expect(assess("two.tocsin")).toMatchObject({
      cadence: { text: "1 h", seconds: 3600 },
      letters: [
        {
          process: "steady",
          at: {},
          letters: {
            heat: { low: expect.closeTo(0.977249868051821, 12), high: expect.closeTo(0.022750131948179, 14) },
            door: { open: 0.01, shut: 0.99 },
          },
        },
      ],
      runs: [{ signal: "hot" }, { signal: "door_open", arl: near(100) }, { signal: "any" }],
    });
  });
});

describe("what is asked for", () => {
  test.each<[string[], string[]]>([
    [
      ["--process", "shifted(1.5)"],
      ["act shifted(1.5)", "look shifted(1.5)", "any shifted(1.5)"],
    ],
    [["--signal", "act", "--process", "steady"], ["act steady()"]],
    [
      ["--signal", "any", "--signal", "look", "--process", "steady"],
      ["any steady()", "look steady()"],
    ],
    [
      ["--signal", "act", "--process", "shifted"],
      ["act shifted(1)", "act shifted(1.5)", "act shifted(2)"],
    ],
    [
      ["--signal", "act", "--process", "shifted(0.1)", "--process", "steady"],
      ["act shifted(0.1)", "act steady()"],
    ],
    [["--signal", "act", "--process", "shifted(mu/200)"], ["act shifted(0.5)"]],
  ])("%j", (options, rows) => {
    expect(rowsOf(assess("oven.tocsin", ...options))).toEqual(rows);
  });

  test("--after begins in the long-run state, and says so", () => {
    const options = ["--process", "shifted(1.5)", "--signal", "act"];
    const [[fresh], [later]] = [
      assess("oven.tocsin", ...options),
      assess("oven.tocsin", ...options, "--after", "steady"),
    ].map(({ runs }) => runs) as [Row[], Row[]];
    expect(fresh).toMatchObject({ after: null, first: { weak: 1 } });
    expect(later).toMatchObject({ after: "steady", first: { weak: 1 } });
    expect(later?.arl).toBeLessThan(fresh?.arl ?? 0);
    expect(tocsin(["assess", "oven.tocsin", ...options, "--after", "steady"]).stdout).toContain(
      "Signal act, from the long-run state under steady: trials until it is raised",
    );
  });

  test("--by adds numbers of trials, --let another value", () => {
    const { runs } = assess("coin.tocsin", "--by", "2, 50", "--process", "fair", "--signal", "pair");
    expect(Object.keys((runs[0] as unknown as { signalled: object }).signalled)).toEqual([
      "2",
      "10",
      "50",
      "100",
    ]);
    const [loose, tight] = ["1.5", "2"].map(
      (d) => assess("oven.tocsin", "--let", `d=${d}`).runs[0]?.arl ?? 0,
    );
    expect(loose).toBeLessThan(tight ?? 0);
  });

  test("- is standard input", () => {
    const { stdout } = tocsin(["assess", "-", "--json", "--signal", "pair"], COIN);
    expect(JSON.parse(stdout)).toMatchObject({ policy: "coin" });
  });
});

describe("tables", () => {
  test("of one signal", () => {
    expect(tocsin(["assess", "coin.tocsin"])).toEqual({
      status: 0,
      stdout: `coin — Two heads
2 states; signal pair

Chances of the letters of toss
  process      heads   tails
  fair        50.0 %  50.0 %
  bent(0.25)  25.0 %  75.0 %
  bent(0.75)  75.0 %  25.0 %

Signal pair: trials until it is raised
  process      ARL     sd  5 %  median  95 %   by 10     by 100  signals per 1000
  fair           6   4.69    2       4    15  85.9 %  > 99.99 %             166.7
  bent(0.25)    20  18.65    2      14    57  38.8 %     99.5 %                50
  bent(0.75)  3.11   1.74    2       2     7  99.4 %  > 99.99 %             321.4
`,
      stderr: "",
    });
  });

  test("of what is not certain, in words", () => {
    const { stdout } = tocsin(["assess", "unsure.tocsin", "--signal", "at_once"]);
    expect(stdout).toMatch(/^ {2}fair {5}infinite /m);
    expect(stdout).toContain(
      "\n  fair: the ARL is not finite: it is not certain to be raised: with chance 0.25 it ever is\n",
    );
  });

  test("with times, where there is a cadence", () => {
    const { stdout } = tocsin(["assess", "two.tocsin", "--signal", "door_open"]);
    expect(stdout).toContain("2 states; signals hot, door_open; a trial every 1 h\n");
    expect(stdout).toMatch(/ mean time {2}signals a (day|week|year)\n/);
    expect(stdout).toMatch(/^ {2}steady .* 4\.17 days +1\.68$/m);
  });
});

describe("what cannot be measured", () => {
  test("is said, and the other processes are assessed", () => {
    write(
      "some.tocsin",
      `${COIN}process sticky: toss ~ markov {heads -> {heads 0.9, tails}, tails -> {tails 0.9, heads}}\n`,
    );
    const { status, stdout, stderr } = tocsin(["assess", "some.tocsin", "--json"]);
    expect(status).toBe(0);
    expect(stderr).toContain('"sticky" cannot be measured yet: run lengths under `markov`');
    expect((JSON.parse(stdout) as { runs: unknown[] }).runs).toHaveLength(6);
    expect(tocsin(["assess", "some.tocsin", "--process", "sticky"])).toMatchObject({ status: 1, stdout: "" });
  });

  test("is a long-run state where there is none", () => {
    write("certain.tocsin", COIN.replace("2 heads\n", "2 any\n"));
    const { status, stdout, stderr } = tocsin(["assess", "certain.tocsin", "--after", "fair"]);
    expect({ status, stdout }).toEqual({ status: 1, stdout: "" });
    expect(stderr).toContain("there is no long-run state to begin from: a signal is certain");
  });
});

test.each<[string[], number, string]>([
  [["nowhere.tocsin"], 2, "there is no such file or folder"],
  [["coin.tocsin", "--signal", "paar"], 2, "there is no such signal; there are pair, any"],
  [["coin.tocsin", "--process", "fiar"], 2, "did you mean `fair`?"],
  [["coin.tocsin", "--process", "bent(1.5)"], 1, 'not at "p", which is 1.5'],
  [["coin.tocsin", "--process", "bent(0.5"], 2, "not understood; write it as in --process 'shifted(1.5)'"],
  [["coin.tocsin", "--process", "fair after fair"], 2, "not understood"],
  [["coin.tocsin", "--after", "bent"], 2, "one process"],
  [["coin.tocsin", "--by", "0"], 2, "numbers of trials are due, as in --by 10,50"],
  [["coin.tocsin", "--by", "ten"], 2, "numbers of trials are due"],
  [["coin.tocsin", "--let", "d"], 2, "Write it as in --let d=1.8."],
  [["coin.tocsin", "--let", "d=1"], 1, 'the policy has no let "d"'],
  [["oven.tocsin", "--let", "d=-1"], 1, "do not increase"],
  [["coin.tocsin", "--max-states", "1"], 1, "too_many_states"],
])("assess %j exits with %i: %s", (args, status, words) => {
  const found = tocsin(["assess", ...args]);
  expect({ status: found.status, stdout: found.stdout }).toEqual({ status, stdout: "" });
  expect(found.stderr).toContain(words);
});

test("a policy without a process, and a library, have nothing to assess", () => {
  const bare = COIN.split("\n")
    .filter((line) => !/^(process|require)/.test(line))
    .join("\n");
  expect(tocsin(["assess", "-"], bare)).toMatchObject({
    status: 2,
    stderr:
      "tocsin: - declares no process, so there is nothing to assess it under; add one, as in process steady: …\n",
  });
  expect(tocsin(["assess", "-"], "rule twice = 2 heads\n")).toMatchObject({
    status: 2,
    stderr: "tocsin: - is a library: it declares no policy, so there is no machine to make\n",
  });
});
