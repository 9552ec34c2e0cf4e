/**
 * `tocsin replay FILE DATA.csv`: recorded data, or trials written out, through the machine that was analysed.
 *
 * Rows are read, observed and reported one at a time, so that a file larger than memory and a live standard input both
 * work. Each stream has a detector of its own. What goes wrong in the data is told with its row, after all that came before
 * it; the state file is written only when the data were read to their end or the user stopped the command.
 */
import { createReadStream, fstatSync, type ReadStream, statSync } from "node:fs";
import { type Detector, letterOf, type Value } from "../../runtime/index.ts";
import { askTrials } from "../check/asked.ts";
import { readCsv } from "../data/csv.ts";
import type { Policy } from "../policy.ts";
import { EXIT, Stop, UsageError } from "./exit.ts";
import { reasonOf, STANDARD_INPUT } from "./files.ts";
import { demandAnswer, type LoadOptions, loadMachine } from "./load.ts";
import { warn } from "./output.ts";
import { followProgress } from "./progress.ts";
import { type Reporter, reporterFor } from "./replay-report.ts";
import { makeStreams, type Streams } from "./replay-streams.ts";

type Options = LoadOptions & {
  json?: true | undefined;
  letters?: string | undefined;
  column?: ReadonlyMap<string, string> | undefined;
  subgroup?: number | undefined;
  time?: string | undefined;
  stream?: string | undefined;
  state?: string | undefined;
};

const LETTERS_EXAMPLE =
  "--letters 'high mid 2 high', or '(high, open) ? 2 (mid, open)' for several statistics";

/** Replays data or trials and reports every signal; ends with a summary. */
export async function runReplay(file: string, data: string | undefined, options: Options): Promise<void> {
  demandOneSource(file, data, options);
  const { policy, machine } = loadMachine(file, options);
  const streams = makeStreams(policy, machine, options);
  const report = reporterFor(policy, options);
  if (options.letters !== undefined) replayLetters(policy, streams, options.letters, report);
  else await replayData(policy, streams, data ?? STANDARD_INPUT, report, options);
  streams.save();
  report.end(streams.unfinishedRows());
}

/** Trials come from data or are written out, and standard input is read once. */
function demandOneSource(file: string, data: string | undefined, options: Options): void {
  const { letters, column, subgroup, time, stream } = options;
  if (letters === undefined) {
    if (file === STANDARD_INPUT && (data ?? STANDARD_INPUT) === STANDARD_INPUT)
      throw new UsageError("the policy and the data cannot both come from standard input");
    return;
  }
  if (data !== undefined) throw new UsageError(`--letters stands instead of data, and ${data} is given too`);
  const ofData = Object.entries({ column, subgroup, time, stream }).find(([, value]) => value !== undefined);
  if (ofData) throw new UsageError(`--${ofData[0]} is for data, and --letters stands instead of them`);
}

function replayLetters(policy: Policy, streams: Streams, text: string, report: Reporter): void {
  const trials = demandAnswer(askTrials(policy, text, "--letters"), "--letters", LETTERS_EXAMPLE);
  const detector = streams.detectorOf(null);
  trials.forEach(({ symbol }, index) => {
    const letters = symbol === null ? policy.alphabets.map(() => -1) : lettersOf(policy, symbol);
    const raises = detector.observeLetter(...letters);
    report.reading(detector, raises, {
      row: index + 1,
      values: null,
      letters: letters.map((letter, at) => policy.alphabets[at]?.letters[letter]?.name ?? null),
      time: null,
      stream: null,
    });
  });
}

/** The letter of each value; null for one that is missing and has no letter. */
function lettersOfValues(detector: Detector, values: readonly Value[]): (string | null)[] {
  return detector.machine.statistics.map(
    (statistic, at) => statistic.letters[letterOf(statistic, values[at])] ?? null,
  );
}

/** The letters of a symbol; the first alphabet varies slowest. */
function lettersOf(policy: Policy, symbol: number): number[] {
  let rest = symbol;
  return [...policy.alphabets]
    .reverse()
    .map(({ letters }) => {
      const letter = rest % letters.length;
      rest = Math.floor(rest / letters.length);
      return letter;
    })
    .reverse();
}

async function replayData(
  policy: Policy,
  streams: Streams,
  data: string,
  report: Reporter,
  options: Options,
): Promise<void> {
  const wanted = {
    statistics: policy.alphabets.map(({ name, kind }) => ({
      name,
      kind,
      ...columnFor(name, options.column),
    })),
    time: options.time,
    stream: options.stream,
  };
  checkColumnNames(policy, options.column);
  const input = openData(data);
  const progress = followProgress(input.stream, input.bytes);
  const interrupted = onInterrupt(() => input.stream.destroy());
  try {
    for await (const item of streams.trials(readCsv(progress.counted, wanted))) {
      if (item.kind === "problems") {
        progress.clear();
        for (const { line, column, what, hint } of item.problems)
          warn(
            `${data}${line === null ? "" : `:${line}`}: ${column === null ? "" : `${column}: `}${what}\n  hint: ${hint}`,
          );
        throw new Stop(EXIT.findings);
      }
      const detector = streams.detectorOf(item.stream);
      const raises = detector.observe(...item.values);
      if (raises !== 0) progress.clear();
      report.reading(detector, raises, { ...item, letters: lettersOfValues(detector, item.values) });
    }
  } catch (thrown) {
    if (!interrupted.yes)
      throw thrown instanceof Stop ? thrown : new UsageError(`${data}: ${reasonOf(thrown)}`);
  } finally {
    progress.clear();
    interrupted.forget();
  }
}

function columnFor(name: string, columns: ReadonlyMap<string, string> | undefined) {
  const column = columns?.get(name);
  return column === undefined ? {} : { column };
}

function checkColumnNames(policy: Policy, columns: ReadonlyMap<string, string> | undefined): void {
  const names = policy.alphabets.map(({ name }) => name);
  for (const name of columns?.keys() ?? [])
    if (!names.includes(name))
      throw new UsageError(
        `--column ${name}=…: the policy has no statistic "${name}"; it has ${names.join(", ")}`,
      );
}

/** The data as a stream of bytes, and their size where it is known. */
function openData(data: string): { stream: ReadStream | NodeJS.ReadStream; bytes: number | null } {
  if (data === STANDARD_INPUT) {
    const isFile = fstatSync(0).isFile();
    return { stream: process.stdin, bytes: isFile ? fstatSync(0).size : null };
  }
  try {
    const stats = statSync(data);
    if (stats.isDirectory()) throw new UsageError(`${data}: this is a folder, not a file`);
    return { stream: createReadStream(data), bytes: stats.isFile() ? stats.size : null };
  } catch (thrown) {
    throw thrown instanceof UsageError ? thrown : new UsageError(`${data}: ${reasonOf(thrown)}`);
  }
}

/** An interrupt ends the reading, not the command: what was found is kept, and so is the state. */
function onInterrupt(stop: () => void): { yes: boolean; forget: () => void } {
  const state = { yes: false, forget: () => {} };
  const handler = () => {
    state.yes = true;
    stop();
  };
  process.once("SIGINT", handler);
  state.forget = () => process.removeListener("SIGINT", handler);
  return state;
}
