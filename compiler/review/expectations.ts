/** The truth of `expect`: the machine is fed the trials, and the first trial that goes another way is told. */
import { type Diagnostic, diagnose } from "../../grammar/diagnostic.ts";
import type { Machine } from "../machine/automaton.ts";
import { walk } from "../machine/walk.ts";
import type { Expect, ExpectedTrial, Policy } from "../policy.ts";

/** One diagnostic for each expectation that fails. */
export function checkExpectations(policy: Policy, machine: Machine): Diagnostic[] {
  return policy.expects.flatMap((expect) => {
    const raised = walk(
      machine,
      expect.trials.map((trial) => trial.symbol),
    );
    const wrong = raised.findIndex((mask, index) => wants(expect, index) !== judged(expect, mask));
    return wrong === -1 ? [] : [failure(policy, expect, raised, wrong)];
  });
}

/** What the expectation asks of one trial: a bit set, or for `any` 1 or 0. */
function wants(expect: Expect, index: number): number {
  const { expectation } = expect;
  const isLast = index === expect.trials.length - 1;
  switch (expectation.kind) {
    case "quiet":
      return 0;
    case "all":
      return maskOf((expect.trials[index] as ExpectedTrial).raises);
    case "signal":
      return !isLast ? 0 : expectation.signal === "any" ? 1 : 1 << expectation.signal;
    default:
      return expectation satisfies never;
  }
}

/** What was raised, in the terms of `wants`: only the signal that the expectation speaks of. */
function judged(expect: Expect, mask: number): number {
  const { expectation } = expect;
  if (expectation.kind !== "signal") return mask;
  return expectation.signal === "any" ? (mask === 0 ? 0 : 1) : mask & (1 << expectation.signal);
}

function maskOf(signals: readonly number[]): number {
  return signals.reduce((mask, signal) => mask | (1 << signal), 0);
}

function failure(policy: Policy, expect: Expect, raised: readonly number[], wrong: number): Diagnostic {
  const trial = expect.trials[wrong] as ExpectedTrial;
  const found = namesOf(policy, raised[wrong] as number);
  const wanted = wantedWords(policy, expect, wrong);
  const earlier = raised.flatMap((mask, index) =>
    mask !== 0 && index < wrong ? [`${namesOf(policy, mask)} at trial ${index + 1}`] : [],
  );
  const before = earlier.length > 0 ? `; before it ${earlier.slice(-3).join(", ")}` : "";
  return diagnose(
    "expect_fails",
    trial.span,
    `at trial ${wrong + 1}${letterWords(policy, trial)} ${wanted} ${verb(wanted)} expected, and ${found} ${verb(found)} raised${before}`,
    {
      hint: "change the policy, or what is expected of it; `tocsin replay FILE --letters` says why a signal is raised",
      related: [{ span: expect.span, message: `the expectation, ${expect.trials.length} trials long` }],
      data: { trial: wrong + 1, expected: wanted, raised: found },
    },
  );
}

function verb(names: string): string {
  return names.includes(" and ") ? "were" : "was";
}

function wantedWords(policy: Policy, expect: Expect, index: number): string {
  const wanted = wants(expect, index);
  if (expect.expectation.kind !== "signal") return wanted === 0 ? "no signal" : namesOf(policy, wanted);
  if (expect.expectation.signal === "any") return wanted === 0 ? "no signal" : "a signal";
  const name = policy.signals[expect.expectation.signal]?.name ?? "";
  return wanted === 0 ? `no ${name}` : name;
}

function letterWords(policy: Policy, trial: ExpectedTrial): string {
  if (trial.symbol === null) return " (missing)";
  let rest = trial.symbol;
  const letters = [...policy.alphabets].reverse().map((alphabet) => {
    const letter = alphabet.letters[rest % alphabet.letters.length]?.name ?? "?";
    rest = Math.floor(rest / alphabet.letters.length);
    return letter;
  });
  return ` (${letters.reverse().join(", ")})`;
}

/** The names of the signals in a bit set. */
function namesOf(policy: Policy, mask: number): string {
  const names = policy.signals.flatMap((signal, index) => ((mask >>> index) & 1 ? [signal.name] : []));
  return names.length === 0 ? "no signal" : names.join(" and ");
}
