/** An assessment as people read it: aligned tables, few digits, times from the cadence. */
import type { Machine } from "../machine/automaton.ts";
import type { Policy } from "../policy.ts";
import type { Assessment, LetterRow, Row } from "../review/assessment.ts";
import { table } from "./output.ts";

const SECONDS = { s: 1, min: 60, h: 3600, day: 86_400, week: 604_800, year: 365.25 * 86_400 } as const;

/** The whole text, without a line break at its end. */
export function assessmentText(policy: Policy, machine: Machine, { letters, runs }: Assessment): string {
  const title = policy.title ? ` — ${policy.title}` : "";
  const cadence = policy.cadence ? `; a trial every ${policy.cadence.text}` : "";
  const signals = policy.signals.map(({ name }) => name).join(", ");
  const many = policy.signals.length === 1 ? "signal" : "signals";
  const parts = [`${policy.name}${title}\n${machine.states} states; ${many} ${signals}${cadence}`];
  for (const alphabet of policy.alphabets) parts.push(letterTable(alphabet.name, letters));
  const shown = new Set(runs.map((row) => row.signal));
  // Of one signal, "any" says the same again.
  if (policy.signals.length === 1 && shown.size > 1) shown.delete("any");
  for (const signal of shown)
    parts.push(
      signalTable(
        policy,
        runs.filter((row) => row.signal === signal),
      ),
    );
  return parts.join("\n\n");
}

function letterTable(statistic: string, rows: readonly LetterRow[]): string {
  const names = Object.keys(rows[0]?.letters[statistic] ?? {});
  const body = rows.map((row) => [
    processWords(row),
    ...names.map((name) => chance(row.letters[statistic]?.[name] ?? 0)),
  ]);
  return `Chances of the letters of ${statistic}\n${indented(table([["process", ...names], ...body], [false, ...names.map(() => true)]))}`;
}

function signalTable(policy: Policy, rows: readonly Row[]): string {
  const [first] = rows;
  if (!first) return "";
  const within = Object.keys(first.signalled);
  const perTime = policy.cadence ? rateUnit(rows, policy.cadence.seconds) : null;
  const head = [
    "process",
    "ARL",
    "sd",
    "5 %",
    "median",
    "95 %",
    ...within.map((n) => `by ${n}`),
    ...(policy.cadence ? ["mean time", `signals a ${perTime}`] : ["signals per 1000"]),
  ];
  const body = rows.map((row) => [
    processWords(row),
    trials(row.arl),
    trials(row.sdrl),
    trials(row.quantiles["0.05"] ?? null),
    trials(row.mrl),
    trials(row.quantiles["0.95"] ?? null),
    ...within.map((n) => chance(row.signalled[n] ?? 0)),
    ...(policy.cadence && perTime
      ? [
          duration(row.arl, policy.cadence.seconds),
          short((row.rate / policy.cadence.seconds) * SECONDS[perTime]),
        ]
      : [short(row.rate * 1000)]),
  ]);
  const after = first.after ? `, from the long-run state under ${first.after}` : "";
  const heading = first.signal === "any" ? `Any signal${after}` : `Signal ${first.signal}${after}`;
  const aligned = indented(table([head, ...body], [false, ...head.slice(1).map(() => true)]));
  return [`${heading}: trials until it is raised`, aligned, ...notes(rows), ...causes(rows)].join("\n");
}

/** Why a mean is infinite, once for each process where it is. */
function notes(rows: readonly Row[]): string[] {
  return rows.flatMap((row) =>
    row.reason ? [`  ${processWords(row)}: the ARL is not finite: ${row.reason}`] : [],
  );
}

/** Which rules the first raise is attributed to, where there is a choice. */
function causes(rows: readonly Row[]): string[] {
  const names = [...new Set(rows.flatMap((row) => Object.keys(row.first ?? {})))];
  if (names.length < 2) return [];
  const body = rows.map((row) => [processWords(row), ...names.map((name) => chance(row.first?.[name] ?? 0))]);
  return [
    "  the first raise is attributed to",
    indented(indented(table([["process", ...names], ...body], [false, ...names.map(() => true)]))),
  ];
}

function processWords({ process, at }: { process: string; at: Readonly<Record<string, number>> }): string {
  const values = Object.values(at);
  return values.length === 0
    ? process
    : `${process}(${values.map((value) => Number(value.toPrecision(6))).join(", ")})`;
}

function indented(text: string): string {
  return text.replace(/^/gm, "  ");
}

/** A number of trials: one decimal below a hundred, six digits above. */
function trials(value: number | null): string {
  if (value === null) return "infinite";
  if (Number.isInteger(value) && value < 1e15) return `${value}`;
  return value < 100 ? value.toFixed(2) : short(value);
}

function short(value: number): string {
  if (value === 0) return "0";
  const digits = Number(value.toPrecision(4));
  return digits >= 1e-3 && digits < 1e9 ? `${digits}` : digits.toExponential();
}

/** A probability as a percentage: three digits, two of a small one, and never all where a little is wanting. */
function chance(p: number): string {
  if (p === 0) return "0 %";
  if (p === 1) return "100 %";
  const percent = p * 100;
  if (percent < 0.01) return `${Number(percent.toPrecision(2)).toExponential()} %`;
  if (percent < 1) return `${percent.toPrecision(2)} %`;
  if (percent > 99.99) return "> 99.99 %";
  return `${percent > 99.9 ? percent.toFixed(2) : percent.toPrecision(3)} %`;
}

/** The unit of time in which the rarest signal of the table still reads as a handy number. */
function rateUnit(rows: readonly Row[], seconds: number): "day" | "week" | "year" {
  const largest = Math.max(...rows.map((row) => row.rate)) / seconds;
  if (largest * SECONDS.day >= 1) return "day";
  return largest * SECONDS.week >= 0.5 ? "week" : "year";
}

/** A number of trials as a length of time, in the largest unit that leaves at least 2 of it. */
function duration(arl: number | null, seconds: number): string {
  if (arl === null) return "infinite";
  const total = arl * seconds;
  const unit =
    (["year", "week", "day", "h", "min"] as const).find((name) => total >= 2 * SECONDS[name]) ?? "s";
  const amount = total / SECONDS[unit];
  const many = unit === "year" || unit === "week" || unit === "day" ? `${unit}s` : unit;
  return `${amount >= 1e6 ? amount.toExponential(2) : Number(amount.toPrecision(3))} ${many}`;
}
