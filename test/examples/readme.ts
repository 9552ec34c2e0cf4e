/**
 * The README of an example as a script: its fenced `console` blocks hold command lines after `$ ` and what they print, its
 * last section the figures and where each was checked. Commands are split here, not by a shell: words, single quotes, and
 * `< FILE` for standard input. A command that ends otherwise than with 0 is followed by the line `[exit CODE]`.
 */
import { spawnSync } from "node:child_process";
import { readFileSync } from "node:fs";
import { join } from "node:path";
import type { Figure } from "./example.ts";

const command = join(import.meta.dirname, "../../dist/tocsin.js");

/** What a command prints, for people and for the caller; standard output, then standard error. */
export function run(args: readonly string[], folder: string, input = "") {
  const { status, stdout, stderr, error } = spawnSync(process.execPath, [command, ...args], {
    cwd: folder,
    input,
    encoding: "utf8",
    maxBuffer: 1 << 26,
    env: { ...process.env, NO_COLOR: "1" },
  });
  if (error) throw error;
  return { status, stdout, stderr };
}

/** Runs a line such as `tocsin replay fill.tocsin - < data.csv` in a folder. */
function runLine(line: string, folder: string): string {
  const words = [...line.matchAll(/'([^']*)'|(\S+)/g)].map((match) => match[1] ?? match[2]!);
  if (words.shift() !== "tocsin") throw new Error(`not a command of ours: ${line}`);
  const at = words.indexOf("<");
  const input = at < 0 ? "" : readFileSync(join(folder, words[at + 1]!), "utf8");
  if (at >= 0) words.splice(at, 2);
  const { status, stdout, stderr } = run(words, folder, input);
  const printed = (stdout + stderr).replace(/[ \t]+$/gm, "").replace(/\n*$/, "\n");
  return status === 0 ? printed : `${printed}[exit ${status}]\n`;
}

const block = /^```console\n([\s\S]*?)^```$/gm;

/** The README with what its commands print now in place of what it says they print. */
export function withOutput(readme: string, folder: string): string {
  return readme.replace(block, (_, body: string) => {
    const lines = body.split("\n").filter((line) => line.startsWith("$ "));
    const run = lines.map((line) => `${line}\n${runLine(line.slice(2), folder)}`.replace(/^\n+/, ""));
    return `\`\`\`console\n${run.join("\n")}\`\`\``;
  });
}

const heading = "## Where the figures were checked\n";

/** The README with its last section, the list of figures, as the scenario has it. */
export function withFigures(readme: string, figures: readonly Figure[]): string {
  const at = readme.indexOf(heading);
  if (at < 0) throw new Error("the README does not say where the figures were checked");
  const items = figures.map(({ measure, printed, source }) => `- \`${measure}\` is ${printed}: ${source}\n`);
  return `${readme.slice(0, at)}${heading}\n${items.join("")}`;
}
