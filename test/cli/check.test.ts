// `tocsin check`: what it prints, as JSON too, and its exit codes.

import { describe, expect, test } from "vitest";
import { COIN, placeWith } from "./command.ts";

const WARNED = COIN.replace("2 heads\n", "2 heads\nsignal none when heads and tails\n");
const BROKEN = `policy coin
letters toss: heads, tails
signal pair when 2 hedas
signal pair when tails
`;
const { tocsin, write } = placeWith({
  "coin.tocsin": COIN,
  "warned.tocsin": WARNED,
  "broken.tocsin": BROKEN,
  "user.tocsin": `policy uses\nuse "rules.tocsin"\nletters toss: heads, tails\nsignal pair when twice\n`,
  "rules.tocsin": "rule twice = 2 heads\n",
});

describe("exit codes", () => {
  test.each([
    [["coin.tocsin"], 0],
    [["warned.tocsin"], 0],
    [["--strict", "coin.tocsin"], 0],
    [["--strict", "warned.tocsin"], 1],
    [["broken.tocsin"], 1],
    [["user.tocsin", "rules.tocsin"], 0],
    [["coin.tocsin", "broken.tocsin"], 1],
    [["coin.tocsin", "nowhere.tocsin"], 2],
    [["."], 2],
    [["--max-states", "1", "coin.tocsin"], 1],
    [["--let", "q=1", "coin.tocsin"], 1],
  ])("check %j", (args, status) => {
    expect(tocsin(["check", ...args]).status).toBe(status);
    expect(tocsin(["check", "--json", ...args]).status).toBe(status);
  });
});

test("says of each file what it is", () => {
  expect(tocsin(["check", "coin.tocsin", "user.tocsin", "rules.tocsin"])).toEqual({
    status: 0,
    stdout: `coin.tocsin: clean (policy coin, 2 states)
user.tocsin: clean (policy uses, 2 states)
note[library_names] rules.tocsin:1:1
  this library leaves "heads" to its user
  1: rule twice = 2 heads
     ^
  hint: a policy that uses it declares them
  see rules.tocsin:1:16: "heads" is first mentioned here
  1: rule twice = 2 heads
                    ^^^^^

rules.tocsin: clean (library)
`,
    stderr: "",
  });
});

test("goes on to the other files when one is missing", () => {
  const { status, stdout, stderr } = tocsin(["check", "nowhere.tocsin", "warned.tocsin"]);
  expect(status).toBe(2);
  expect(stderr).toBe("tocsin: nowhere.tocsin: there is no such file or folder\n");
  expect(stdout).toContain("warned.tocsin: 1 warning\n");
});

test("--json: a file each, a diagnostic each, with places that begin at 1", () => {
  const { stdout } = tocsin(["check", "--json", "coin.tocsin", "broken.tocsin"]);
  expect(JSON.parse(stdout)).toEqual({
    files: [
      { file: "coin.tocsin", ok: true, diagnostics: [] },
      {
        file: "broken.tocsin",
        ok: false,
        diagnostics: [
          {
            code: "unknown_name",
            severity: "error",
            message: expect.stringContaining('"hedas"'),
            hint: expect.stringContaining("did you mean `heads`?"),
            file: "broken.tocsin",
            line: 3,
            column: 20,
            endLine: 3,
            endColumn: 25,
            related: [],
            data: expect.any(Object),
          },
          {
            code: "name_taken",
            severity: "error",
            message: expect.stringContaining('"pair"'),
            hint: expect.any(String),
            file: "broken.tocsin",
            line: 4,
            column: 8,
            endLine: 4,
            endColumn: 12,
            related: [
              {
                message: expect.any(String),
                file: "broken.tocsin",
                line: 3,
                column: 8,
                endLine: 3,
                endColumn: 12,
              },
            ],
            data: expect.any(Object),
          },
        ],
      },
    ],
  });
});

test("- is standard input", () => {
  expect(tocsin(["check", "-"], COIN)).toEqual({
    status: 0,
    stdout: "-: clean (policy coin, 2 states)\n",
    stderr: "",
  });
  const { status, stdout } = tocsin(["check", "-", "--json"], BROKEN);
  expect(status).toBe(1);
  expect(JSON.parse(stdout)).toMatchObject({ files: [{ file: "-", ok: false }] });
});

test("--let takes another value, and the policy is held to what it says of itself", () => {
  write("let.tocsin", COIN.replace("letters", "let most = 7\n\nletters").replace("= 6 within 1%", "<= most"));
  expect(tocsin(["check", "let.tocsin"]).status).toBe(0);
  expect(tocsin(["check", "let.tocsin", "--let", "most=6.5"]).status).toBe(0);
  const { status, stdout } = tocsin(["check", "let.tocsin", "--let", "most = 11/2"]);
  expect(status).toBe(1);
  expect(stdout).toContain('"arl(pair, fair)" is 6, and at most 5.5 is required');
});

test("of very many diagnostics the first thousand are shown, and the others counted", () => {
  write("many.tocsin", "policy p\n".repeat(3000));
  const text = tocsin(["check", "many.tocsin"]).stdout;
  expect(text.match(/^error\[/gm)).toHaveLength(1000);
  expect(text).toMatch(/\nand 2,\d{3} more\n\nmany.tocsin: 3,?\d{3} errors\n$/);
  const [file] = (JSON.parse(tocsin(["check", "--json", "many.tocsin"]).stdout) as { files: object[] }).files;
  expect(file).toMatchObject({ ok: false, more: expect.any(Number), diagnostics: { length: 1000 } });
});
