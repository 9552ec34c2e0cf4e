/**
 * Plans kept for one automaton and one kind of transition: skeletons by the columns that can occur and the states to
 * begin from, shapes by the anchors that the probabilities choose. A sweep of a process thus compiles a handful of
 * shapes, and each question gets the plan that its own probabilities choose, whatever was asked before.
 */
import type { Automaton } from "../machine/automaton.ts";
import {
  chooseAnchors,
  findSkeleton,
  type Marks,
  type Skeleton,
  shapeChain,
  usableColumns,
} from "./chain.ts";
import type { DoubleDoubles } from "./double-double.ts";
import { type Plan, planShape, type SolverOptions } from "./solver.ts";

/** The plan for given column probabilities and states to begin from. */
export type Plans = (probabilities: DoubleDoubles, starts: Int32Array) => Plan;

/** Keeps the plans of an automaton; `marks` end the run where `absorbing` is set. */
export function keepPlans(
  automaton: Automaton,
  marks: Marks,
  absorbing: boolean,
  options: SolverOptions,
): Plans {
  const known = new Map<string, { readonly skeleton: Skeleton; readonly plans: Map<string, Plan> }>();
  return (probabilities, starts) => {
    const usable = usableColumns(probabilities);
    const key = `${usable.join()}|${starts.join()}`;
    let entry = known.get(key);
    if (!entry) {
      entry = { skeleton: findSkeleton(automaton, marks, absorbing, starts, usable), plans: new Map() };
      known.set(key, entry);
    }
    const anchors = chooseAnchors(entry.skeleton, probabilities.high);
    const plan = entry.plans.get(anchors.join()) ?? planShape(shapeChain(entry.skeleton, anchors), options);
    entry.plans.set(anchors.join(), plan);
    return plan;
  };
}
