/** `tocsin check FILE…`: everything there is to say about policies and libraries. */
import type { Diagnostic } from "../../grammar/diagnostic.ts";
import { positionAt } from "../../grammar/source.ts";
import { EXIT, Stop, UsageError } from "./exit.ts";
import { type LoadOptions, load } from "./load.ts";
import { MOST_SHOWN, say, sayJson, showDiagnostics, warn } from "./output.ts";

type Options = LoadOptions & { json?: true | undefined; strict?: true | undefined };
type Checked = { file: string; ok: boolean; summary: string; diagnostics: readonly Diagnostic[] };

/** Checks all files; exit code 1 when one has an error, or with `--strict` a warning, 2 when one could not be read. */
export async function runCheck(files: readonly string[], options: Options): Promise<void> {
  const checked: Checked[] = [];
  const unread: UsageError[] = [];
  for (const file of files) {
    try {
      const result = await checkFile(file, options);
      checked.push(result);
      if (!options.json) show(result);
    } catch (thrown) {
      if (!(thrown instanceof UsageError)) throw thrown;
      unread.push(thrown);
    }
  }
  if (options.json) sayJson({ files: checked.map(inJson) });
  for (const { message } of unread) warn(`tocsin: ${message}`);
  if (unread.length > 0) throw new Stop(EXIT.usage);
  if (checked.some(({ ok }) => !ok)) throw new Stop(EXIT.findings);
}

async function checkFile(file: string, options: Options): Promise<Checked> {
  const compilation = load(file, options);
  const { policy, library, machine } = compilation;
  const { findingsOf } = await import("../review/findings.ts");
  const diagnostics = findingsOf(compilation, options.maxStates);
  const count = (severity: string) => diagnostics.filter((found) => found.severity === severity).length;
  const ok = count("error") === 0 && !(options.strict && count("warning") > 0);
  const what = library ? "library" : `policy ${policy?.name ?? ""}`;
  const size = machine ? `, ${plural(machine.states, "state")}` : "";
  const findings = [plural(count("error"), "error"), plural(count("warning"), "warning")]
    .filter((words) => !words.startsWith("0"))
    .join(", ");
  return { file, ok, summary: findings || `clean (${what}${size})`, diagnostics };
}

function plural(count: number, word: string): string {
  return `${count} ${word}${count === 1 ? "" : "s"}`;
}

function show({ file, summary, diagnostics }: Checked): void {
  showDiagnostics(diagnostics, process.stdout);
  say(`${file}: ${summary}`);
}

function inJson({ file, ok, diagnostics }: Checked): object {
  return {
    file,
    ok,
    ...(diagnostics.length > MOST_SHOWN ? { more: diagnostics.length - MOST_SHOWN } : {}),
    diagnostics: diagnostics
      .slice(0, MOST_SHOWN)
      .map(({ code, severity, span, message, hint, related, data }) => ({
        code,
        severity,
        message,
        hint: hint ?? null,
        file: span.source.path,
        ...placeOf(span),
        related: (related ?? []).map((other) => ({
          message: other.message,
          file: other.span.source.path,
          ...placeOf(other.span),
        })),
        data: data ?? {},
      })),
  };
}

function placeOf({ source, start, end }: Diagnostic["span"]): object {
  const from = positionAt(source, start);
  const to = positionAt(source, end);
  return { line: from.line, column: from.column, endLine: to.line, endColumn: to.column };
}
