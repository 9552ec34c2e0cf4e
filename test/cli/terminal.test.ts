// What is for people alone: the line of progress and the colours, on a terminal and nowhere else.

import { afterEach, describe, expect, test, vi } from "vitest";
import { showDiagnostics, table } from "../../compiler/cli/output.ts";
import { followProgress } from "../../compiler/cli/progress.ts";
import { diagnose } from "../../grammar/diagnostic.ts";
import { makeSource } from "../../grammar/source.ts";

afterEach(() => vi.unstubAllEnvs());

async function* chunks(count: number, size: number): AsyncGenerator<Uint8Array, void, void> {
  for (let i = 0; i < count; i++) yield new Uint8Array(size);
}

/** What is written on standard error while an input of 1000 chunks is read, and how much came through. */
async function followed(isTerminal: boolean, bytes: number | null) {
  const written: string[] = [];
  const spied = vi.spyOn(process.stderr, "write").mockImplementation((text) => written.push(`${text}`) > 0);
  const { isTTY } = process.stderr;
  process.stderr.isTTY = isTerminal;
  try {
    const progress = followProgress(chunks(1000, 10), bytes);
    let read = 0;
    for await (const chunk of progress.counted) read += chunk.length;
    progress.clear();
    return { read, written };
  } finally {
    process.stderr.isTTY = isTTY;
    spied.mockRestore();
  }
}

describe("progress", () => {
  test("is a line that is written over and taken away", async () => {
    const { read, written } = await followed(true, 10_000);
    expect(read).toBe(10_000);
    expect(written.length).toBeGreaterThan(100);
    expect(written.length).toBeLessThan(250);
    expect(written).toContain(`\r[${"=".repeat(15)}${" ".repeat(15)}] 50 % of the data read`);
    expect(written.at(-2)).toContain("100 %");
    expect(written.at(-1)).toBe("\r\u001b[K");
    for (const text of written) expect(text).not.toContain("\n");
  });

  test.each([
    [false, 10_000],
    [true, null],
    [true, 0],
  ])("is silent where standard error is a terminal: %s, and the size is %s", async (isTerminal, bytes) => {
    expect(await followed(isTerminal, bytes)).toEqual({ read: 10_000, written: [] });
  });
});

describe("colours", () => {
  /** What is written of one diagnostic on a stream that is a terminal or none. */
  function shown(isTTY: boolean): string {
    const written: string[] = [];
    const stream = { isTTY, write: (text: string) => written.push(text) > 0 };
    const span = { source: makeSource("p.tocsin", "x"), start: 0, end: 1 };
    showDiagnostics([diagnose("syntax", span, "no")], stream as unknown as NodeJS.WriteStream);
    return written.join("");
  }

  test("are for a terminal that wants them", () => {
    vi.stubEnv("NO_COLOR", "");
    vi.stubEnv("TERM", "xterm");
    expect(shown(true)).toContain("\u001b[31merror[syntax]\u001b[39m");
    const plain = "error[syntax] p.tocsin:1:1\n  no\n  1: x\n     ^\n\n";
    expect(shown(false)).toBe(plain);
    vi.stubEnv("TERM", "dumb");
    expect(shown(true)).toBe(plain);
    vi.stubEnv("TERM", "xterm");
    vi.stubEnv("NO_COLOR", "1");
    expect(shown(true)).toBe(plain);
  });
});

test("a table is as wide as its widest cells, counted in characters", () => {
  const rows = [
    ["a", "n"],
    ["𝄞𝄞𝄞", "10"],
  ];
  expect(table(rows, [false, true])).toBe("a     n\n𝄞𝄞𝄞  10");
});
