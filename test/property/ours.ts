/**
 * The one place where the property tests meet the compiler and the detector: text and rows in, what they say out.
 */
import { compile, type Machine, machineFile } from "../../compiler/compile.ts";
import type { AttributedMachine } from "../../compiler/machine/automaton.ts";
import { buildAttributedMachine } from "../../compiler/machine/build.ts";
import { Detector, type OpenMachine, openMachine, REFUSED } from "../../runtime/index.ts";

/** A letter for each alphabet, null where the value is missing. */
type Row = readonly (string | null)[];

type Said = {
  readonly raised: readonly string[];
  readonly because: readonly { readonly rule: string; readonly trials: readonly [number, number] }[];
};

export type Ours = {
  readonly machine: Machine;
  /** One row after a state of the machine's tables. */
  readonly follow: (
    state: number,
    row: Row,
  ) => { readonly state: number; readonly raised: readonly string[] };
  /** What a new detector says of each row. */
  readonly raisesOf: (rows: readonly Row[]) => readonly Said[];
  /** By row, the rules a raise is attributed to by the machine that the analysis of first causes uses; null: too large. */
  readonly causesOf: (rows: readonly Row[]) => readonly (readonly string[])[] | null;
  /** The signals a new detector raises for each row of values: a number for zones, a text for letters. */
  readonly raisesOfValues: (
    rows: readonly (readonly (number | string)[])[],
  ) => readonly (readonly string[])[];
};

/** Compiles a text that must have no error; null when the machine does not fit the state budget. */
export function ours(text: string, mostStates = 100_000): Ours | null {
  const { policy, machine, diagnostics } = compile(text, { mostStates });
  if (policy === undefined || machine === undefined) {
    const errors = diagnostics.filter(({ severity }) => severity === "error");
    if (policy !== undefined && errors.some(({ code }) => code === "too_many_states")) return null;
    const words = errors.map(({ code, message }) => `${code}: ${message}`).join("\n");
    throw new Error(`the policy does not compile\n${words}\n\n${text}`);
  }
  const { machine: open, problems } = openMachine(JSON.stringify(machineFile(policy, machine)));
  if (open === undefined) throw new Error(`the machine file is refused: ${JSON.stringify(problems)}`);
  let attributed: AttributedMachine | null | undefined;
  return {
    machine,
    follow: (state, row) => follow(machine, open, state, row),
    raisesOf: (rows) => raisesOf(open, rows),
    causesOf: (rows) => {
      attributed ??= buildAttributedMachine(policy, { mostStates }).value ?? null;
      return attributed === null ? null : causesOf(attributed, open, rows);
    },
    raisesOfValues: (rows) => {
      const detector = new Detector(open);
      return rows.map((row) => namesOf(detector, detector.observe(...row)));
    },
  };
}

/** By alphabet: the letter's index, or that of the one that stands for missing, or −1. */
function indices(open: OpenMachine, row: Row): readonly number[] {
  return open.statistics.map(({ letters, missing }, index) => {
    const letter = row[index] ?? null;
    return letter === null ? missing : letters.indexOf(letter);
  });
}

/** Where a row leads in a machine, and what it gives out there; 0 for a broken, refused or skipped one. */
function move(
  machine: Machine | AttributedMachine,
  open: OpenMachine,
  state: number,
  row: Row,
): { readonly state: number; readonly output: number } {
  const letters = indices(open, row);
  if (letters.includes(-1)) return { state: machine.broken?.[state] ?? state, output: 0 };
  const sizes = open.statistics.map((statistic) => statistic.letters.length);
  const symbol = letters.reduce((sum, letter, index) => sum * sizes[index]! + letter, 0);
  const at = state * machine.columns + machine.columnOf[symbol]!;
  return { state: machine.next[at]!, output: machine.output[at]! };
}

function follow(machine: Machine, open: OpenMachine, from: number, row: Row): ReturnType<Ours["follow"]> {
  const { state, output } = move(machine, open, from, row);
  return { state, raised: open.signals.filter((_, signal) => output & (1 << signal)) };
}

function causesOf(
  machine: AttributedMachine,
  open: OpenMachine,
  rows: readonly Row[],
): readonly (readonly string[])[] {
  let state = 0;
  return rows.map((row) => {
    const moved = move(machine, open, state, row);
    state = moved.state;
    return machine.attributions[moved.output]!.map(({ condition }) => condition);
  });
}

function namesOf(detector: Detector, raises: number): readonly string[] {
  return raises === REFUSED ? [] : detector.namesOf(raises);
}

/** Row by row, asked why; and all at once, which must raise the same. */
function raisesOf(open: OpenMachine, rows: readonly Row[]): readonly Said[] {
  const detector = new Detector(open, { why: true });
  const atOnce = new Uint32Array(rows.length);
  const columns = open.statistics.map((_, index) =>
    Uint8Array.from(rows, (row) => {
      const letter = indices(open, row)[index]!;
      return letter === -1 ? 255 : letter;
    }),
  );
  new Detector(open).observeLetters(columns, atOnce);
  return rows.map((row, at) => {
    const raises = detector.observeLetter(...indices(open, row));
    if (!detector.partsAgree) throw new Error(`the parts and the tables disagree at row ${at + 1}`);
    if (raises !== atOnce[at]) throw new Error(`row by row and all at once disagree at row ${at + 1}`);
    const because = detector.because().map(({ rule, from, to }) => ({ rule, trials: [from, to] as const }));
    return { raised: namesOf(detector, raises), because };
  });
}
