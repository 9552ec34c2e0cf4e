/**
 * The command's hands: reading policies, writing results. A file is written under a temporary name beside its place and
 * renamed, so that an interrupted or failing command leaves the old content or the new, never half of it.
 */
import { randomBytes } from "node:crypto";
import {
  accessSync,
  closeSync,
  constants,
  existsSync,
  fsyncSync,
  openSync,
  readSync,
  renameSync,
  rmSync,
  statSync,
  writeSync,
} from "node:fs";
import { dirname, join } from "node:path";
import { UsageError } from "./exit.ts";

/** Larger than any policy a person writes; protects time and memory. */
const LARGEST_POLICY = 2 ** 20;

export const STANDARD_INPUT = "-";

/** A file's text; where its bytes are not all UTF-8, that is said, and U+FFFD stands for those that are not. */
export type FileText = { readonly text: string; readonly isText: boolean };

/** The text of a file, or of standard input for `-`. One that is missing, or longer than `mostBytes`, is a usage error. */
export function readText(path: string, mostBytes = LARGEST_POLICY): FileText {
  const bytes = readBytes(path, mostBytes);
  try {
    return { text: new TextDecoder("utf-8", { fatal: true, ignoreBOM: true }).decode(bytes), isText: true };
  } catch {
    return { text: new TextDecoder("utf-8", { ignoreBOM: true }).decode(bytes), isText: false };
  }
}

function readBytes(path: string, mostBytes: number): Uint8Array {
  try {
    if (path === STANDARD_INPUT) return readWhole(0, path, mostBytes);
    const file = openSync(path, "r");
    try {
      return readWhole(file, path, mostBytes);
    } finally {
      closeSync(file);
    }
  } catch (thrown) {
    if (thrown instanceof UsageError) throw thrown;
    throw new UsageError(`${path}: ${reasonOf(thrown)}`);
  }
}

/** Reads to the end, which a device or a pipe may not have: no further than allowed. */
function readWhole(file: number, path: string, mostBytes: number): Uint8Array {
  const chunks: Uint8Array[] = [];
  let total = 0;
  for (;;) {
    const chunk = new Uint8Array(65536);
    const count = readChunk(file, chunk);
    if (count === 0) return Buffer.concat(chunks);
    chunks.push(chunk.subarray(0, count));
    total += count;
    if (total > mostBytes)
      throw new UsageError(`${path}: longer than the ${mostBytes.toLocaleString("en")} bytes it may have`);
  }
}

/** A pipe whose writer is slow answers EAGAIN until there is more. */
function readChunk(file: number, chunk: Uint8Array): number {
  for (;;) {
    try {
      return readSync(file, chunk);
    } catch (thrown) {
      const { code } = thrown as NodeJS.ErrnoException;
      if (code === "EOF") return 0;
      if (code !== "EAGAIN") throw thrown;
      Atomics.wait(new Int32Array(new SharedArrayBuffer(4)), 0, 0, 10);
    }
  }
}

/** Writes a file whole or not at all, from one piece of text or several. */
export function writeWhole(path: string, content: string | Iterable<string>): void {
  const temporary = join(dirname(path), `.tocsin-${randomBytes(8).toString("hex")}.tmp`);
  try {
    writeNew(temporary, typeof content === "string" ? [content] : content);
    renameSync(temporary, path);
  } catch (thrown) {
    if (existsSync(temporary)) rmSync(temporary);
    throw ofSystem(thrown) ? new UsageError(`${path}: ${reasonOf(thrown)}`) : thrown;
  }
}

function writeNew(path: string, pieces: Iterable<string>): void {
  const file = openSync(path, "wx");
  try {
    for (const piece of pieces) {
      const bytes = new TextEncoder().encode(piece);
      for (let written = 0; written < bytes.length; ) written += writeSync(file, bytes, written);
    }
    fsyncSync(file);
  } finally {
    closeSync(file);
  }
}

/** Refuses a place where nothing can be written, before long work is done for it. */
export function demandWritable(path: string): void {
  const folder = dirname(path);
  try {
    accessSync(folder, constants.W_OK);
  } catch (thrown) {
    throw new UsageError(`${path}: ${reasonOf(thrown)}`);
  }
  if (!statSync(folder).isDirectory()) throw new UsageError(`${path}: ${WORDS.ENOTDIR}`);
  if (existsSync(path) && statSync(path).isDirectory()) throw new UsageError(`${path}: ${WORDS.EISDIR}`);
}

/** Refuses to overwrite unless told. */
export function demandAbsent(path: string, force: boolean): void {
  if (!force && existsSync(path)) throw new UsageError(`${path} exists already; --force overwrites it`);
}

/** Whether it is the system that refused, and no fault of ours. */
function ofSystem(thrown: unknown): boolean {
  return thrown instanceof Error && "errno" in thrown;
}

const WORDS: Readonly<Record<string, string>> = {
  ENOENT: "there is no such file or folder",
  EISDIR: "this is a folder, not a file",
  EACCES: "permission denied",
  EROFS: "nothing can be written on this device",
  ENOTDIR: "a part of the path is not a folder",
  ENOSPC: "no space left on the device",
  ELOOP: "symbolic links lead in a circle",
  ENAMETOOLONG: "the name is too long",
};

/** What the system says about a failed call, in words. */
export function reasonOf(thrown: unknown): string {
  const { code = "" } = thrown as NodeJS.ErrnoException;
  return WORDS[code] ?? (thrown instanceof Error ? thrown.message : String(thrown));
}
