/**
 * The detector: a machine, where it stands, and nothing else. A reading comes in, the set of signals it raises goes out as
 * a number: bit j is signal j, 0 is none, and `REFUSED` (the top bit, alone) says that a value was missing and the policy
 * refuses that; the detector then stands as it stood before. With one or more statistics of any kind, a reading costs one
 * classification a value and one look-up, and allocates nothing.
 *
 * A value is missing when it is no number or NaN (zones), or no text of a letter (letters). It becomes the letter the policy
 * gives it, or else makes the whole trial missing: `refuse` and `skip` leave the detector as it was, `break` clears memory.
 * No reading is ever an error; only calls that no data can cause are (arrays of different lengths, a wrong option).
 */
import { attribute, type Reason } from "./attribution.ts";
import { type Cursor, stepLetters, stepValues } from "./loops.ts";
import type { OpenMachine } from "./open.ts";
import type { Problem } from "./problems.ts";
import { breakParts, clearParts, type Parts, startParts, stepParts } from "./reasons.ts";
import { checkSnapshot, type Snapshot, takeSnapshot } from "./snapshot.ts";
import { letterOf, type Value } from "./statistics.ts";

/** Returned for a trial with a missing value, under `missing refuse`. */
export const REFUSED = 0x80000000;
/** No letter of any statistic: stands for a missing value where letters are given by index. */
export const NO_LETTER = -1;

export type DetectorOptions = {
  /** Keep what is needed to say why a signal was raised; costs a step of every condition at every trial. */
  readonly why?: boolean;
  /** How many trials to keep for that, 1 to 65,536; 1,000 unless said. */
  readonly remember?: number;
};

/** Values of one statistic, a trial each: numbers for zones, names or texts for letters. */
export type ValueColumn = Float64Array | readonly Value[];
/** Letters of one statistic by index, a trial each; an index that is no letter is a missing value. */
export type LetterColumn = Uint8Array | Uint16Array;

const MOST_REMEMBERED = 65536;

export class Detector {
  readonly machine: OpenMachine;
  #offset = 0;
  #trial = 0;
  #passedOver = 0;
  #parts: Parts | null;
  #partsAgree = true;

  constructor(machine: OpenMachine, options: DetectorOptions = {}) {
    const { why = false, remember = 1000 } = options;
    if (!Number.isInteger(remember) || remember < 1 || remember > MOST_REMEMBERED) {
      throw new RangeError(`remember: a whole number from 1 to ${MOST_REMEMBERED} is due`);
    }
    this.machine = machine;
    this.#parts = why ? startParts(machine.reasons, remember) : null;
  }

  /** The number of trials read; a reading refused or skipped is none, a broken trial is one. */
  get trial(): number {
    return this.#trial;
  }

  /** The number of readings: trials, and those refused or skipped. */
  get readings(): number {
    return this.#trial + this.#passedOver;
  }

  get state(): number {
    return this.#offset / this.machine.tables.columns;
  }

  /** False once the parts under `reasons` raised other signals than the tables: no compiler made that file. */
  get partsAgree(): boolean {
    return this.#partsAgree;
  }

  /** Reads a trial, one value for each statistic in declared order; values left out are missing, others too many unread. */
  observe(first?: Value, ...others: readonly Value[]): number {
    const { statistics } = this.machine;
    let symbol = 0;
    for (let i = 0; i < statistics.length; i++) {
      const statistic = statistics[i]!;
      const letter = letterOf(statistic, i === 0 ? first : others[i - 1]);
      if (letter < 0) return this.#miss();
      symbol = symbol * statistic.letters.length + letter;
    }
    return this.#step(symbol);
  }

  /** Reads a trial given as letters by index from 0 in declared order; any number that is no letter is a missing value. */
  observeLetter(first?: number, ...others: readonly number[]): number {
    const { statistics } = this.machine;
    let symbol = 0;
    for (let i = 0; i < statistics.length; i++) {
      const { letters, missing } = statistics[i]!;
      const given = i === 0 ? first : others[i - 1];
      const letter = isLetter(given, letters.length) ? given : missing;
      if (letter < 0) return this.#miss();
      symbol = symbol * letters.length + letter;
    }
    return this.#step(symbol);
  }

  /** Reads a trial of which every value is missing. */
  observeMissing(): number {
    return this.observe();
  }

  /** Reads a trial for each index of the values, one column for each statistic, and writes what each raises. */
  observeAll(values: Float64Array | readonly ValueColumn[], raises: Uint32Array): void {
    const { machine } = this;
    const columns = values instanceof Float64Array ? [values] : values;
    const count = this.#countOf(columns, raises);
    const [statistic, only] = [machine.statistics[0]!, columns[0]!];
    if (
      columns.length === 1 &&
      this.#parts === null &&
      statistic.kind === "zones" &&
      only instanceof Float64Array
    ) {
      const loop = (cursor: Cursor) => stepValues(machine.tables, statistic, only, raises, cursor);
      this.#run(count, raises, loop);
      return;
    }
    for (let at = 0; at < count; at++) {
      let symbol = 0;
      for (let i = 0; i < columns.length && symbol >= 0; i++) {
        symbol = this.#join(symbol, i, letterOf(machine.statistics[i]!, columns[i]![at]));
      }
      raises[at] = symbol < 0 ? this.#miss() : this.#step(symbol);
    }
  }

  /** The same for letters given by index. */
  observeLetters(letters: LetterColumn | readonly LetterColumn[], raises: Uint32Array): void {
    const { tables, statistics } = this.machine;
    const columns: readonly LetterColumn[] =
      letters instanceof Uint8Array || letters instanceof Uint16Array ? [letters] : letters;
    const count = this.#countOf(columns, raises);
    if (columns.length === 1 && this.#parts === null) {
      const [only, { letters: names }] = [columns[0]!, statistics[0]!];
      const loop = (cursor: Cursor) => stepLetters(tables, only, names.length, raises, cursor);
      this.#run(count, raises, loop);
      return;
    }
    for (let at = 0; at < count; at++) {
      let symbol = 0;
      for (let i = 0; i < columns.length && symbol >= 0; i++) {
        const given = columns[i]![at]!;
        const { letters: names, missing } = statistics[i]!;
        symbol = this.#join(symbol, i, given < names.length ? given : missing);
      }
      raises[at] = symbol < 0 ? this.#miss() : this.#step(symbol);
    }
  }

  /** Why the last reading raised what it raised; empty when it raised nothing, or when the detector is not asked why. */
  because(): readonly Reason[] {
    return this.#parts === null ? [] : attribute(this.#parts, this.machine.signals, this.#trial);
  }

  /** The names of the signals in a set. */
  namesOf(raises: number): readonly string[] {
    return this.machine.signals.filter((_, j) => raises !== REFUSED && (raises & (1 << j)) !== 0);
  }

  /** Clears all memory, quiet times and the place in the block, as `clear before` does; the count of trials goes on. */
  clear(): void {
    this.#offset = 0;
    if (this.#parts === null) return;
    clearParts(this.#parts, this.#trial + 1);
    this.#parts.raises = 0;
  }

  /** Where the detector stands, as a plain object that JSON carries unchanged. */
  snapshot(): Snapshot {
    const standing = {
      state: this.state,
      trial: this.#trial,
      passedOver: this.#passedOver,
      parts: this.#parts,
    };
    return takeSnapshot(this.machine, standing);
  }

  /** Goes on from a snapshot, given as an object or as JSON text; with any problem the detector stays as it was. */
  restore(snapshot: unknown): readonly Problem[] {
    const problems: Problem[] = [];
    const remember = this.#parts === null ? null : this.#parts.ring.length;
    const standing = checkSnapshot(this.machine, snapshot, remember, problems);
    if (standing === undefined) return problems;
    this.#offset = standing.state * this.machine.tables.columns;
    this.#trial = standing.trial;
    this.#passedOver = standing.passedOver;
    this.#parts = standing.parts;
    return [];
  }

  /** A loop reads until a missing value; what that does is done here, and the loop goes on. */
  #run(count: number, raises: Uint32Array, loop: (cursor: Cursor) => void): void {
    const { missing } = this.machine.statistics[0]!;
    const cursor = { offset: this.#offset, at: 0 };
    while (true) {
      const before = cursor.at;
      loop(cursor);
      this.#offset = cursor.offset;
      this.#trial += cursor.at - before;
      if (cursor.at >= count) return;
      raises[cursor.at] = missing < 0 ? this.#miss() : this.#step(missing);
      cursor.offset = this.#offset;
      cursor.at++;
    }
  }

  #step(symbol: number): number {
    const { columnOf, next, raises } = this.machine.tables;
    const entry = this.#offset + columnOf[symbol]!;
    const raised = raises[entry]!;
    this.#offset = next[entry]!;
    this.#trial++;
    if (this.#parts !== null && stepParts(this.#parts, symbol, this.#trial) !== raised)
      this.#partsAgree = false;
    return raised;
  }

  /** A trial that is missing as a whole. */
  #miss(): number {
    const { missing, tables } = this.machine;
    if (missing !== "break" || tables.broken === null) {
      this.#passedOver++;
      if (this.#parts !== null) this.#parts.raises = 0;
      return missing === "refuse" ? REFUSED : 0;
    }
    this.#offset = tables.broken[this.state]!;
    this.#trial++;
    if (this.#parts !== null) breakParts(this.#parts, this.#trial);
    return 0;
  }

  /** The symbol so far with one more letter, or −1 once a value is missing. */
  #join(symbol: number, statistic: number, letter: number): number {
    return letter < 0 ? -1 : symbol * this.machine.statistics[statistic]!.letters.length + letter;
  }

  #countOf(columns: readonly { readonly length: number }[], raises: Uint32Array): number {
    const due = this.machine.statistics.length;
    if (columns.length !== due) throw new RangeError(`${due} columns are due, one for each statistic`);
    const count = columns[0]!.length;
    if (columns.some((column) => column.length !== count))
      throw new RangeError("the columns differ in length");
    if (raises.length < count)
      throw new RangeError(`raises: room for ${count} is due, not for ${raises.length}`);
    return count;
  }
}

function isLetter(letter: number | undefined, count: number): letter is number {
  return letter !== undefined && letter >= 0 && letter < count && Number.isInteger(letter);
}
