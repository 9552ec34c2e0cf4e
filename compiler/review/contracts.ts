/** What a policy says of itself, held against its machine: signals that can be raised, requirements, expectations. */
import type { Diagnostic } from "../../grammar/diagnostic.ts";
import { makeAssessor } from "../analysis/assessor.ts";
import type { Machine } from "../machine/automaton.ts";
import type { Policy } from "../policy.ts";
import { checkExpectations } from "./expectations.ts";
import { checkNeverRaised } from "./never-raised.ts";
import { checkRequirements } from "./requirements.ts";

/** Everything that is not as the policy says, in no particular order. */
export function checkContracts(policy: Policy, machine: Machine, mostStates: number): Diagnostic[] {
  return [
    ...checkNeverRaised(policy, machine, mostStates),
    ...checkRequirements(policy, makeAssessor(policy, machine, mostStates)),
    ...checkExpectations(policy, machine),
  ];
}
