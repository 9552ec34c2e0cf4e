/** What a replay says: a line for each signal and each refused reading, and a summary; as text or as JSON lines. */
import { type Detector, REFUSED, type Reason } from "../../runtime/index.ts";
import type { Policy } from "../policy.ts";
import { say, sayJson } from "./output.ts";

export type Reading = {
  /** The data row from 1 (the last of a subgroup), or the place among trials written out. */
  readonly row: number;
  /** One for each statistic; null where letters were given instead of values. */
  readonly values: readonly (number | string | null)[] | null;
  readonly letters: readonly (string | null)[];
  readonly time: string | null;
  readonly stream: string | null;
};

export type Reporter = {
  readonly reading: (detector: Detector, raises: number, reading: Reading) => void;
  readonly end: (unfinishedRows: number) => void;
};

/** The reporter that the options ask for. */
export function reporterFor(policy: Policy, options: { json?: true | undefined }): Reporter {
  const totals: Totals = { trials: 0, refused: 0, skipped: 0, broken: 0, raises: new Map() };
  for (const { name } of policy.signals) totals.raises.set(name, 0);
  const show = options.json ? showJson : showText;
  return {
    reading: (detector, raises, reading) => {
      count(policy, totals, raises, reading);
      if (raises === 0) return;
      const signals = detector.namesOf(raises);
      for (const name of signals) totals.raises.set(name, (totals.raises.get(name) ?? 0) + 1);
      show(policy, reading, {
        trial: detector.trial,
        refused: raises === REFUSED,
        signals,
        because: detector.because(),
      });
    },
    end: (unfinishedRows) => {
      const { raises, ...counts } = totals;
      if (options.json)
        sayJson({ summary: { ...counts, unfinishedRows, signals: Object.fromEntries(raises) } }, 0);
      else say(summaryText(totals, unfinishedRows));
    },
  };
}

/** Trials include the broken ones; readings refused or skipped are none. */
type Totals = {
  trials: number;
  refused: number;
  skipped: number;
  broken: number;
  readonly raises: Map<string, number>;
};

function count(policy: Policy, totals: Totals, raises: number, { letters }: Reading): void {
  const isMissing = letters.includes(null);
  if (raises === REFUSED) totals.refused++;
  else if (isMissing && policy.missing === "skip") totals.skipped++;
  else totals.trials++;
  if (isMissing && policy.missing === "break") totals.broken++;
}

type Event = {
  readonly trial: number;
  readonly refused: boolean;
  readonly signals: readonly string[];
  readonly because: readonly Reason[];
};

function showJson(policy: Policy, reading: Reading, { trial, refused, signals, because }: Event): void {
  const { row, values, letters, time, stream } = reading;
  const byName = <T>(list: readonly T[]) =>
    Object.fromEntries(policy.alphabets.map(({ name }, at) => [name, list[at]]));
  sayJson(
    {
      trial: refused ? null : trial,
      row,
      ...(time === null ? {} : { time }),
      ...(stream === null ? {} : { stream }),
      values: values === null ? null : byName(values),
      letters: byName(letters),
      signals,
      ...(refused ? { refused } : {}),
      because: because.map(({ signal, rule, from, to, complete }) => ({
        signal,
        rule,
        trials: [from, to],
        complete,
      })),
    },
    0,
  );
}

function showText(policy: Policy, reading: Reading, { trial, refused, signals, because }: Event): void {
  const what = policy.alphabets.map(({ name }, at) => {
    const value = reading.values?.[at];
    const letter = reading.letters[at];
    const shown = value ?? (reading.values || letter === null ? "missing" : null);
    return [name, shown, shown === letter ? null : (letter ?? (value ? "(no letter of it)" : null))]
      .filter((part) => part !== null && part !== undefined)
      .map(visible)
      .join(" ");
  });
  const place = [
    ...(reading.stream === null ? [] : [visible(reading.stream)]),
    ...(refused ? [] : [`trial ${trial}`]),
    `row ${reading.row}`,
    ...(reading.time === null ? [] : [visible(reading.time)]),
  ];
  const outcome = refused
    ? "refused: a value is missing"
    : `${signals.join(", ")} — ${because.map(reasonText).join("; ")}`;
  say([...place, ...what, outcome].join("  "));
}

/** What data say, on one line and without what acts on a terminal. */
function visible(part: number | string): string {
  return `${part}`.replace(/[\p{Cc}\u2028\u2029]/gu, "\uFFFD");
}

function reasonText({ rule, from, to, complete }: Reason): string {
  if (!complete) return `${rule}, began before trial ${from}`;
  return from === to ? `${rule}, trial ${to}` : `${rule}, trials ${from} to ${to}`;
}

function summaryText({ trials, refused, skipped, broken, raises }: Totals, unfinishedRows: number): string {
  const counted = (amount: number, one: string, many: string, rest: string) =>
    amount > 0 ? [`${amount} ${amount === 1 ? one : many}${rest}`] : [];
  return [
    `${trials} ${trials === 1 ? "trial" : "trials"}`,
    `signals raised: ${[...raises].map(([name, amount]) => `${name} ${amount}`).join(", ")}`,
    ...counted(refused, "reading", "readings", " refused"),
    ...counted(skipped, "reading", "readings", " skipped"),
    ...counted(broken, "trial", "trials", " broken by a missing value"),
    ...counted(unfinishedRows, "row", "rows", " left in an unfinished subgroup"),
  ].join("; ");
}
