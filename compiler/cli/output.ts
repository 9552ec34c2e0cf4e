/** What the command prints: lines for people, diagnostics with their place, colour only on a terminal. */
import picocolors from "picocolors";
import type { Diagnostic } from "../../grammar/diagnostic.ts";
import { renderDiagnostic } from "../../grammar/render.ts";

const coloured = (stream: NodeJS.WriteStream) =>
  stream.isTTY === true && !process.env.NO_COLOR && process.env.TERM !== "dumb";

/** Colours for a stream: none unless it is a terminal and NO_COLOR is unset. */
function coloursFor(stream: NodeJS.WriteStream): ReturnType<typeof picocolors.createColors> {
  return picocolors.createColors(coloured(stream));
}

/** Writes a line to standard output. */
export function say(line = ""): void {
  process.stdout.write(`${line}\n`);
}

/** Writes a line to standard error. */
export function warn(line = ""): void {
  process.stderr.write(`${line}\n`);
}

/** Writes JSON to standard output, one object a line or indented. */
export function sayJson(value: unknown, indent = 2): void {
  process.stdout.write(`${JSON.stringify(value, null, indent)}\n`);
}

/** As many diagnostics of a file as anyone reads; what is no policy at all may have a hundred thousand. */
export const MOST_SHOWN = 1000;

/** Shows diagnostics on a stream, each with its source line and a blank line after it. */
export function showDiagnostics(diagnostics: readonly Diagnostic[], stream: NodeJS.WriteStream): void {
  const colours = coloursFor(stream);
  for (const diagnostic of diagnostics.slice(0, MOST_SHOWN))
    stream.write(
      `${renderDiagnostic(diagnostic, {
        paint: {
          error: colours.red,
          warning: colours.yellow,
          note: colours.cyan,
          strong: colours.bold,
          quiet: colours.dim,
        },
      })}\n\n`,
    );
  const more = diagnostics.length - MOST_SHOWN;
  if (more > 0) stream.write(`and ${more.toLocaleString("en")} more\n\n`);
}

/** A text table: columns padded to their widest cell, numbers (`right`) flush right, two spaces between. */
export function table(rows: readonly (readonly string[])[], right: readonly boolean[] = []): string {
  const widths: number[] = [];
  for (const row of rows)
    row.forEach((cell, column) => {
      widths[column] = Math.max(widths[column] ?? 0, [...cell].length);
    });
  const pad = (cell: string, column: number) => {
    const space = " ".repeat((widths[column] ?? 0) - [...cell].length);
    return right[column] ? space + cell : cell + space;
  };
  return rows.map((row) => row.map(pad).join("  ").trimEnd()).join("\n");
}
