/**
 * Allowances: warnings a policy accepts, with a reason.
 * In: `allow` declarations; later, all warnings of all stages. Out: the allowances; later, what is left of the warnings,
 * and a warning for every allowance that has nothing to allow any more.
 */
import { type Code, catalogue, type Diagnostic, diagnose } from "../../grammar/diagnostic.ts";
import { nearest } from "../../grammar/spelling.ts";
import type { Allowance } from "../policy.ts";
import type { Of } from "./declarations.ts";
import type { Scope } from "./scope.ts";

function isCode(text: string): text is Code {
  return Object.hasOwn(catalogue, text);
}

/** The codes that can be allowed. */
const warningCodes: readonly Code[] = Object.keys(catalogue)
  .filter(isCode)
  .filter((code) => catalogue[code].severity === "warning" && code !== "allow_idle");

/** Checks allowances for form. */
export function checkAllows(allows: readonly Of<"allow">[], scope: Scope): Allowance[] {
  return allows.map(({ code, reason, span }) => {
    if (!warningCodes.some((known) => known === code.text)) reportUnknown(code, scope);
    if (reason.value.trim() === "") {
      scope.report("allow_reason", reason.span, `"${code.text}" is allowed without a reason`, {
        hint: `say why the warning is accepted: \`allow ${code.text} "because …"\``,
        data: { code: code.text },
      });
    }
    return { code: code.text, reason, span };
  });
}

function reportUnknown(code: Of<"allow">["code"], scope: Scope): void {
  const near = nearest(code.text, warningCodes);
  const known = `the warnings are ${warningCodes.join(", ")}`;
  if (isCode(code.text)) {
    const kind =
      code.text === "allow_idle"
        ? "what a needless `allow` is told"
        : `the code of ${article(catalogue[code.text].severity)}`;
    const message = `"${code.text}" is ${kind}, and only warnings can be allowed`;
    scope.report("allow_unknown", code.span, message, { hint: known, data: { code: code.text } });
  } else {
    const hint = near ? `did you mean \`${near}\`?` : known;
    scope.report("allow_unknown", code.span, `no warning has the code "${code.text}"`, {
      hint,
      data: { code: code.text },
    });
  }
}

function article(severity: string): string {
  return severity === "error" ? "an error" : `a ${severity}`;
}

/** Takes the allowed warnings out of what all stages have to say; warns of allowances that are idle. */
export function applyAllowances(
  allowances: readonly Allowance[],
  diagnostics: readonly Diagnostic[],
): Diagnostic[] {
  const allowed = new Set(allowances.map(({ code }) => code));
  const found = new Set(diagnostics.map(({ code }): string => code));
  const seen = new Set<string>();
  const idle = allowances.filter(({ code }) => {
    const isIdle = !found.has(code) || seen.has(code);
    seen.add(code);
    return isIdle;
  });
  return [
    ...diagnostics.filter(({ code, severity }) => severity !== "warning" || !allowed.has(code)),
    ...idle.map(({ code, span }) =>
      diagnose("allow_idle", span, `there is no warning "${code}" to allow any more`, {
        hint: "take the `allow` away",
        data: { code },
      }),
    ),
  ];
}
