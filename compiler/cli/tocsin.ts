/**
 * The command `tocsin`: runs what was asked and ends with an exit code; everything it has to say is printed.
 */
import { CommanderError } from "commander";
import { EXIT, Stop, UsageError } from "./exit.ts";
import { warn } from "./output.ts";
import { makeProgram } from "./program.ts";

/** Runs the command with its arguments and returns the exit code; everything it has to say is printed. */
async function main(arguments_: readonly string[]): Promise<number> {
  try {
    await makeProgram().parseAsync(arguments_, { from: "user" });
    return EXIT.clean;
  } catch (thrown) {
    if (thrown instanceof Stop) return thrown.code;
    if (thrown instanceof CommanderError) return thrown.exitCode === 0 ? EXIT.clean : EXIT.usage;
    if (thrown instanceof UsageError) {
      warn(`tocsin: ${thrown.message}`);
      return EXIT.usage;
    }
    warn(
      `tocsin: this is a bug in Tocsin, not in your policy; please report it with the text below and the file.`,
    );
    warn(thrown instanceof Error ? (thrown.stack ?? thrown.message) : String(thrown));
    return EXIT.bug;
  }
}

// A reader that has seen enough (`tocsin … | head`) closes the pipe; that is no error.
for (const stream of [process.stdout, process.stderr])
  stream.on("error", (error: NodeJS.ErrnoException) => {
    if (error.code === "EPIPE") process.exit(EXIT.clean);
    throw error;
  });

process.exitCode = await main(process.argv.slice(2));
