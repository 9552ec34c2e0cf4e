/** `tocsin format FILE…`: canonical text, written in place when it differs. */
import { hasErrors } from "../../grammar/diagnostic.ts";
import { parse } from "../../grammar/parse.ts";
import { print } from "../../grammar/print.ts";
import { makeSource } from "../../grammar/source.ts";
import { EXIT, Stop } from "./exit.ts";
import { readText, STANDARD_INPUT, writeWhole } from "./files.ts";
import { notText } from "./load.ts";
import { say, showDiagnostics } from "./output.ts";

/** Formats all files that can be read as policies; the others are named, left alone, and the exit code is 1. */
export function runFormat(files: readonly string[], options: { verify?: true | undefined }): void {
  const clean = files.map((file) => formatFile(file, options.verify === true));
  if (clean.includes(false)) throw new Stop(EXIT.findings);
}

function formatFile(file: string, verify: boolean): boolean {
  const { text, isText } = readText(file);
  if (!isText) {
    showDiagnostics([notText(file, text)], process.stderr);
    return false;
  }
  const { tree, diagnostics } = parse(makeSource(file, text));
  if (hasErrors(diagnostics)) {
    showDiagnostics(diagnostics, process.stderr);
    return false;
  }
  const canonical = print(tree);
  if (verify) {
    if (canonical !== text) say(`${file} is not in canonical text; tocsin format ${file} rewrites it`);
    return canonical === text;
  }
  if (file === STANDARD_INPUT) process.stdout.write(canonical);
  else if (canonical !== text) {
    writeWhole(file, canonical);
    say(`${file} rewritten`);
  }
  return true;
}
