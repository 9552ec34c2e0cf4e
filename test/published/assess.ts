/** The built command, asked for run lengths: the text of a policy goes in on standard input, JSON comes out. */
import { execFile } from "node:child_process";
import { join } from "node:path";

const command = join(import.meta.dirname, "../../dist/tocsin.js");

/** One row of `assess --json`; numbers that are infinite or undefined are null. */
export type Run = {
  readonly signal: string;
  readonly process: string;
  readonly at: Readonly<Record<string, number>>;
  readonly after: string | null;
  readonly arl: number | null;
  readonly sdrl: number | null;
  readonly mrl: number | null;
  readonly quantiles: Readonly<Record<string, number>>;
  readonly signalled: Readonly<Record<string, number>>;
  readonly first: Readonly<Record<string, number>>;
};

export type Assessment = { readonly states: number; readonly runs: readonly Run[] };

/** Runs `tocsin assess - --json` with more arguments; an error of the policy rejects with what the command said. */
export function assess(policy: string, ...more: readonly string[]): Promise<Assessment> {
  return new Promise((resolve, reject) => {
    const child = execFile(
      process.execPath,
      [command, "assess", "-", "--json", ...more],
      { maxBuffer: 1 << 26 },
      (error, stdout, stderr) => {
        if (error) reject(new Error(`${error.message}\n${stdout}${stderr}`));
        else resolve(JSON.parse(stdout) as Assessment);
      },
    );
    child.stdin?.end(policy);
  });
}

/** The one row for a signal under a process, at a value of its parameter where it has one. */
export function row({ runs }: Assessment, signal: string, process: string, parameter?: number): Run {
  const found = runs.filter(
    (run) =>
      run.signal === signal &&
      run.process === process &&
      (parameter === undefined || Math.abs(Object.values(run.at)[0]! - parameter) < 1e-9),
  );
  if (found.length !== 1)
    throw new Error(`${found.length} rows for ${signal}, ${process}, ${parameter ?? "no parameter"}`);
  return found[0]!;
}
