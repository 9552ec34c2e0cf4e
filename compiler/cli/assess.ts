/** `tocsin assess FILE`: exact run lengths as tables for people or JSON for programs. */
import type { Outcome } from "../../grammar/diagnostic.ts";
import { makeAssessor, type SignalChoice } from "../analysis/assessor.ts";
import { askProcess } from "../check/asked.ts";
import type { Policy, ProcessUse } from "../policy.ts";
import { type Assessment, assess, type Questions } from "../review/assessment.ts";
import { assessmentText } from "./assessment-text.ts";
import { EXIT, Stop, UsageError } from "./exit.ts";
import { demandAnswer, type LoadOptions, loadMachine } from "./load.ts";
import { say, sayJson, showDiagnostics } from "./output.ts";

type Options = LoadOptions & {
  json?: true | undefined;
  process?: readonly string[] | undefined;
  after?: string | undefined;
  signal?: readonly string[] | undefined;
  by?: string | undefined;
};

/** Assesses a policy and prints what was found; processes that cannot be measured yet are named on standard error. */
export function runAssess(file: string, options: Options): void {
  const { policy, machine } = loadMachine(file, options);
  const questions = questionsOf(policy, options);
  if (policy.processes.length === 0)
    throw new UsageError(
      `${file} declares no process, so there is nothing to assess it under; add one, as in process steady: …`,
    );
  const { value, diagnostics }: Outcome<Assessment> = assess(
    makeAssessor(policy, machine, options.maxStates),
    questions,
  );
  showDiagnostics(diagnostics, process.stderr);
  if (!value) throw new Stop(EXIT.findings);
  if (options.json)
    sayJson({
      policy: policy.name,
      title: policy.title,
      states: machine.states,
      signals: policy.signals.map(({ name }) => name),
      cadence: policy.cadence ? { text: policy.cadence.text, seconds: policy.cadence.seconds } : null,
      letters: value.letters,
      runs: value.runs,
    });
  else say(assessmentText(policy, machine, value));
}

function questionsOf(policy: Policy, options: Options): Questions {
  return {
    processes: (options.process ?? []).map((text) => processOf(policy, text, "--process", false)),
    after: options.after === undefined ? null : processOf(policy, options.after, "--after", true),
    signals: (options.signal ?? []).map((name) => signalOf(policy, name)),
    by: options.by === undefined ? [] : options.by.split(",").map(trialsOf),
  };
}

function processOf(policy: Policy, text: string, option: string, fixed: boolean): ProcessUse {
  return demandAnswer(
    askProcess(policy, text, option, fixed),
    `${option} ${text}`,
    fixed ? `${option} steady` : `${option} 'shifted(1.5)'`,
  );
}

function signalOf(policy: Policy, name: string): SignalChoice {
  if (name === "any") return "any";
  const index = policy.signals.findIndex((signal) => signal.name === name);
  if (index !== -1) return index;
  const names = policy.signals.map((signal) => signal.name);
  throw new UsageError(
    `--signal ${name}: there is no such signal; there are ${[...names, "any"].join(", ")}`,
  );
}

function trialsOf(text: string): number {
  const value = Number(text.trim());
  if (!/^\s*\d+\s*$/.test(text) || value < 1 || !Number.isSafeInteger(value))
    throw new UsageError(`--by ${text}: numbers of trials are due, as in --by 10,50`);
  return value;
}
