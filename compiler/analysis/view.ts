/**
 * An automaton as one question sees it: outputs the question does not tell apart become one, and states that then
 * have the same future are merged. In: an automaton, a kind for each output. Out: the minimal automaton whose outputs
 * are the kinds.
 *
 * A machine of several signals is the product of their memories; what one signal alone does often needs one factor
 * only. Run lengths, rates and long-run laws of that signal are those of its view, state for state; a law over states
 * is always meant over those of the view. Views are kept with their automaton. Cost: one minimisation, none where the
 * outputs are told apart already, as with a single signal.
 */
import type { Automaton } from "../machine/automaton.ts";
import { minimise } from "../machine/minimise.ts";

/**
 * What a question makes of an output (never 0): false or 0 for nothing, true or a positive number for a kind of
 * event.
 */
export type KindOf = (output: number) => boolean | number;

type Kept = { readonly outputs: readonly number[]; readonly views: Map<string, Automaton> };

const kept = new WeakMap<Automaton, Kept>();

/** The automaton whose outputs are the kinds, 0 for nothing; its state 0 is the start. */
export function viewOf(automaton: Automaton, kindOf: KindOf): Automaton {
  const { outputs, views } = keptOf(automaton);
  const kinds = outputs.map((output) => Number(kindOf(output)));
  const key = kinds.join();
  const known = views.get(key);
  if (known) return known;
  const view = makeView(automaton, outputs, kinds);
  views.set(key, view);
  return view;
}

function keptOf(automaton: Automaton): Kept {
  const known = kept.get(automaton);
  if (known) return known;
  const outputs = new Set<number>();
  // Most transitions give nothing out; only the others go through the set.
  const { output } = automaton;
  for (let i = 0; i < output.length; i++) if (output[i] !== 0) outputs.add(output[i]!);
  const entry = { outputs: [...outputs].sort((a, b) => a - b), views: new Map<string, Automaton>() };
  kept.set(automaton, entry);
  return entry;
}

function makeView(automaton: Automaton, outputs: readonly number[], kinds: readonly number[]): Automaton {
  if (outputs.every((output, i) => output === kinds[i])) return automaton;
  const { states, columns, next, output } = automaton;
  const kindBy = new Map(outputs.map((out, i) => [out, kinds[i]!]));
  const seen = output.map((out) => (out === 0 ? 0 : kindBy.get(out)!));
  const view = { states, columns, next, output: seen };
  // Outputs that stay apart keep apart what they kept apart before.
  const apart = !kinds.includes(0) && new Set(kinds).size === kinds.length;
  return apart ? view : minimise(view);
}
