/**
 * What the command understands: subcommands, options and their help. Each subcommand is a file of its own, loaded when
 * called, so that a quick check does not pay for the analysis.
 */
import { Command, InvalidArgumentError, Option } from "@commander-js/extra-typings";
import { VERSION } from "./version.ts";

const wholeNumber =
  (least: number) =>
  (text: string): number => {
    const value = Number(text);
    if (!/^\d+$/.test(text) || !Number.isSafeInteger(value) || value < least)
      throw new InvalidArgumentError(`A whole number from ${least} is due.`);
    return value;
  };

const list = (text: string, before: readonly string[] = []): string[] => [...before, text];

/** Reads `name=value`, each time one more; `example` shows how. */
const assignment =
  (example: string) =>
  (text: string, before: ReadonlyMap<string, string> = new Map()): ReadonlyMap<string, string> => {
    const [, name, value] = /^\s*([A-Za-z_]\w*)\s*=\s*(.+)$/.exec(text) ?? [];
    if (name === undefined || value === undefined)
      throw new InvalidArgumentError(`Write it as in ${example}.`);
    return new Map([...before, [name, value]]);
  };

const mostStates = () =>
  new Option("--max-states <n>", "the state budget of the machine")
    .argParser(wholeNumber(1))
    .default(2_000_000);
const lets = () =>
  new Option("--let <name=value>", "take another value for a let (may be repeated)").argParser(
    assignment("--let d=1.8"),
  );
const json = () => new Option("--json", "print JSON for programs");

type Program = Pick<Command, "command">;

/** The whole command; parsing throws a CommanderError where the arguments are not understood. */
export function makeProgram(): Command {
  const program = new Command("tocsin")
    .description(
      "Tocsin compiles a signalling policy (a text that says when a stream of process measurements should raise a " +
        "signal) to one minimal machine: the Markov chain of its exact run lengths, and the detector that runs.",
    )
    .version(VERSION, "-V, --version", "print the version")
    .helpOption("-h, --help", "print this help")
    .showSuggestionAfterError()
    .showHelpAfterError("(--help says more)")
    .helpCommand("help [command]", "print the help of a command")
    .exitOverride()
    .configureOutput({ writeErr: (text) => process.stderr.write(text.replace(/^error: /, "tocsin: ")) })
    .addHelpText(
      "after",
      `
A first policy:
  $ tocsin start my_policy           writes my_policy.tocsin, with comments
  $ tocsin check my_policy.tocsin    says what is wrong with it, or that nothing is
  $ tocsin assess my_policy.tocsin   says what it costs and how fast it is

Exit codes: 0 clean or done, 1 findings or a policy with errors, 2 usage or a missing file, 3 a bug of ours.
A detector made by Tocsin is not a certified safety function: local codes and licensed practice decide.`,
    );

  addCheck(program);
  addFormat(program);
  addAssess(program);
  addEmit(program);
  addReplay(program);
  addStart(program);
  return program;
}

function addCheck(program: Program): void {
  program
    .command("check")
    .description("say what is wrong with policies, and whether what they require and expect is true")
    .argument("<file...>", "policies or libraries; - reads standard input")
    .addOption(json())
    .option("--strict", "let warnings fail the check too")
    .addOption(lets())
    .addOption(mostStates())
    .addHelpText("after", "\nExample:\n  $ tocsin check fill_weight.tocsin")
    .action(async (files, options) => (await import("./check.ts")).runCheck(files, options));
}

function addFormat(program: Program): void {
  program
    .command("format")
    .description("rewrite policies in canonical text; the meaning stays")
    .argument("<file...>", "policies or libraries; - reads standard input and writes standard output")
    .option("--verify", "write nothing; exit with 1 when a file is not canonical")
    .addHelpText("after", "\nExample:\n  $ tocsin format fill_weight.tocsin")
    .action(async (files, options) => (await import("./format.ts")).runFormat(files, options));
}

function addAssess(program: Program): void {
  program
    .command("assess")
    .description("exact run lengths: how often a signal is false, and how soon a shift is found")
    .argument("<file>", "a policy; - reads standard input")
    .addOption(json())
    .option("--process <process>", "only this process, as in 'shifted(1.5)' (may be repeated)", list)
    .option("--after <process>", "begin in the long-run state under this process, as in steady")
    .option("--signal <name>", "only this signal, or any (may be repeated)", list)
    .option("--by <trials>", "also the chance of a signal within so many trials, as in 10,50")
    .addOption(lets())
    .addOption(mostStates())
    .addHelpText(
      "after",
      "\nExamples:\n  $ tocsin assess fill_weight.tocsin\n  $ tocsin assess fill_weight.tocsin --signal stop --process 'shifted(1.5)' --after steady --let d=1.8",
    )
    .action(async (file, options) => (await import("./assess.ts")).runAssess(file, options));
}

function addEmit(program: Program): void {
  program
    .command("emit")
    .description("write the machine of a policy, for detectors to run")
    .argument("<file>", "a policy; - reads standard input")
    .addOption(new Option("--as <target>", "what to write").choices(["json"] as const).makeOptionMandatory())
    .option("-o, --output <path>", "where to write it; standard output unless given")
    .addOption(lets())
    .addOption(mostStates())
    .addHelpText("after", "\nExample:\n  $ tocsin emit fill_weight.tocsin --as json -o fill_weight.json")
    .action(async (file, options) => (await import("./emit.ts")).runEmit(file, options));
}

function addStart(program: Program): void {
  program
    .command("start")
    .description("write a first policy, with comments, that checks clean")
    .argument("<name>", "its name; the file is NAME.tocsin")
    .option("--force", "overwrite the file if it exists")
    .addHelpText("after", "\nExample:\n  $ tocsin start oven_temperature")
    .action(async (name, options) => (await import("./start.ts")).runStart(name, options));
}

function addReplay(program: Program): void {
  program
    .command("replay")
    .description("run recorded data, or trials written out, through the machine that was analysed")
    .argument("<file>", "a policy")
    .argument("[data]", "a CSV file with a header; - or nothing reads standard input")
    .addOption(json())
    .option("--letters <trials>", "trials as in expect, instead of data: 'high mid 2 high'")
    .option(
      "--column <statistic=name>",
      "the column of a statistic, when it is named otherwise (may be repeated)",
      assignment("--column fill=Weight"),
    )
    .addOption(
      new Option("--subgroup <n>", "take the mean of every n rows as one value").argParser(wholeNumber(1)),
    )
    .option("--time <column>", "a column to show as the time of each trial")
    .option("--stream <column>", "a column that tells streams apart; each has a memory of its own")
    .option("--state <path>", "go on where the last call with this file stopped, and keep the state in it")
    .addOption(lets())
    .addOption(mostStates())
    .addHelpText(
      "after",
      "\nExamples:\n  $ tocsin replay fill_weight.tocsin fills.csv --time taken\n  $ tocsin replay fill_weight.tocsin --letters 'high mid 2 high'",
    )
    .action(async (file, data, options) => (await import("./replay.ts")).runReplay(file, data, options));
}
