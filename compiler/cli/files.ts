/**
 * The command's hands: reading policies, writing results. A file is written under a temporary name beside its place and
 * renamed, so that an interrupted or failing command leaves the old content or the new, never half of it.
 */
import { randomBytes } from "node:crypto";
import {
  closeSync,
  existsSync,
  fsyncSync,
  openSync,
  readFileSync,
  renameSync,
  rmSync,
  statSync,
  writeSync,
} from "node:fs";
import { basename, dirname, join } from "node:path";
import { UsageError } from "./exit.ts";

/** Larger than any policy a person writes; protects memory. */
const LARGEST_TEXT = 16 * 1024 * 1024;

export const STANDARD_INPUT = "-";

/** The text of a file, or of standard input for `-`; null when it is not UTF-8 text. A missing file is a usage error. */
export function readText(path: string): string | null {
  const bytes = readBytes(path);
  try {
    return new TextDecoder("utf-8", { fatal: true, ignoreBOM: true }).decode(bytes);
  } catch {
    return null;
  }
}

function readBytes(path: string): Uint8Array {
  try {
    if (path === STANDARD_INPUT) return readFileSync(0);
    const { size } = statSync(path);
    if (size > LARGEST_TEXT)
      throw new UsageError(`${path}: ${size} bytes are more than a text of this kind may have`);
    return readFileSync(path);
  } catch (thrown) {
    if (thrown instanceof UsageError) throw thrown;
    throw new UsageError(`${path}: ${reasonOf(thrown)}`);
  }
}

/** Writes a file whole or not at all. */
export function writeWhole(path: string, content: string | Uint8Array): void {
  const temporary = join(dirname(path), `.${basename(path)}.${randomBytes(6).toString("hex")}.tmp`);
  try {
    const file = openSync(temporary, "wx");
    try {
      const bytes = typeof content === "string" ? new TextEncoder().encode(content) : content;
      for (let written = 0; written < bytes.length; ) written += writeSync(file, bytes, written);
      fsyncSync(file);
    } finally {
      closeSync(file);
    }
    renameSync(temporary, path);
  } catch (thrown) {
    rmSync(temporary, { force: true });
    throw new UsageError(`${path}: ${reasonOf(thrown)}`);
  }
}

/** Refuses to overwrite unless told. */
export function demandAbsent(path: string, force: boolean): void {
  if (!force && existsSync(path)) throw new UsageError(`${path} exists already; --force overwrites it`);
}

/** What the system says about a failed call, in words. */
export function reasonOf(thrown: unknown): string {
  const code = (thrown as NodeJS.ErrnoException).code ?? "";
  const words: Record<string, string> = {
    ENOENT: "there is no such file or folder",
    EISDIR: "this is a folder, not a file",
    EACCES: "permission denied",
    ENOTDIR: "a part of the path is not a folder",
    ENOSPC: "no space left on the device",
    ELOOP: "symbolic links lead in a circle",
    ENAMETOOLONG: "the name is too long",
  };
  return words[code] ?? (thrown instanceof Error ? thrown.message : String(thrown));
}
