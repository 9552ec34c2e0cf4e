/**
 * One tracker for each condition form that reads trials: what of the past the form still needs, as a tuple of numbers, and
 * how a trial changes it. A tracker gives out 1 at the trials where its form completes. State all zeros is clear memory.
 *
 * Each is the definition of its form (`grammar/README.md`) made incremental; the argument stands beside it.
 */
import type { Automaton } from "./automaton.ts";
import { MOST_STATE_WORDS, TooManyStates } from "./budget.ts";
import type { Succession } from "./explore.ts";

/** A SET by column: completes at its members. */
export function trackSet(set: Uint8Array): Succession {
  return {
    width: 1,
    columns: set.length,
    step: (_pool, _at, column, into) => {
      into[0] = 0;
      return set[column] as number;
    },
  };
}

/** `k SET`, and `k SET gap r`: successes held (k − 1 at most: more change nothing), and failures since the last. */
export function trackRun(count: number, set: Uint8Array, gap: number, failures: Uint8Array): Succession {
  const stride = gap + 1;
  return {
    width: 1,
    columns: set.length,
    step: (pool, at, column, into) => {
      const state = pool[at] as number;
      const held = Math.floor(state / stride);
      if (set[column] === 1) {
        into[0] = Math.min(held + 1, count - 1) * stride;
        return held === count - 1 ? 1 : 0;
      }
      into[0] = held > 0 && failures[column] === 1 && state % stride < gap ? state + 1 : 0;
      return 0;
    },
  };
}

/**
 * `k of m SET`: the successes among the last trials, as a bit string with the last trial in bit 0. A success is dropped as
 * soon as it can no longer count: with j held, k − j more are needed, so the oldest must not be older than m − 1 − (k − j)
 * trials. Fewer than k are held after every trial, so that k are only reached by a success. The tracker is minimal at once,
 * with C(m, k−1) states.
 */
export function trackScan(count: number, window: number, set: Uint8Array): Succession {
  if (window <= 31) return trackShortScan(count, window, set);
  const words = Math.ceil(window / 32);
  return {
    width: words,
    columns: set.length,
    step: (pool, at, column, into) => {
      let carry = set[column] as number;
      let held = 0;
      for (let word = 0; word < words; word++) {
        const old = pool[at + word] as number;
        into[word] = (old << 1) | carry;
        carry = old >>> 31;
        held += bitCount(into[word] as number);
      }
      const completes = held >= count ? 1 : 0;
      for (let age = window - 1; age >= 0 && (held >= count || age > window - 1 - (count - held)); age--) {
        if (((into[age >> 5] as number) >>> (age & 31)) & 1) {
          into[age >> 5] = (into[age >> 5] as number) & ~(1 << (age & 31));
          held--;
        }
      }
      return completes;
    },
  };
}

function trackShortScan(count: number, window: number, set: Uint8Array): Succession {
  return {
    width: 1,
    columns: set.length,
    step: (pool, at, column, into) => {
      let recent = ((pool[at] as number) << 1) | (set[column] as number);
      let held = bitCount(recent);
      const completes = held >= count ? 1 : 0;
      while (recent !== 0) {
        const oldest = 31 - Math.clz32(recent);
        if (held < count && oldest <= window - 1 - (count - held)) break;
        recent &= ~(1 << oldest);
        held--;
      }
      into[0] = recent;
      return completes;
    },
  };
}

function bitCount(bits: number): number {
  let n = bits - ((bits >>> 1) & 0x55555555);
  n = (n & 0x33333333) + ((n >>> 2) & 0x33333333);
  return Math.imul((n + (n >>> 4)) & 0x0f0f0f0f, 0x01010101) >>> 24;
}

/** `n separate ATOM` and `n overlapping ATOM`: completions so far, and the state of the operand. */
export function trackRepeats(
  kind: "separate" | "overlapping",
  count: number,
  operand: Automaton,
): Succession {
  const { columns, next, output } = operand;
  return {
    width: 2,
    columns,
    step: (pool, at, column, into) => {
      const index = (pool[at + 1] as number) * columns + column;
      const done = (pool[at] as number) + (output[index] as number);
      const completes = done === count;
      into[0] = completes ? 0 : done;
      into[1] = completes || (kind === "separate" && output[index] === 1) ? 0 : (next[index] as number);
      return completes ? 1 : 0;
    },
  };
}

/**
 * `A then B within n`: the state of A, and for every state of B how many more trials a copy of B that stands there may
 * still complete in (0: no copy). Of two copies in one state the later began serves for both. Without a limit the number
 * stays 1.
 */
export function trackThen(left: Automaton, right: Automaton, within: number | null): Succession {
  const { columns } = left;
  demandRoom(1 + right.states);
  const fresh = within ?? 1;
  return {
    width: 1 + right.states,
    columns,
    step: (pool, at, column, into) => {
      let completes = 0;
      into.fill(0);
      for (let state = 0; state < right.states; state++) {
        const rest = pool[at + 1 + state] as number;
        if (rest === 0) continue;
        const index = state * columns + column;
        if (right.output[index] === 1) completes = 1;
        const later = within === null ? 1 : rest - 1;
        const target = 1 + (right.next[index] as number);
        if (later > (into[target] as number)) into[target] = later;
      }
      const index = (pool[at] as number) * columns + column;
      into[0] = left.next[index] as number;
      if (left.output[index] === 1) into[1] = fresh;
      return completes;
    },
  };
}

/**
 * `A unless B within n`: the state of A, and for each of the last n completions of A that B has not answered, by its age,
 * the state of the copy of B begun after it, plus one (0: none waits).
 */
export function trackUnless(left: Automaton, right: Automaton, within: number): Succession {
  const { columns } = left;
  demandRoom(1 + within);
  return {
    width: 1 + within,
    columns,
    step: (pool, at, column, into) => {
      let completes = 0;
      for (let age = within - 1; age >= 0; age--) {
        const waiting = pool[at + 1 + age] as number;
        const index = (waiting - 1) * columns + column;
        const survives = waiting !== 0 && right.output[index] === 0;
        if (age === within - 1) completes = survives ? 1 : 0;
        else into[age + 2] = survives ? (right.next[index] as number) + 1 : 0;
      }
      const index = (pool[at] as number) * columns + column;
      into[0] = left.next[index] as number;
      into[1] = left.output[index] === 1 ? 1 : 0;
      return completes;
    },
  };
}

/** A state must fit the memory of an exploration with room for at least a thousand of its kind. */
function demandRoom(width: number): void {
  if (width * 1000 > MOST_STATE_WORDS) throw new TooManyStates();
}
