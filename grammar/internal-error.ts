/** A broken invariant of ours, never a mistake of the user's; thrown, and shown as a bug of Tocsin. */
export class InternalError extends Error {
  constructor(what: string) {
    super(`${what}; this is a bug in Tocsin`);
    this.name = "InternalError";
  }
}
