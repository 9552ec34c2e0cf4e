/** The runtime's entry, published as `tocsin/runtime`: everything an application needs to run a machine file. */
export type { Reason } from "./attribution.ts";
export {
  Detector,
  type DetectorOptions,
  type LetterColumn,
  NO_LETTER,
  REFUSED,
  type ValueColumn,
} from "./detector.ts";
export {
  MACHINE_FORMAT,
  MACHINE_VERSION,
  type MachineFile,
  MOST_SIGNALS,
  MOST_SYMBOLS,
} from "./machine-file.ts";
export { type Opened, type OpenMachine, openMachine } from "./open.ts";
export type { Problem, ProblemCode } from "./problems.ts";
export type { Snapshot } from "./snapshot.ts";
export { letterOf, type Statistic, type Value } from "./statistics.ts";
