/** Every whole policy in the language reference is right, and in canonical text means the same. */
import { readFileSync } from "node:fs";
import { join } from "node:path";
import { describe, expect, it } from "vitest";
import { compile } from "../../compiler/compile.ts";
import { checkContracts } from "../../compiler/review/contracts.ts";
import { parse } from "../../grammar/parse.ts";
import { print } from "../../grammar/print.ts";
import { makeSource } from "../../grammar/source.ts";

const files = ["grammar/README.md", "README.md"];
const snippets = files.flatMap((file) => {
  const text = readFileSync(join(import.meta.dirname, "../..", file), "utf8");
  const blocks = [...text.matchAll(/^```(?:tocsin)?\n(# Invented[\s\S]*?)^```$/gm)];
  return blocks.map((block) => ({
    file,
    text: block[1] ?? "",
    name: /policy (\w+)/.exec(block[1] ?? "")?.[1] ?? "?",
  }));
});

describe("snippets of the documentation", () => {
  it("are found", () => expect(snippets.length).toBeGreaterThanOrEqual(6));

  it.each(snippets)("$file: $name", ({ text }) => {
    const { policy, machine, diagnostics } = compile(text);
    const contracts = policy && machine ? checkContracts(policy, machine, 2_000_000) : [];
    expect(
      [...diagnostics, ...contracts]
        .map(({ code, message }) => `${code}: ${message}`)
        .filter((said) => !said.startsWith("missing_alters_blocks")),
    ).toEqual([]);
    const canonical = print(parse(makeSource("snippet", text)).tree);
    expect(compile(canonical).machine).toEqual(machine);
  });
});
