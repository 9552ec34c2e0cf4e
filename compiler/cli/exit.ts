/** Exit codes of the command, and the two ways a command ends early. */

export const EXIT = { clean: 0, findings: 1, usage: 2, bug: 3 } as const;
export type ExitCode = (typeof EXIT)[keyof typeof EXIT];

/** The user asked for something that cannot be done: one clear message, exit code 2. */
export class UsageError extends Error {}

/** The command did what it could and has already said what is wrong: exit with this code. */
export class Stop extends Error {
  readonly code: ExitCode;

  constructor(code: ExitCode) {
    super(`exit ${code}`);
    this.code = code;
  }
}
