// `tocsin format`: canonical text in place, on standard output for standard input, or only looked for.

import { readdirSync, readFileSync } from "node:fs";
import { join } from "node:path";
import { expect, test } from "vitest";
import { COIN, placeWith, ROOT } from "./command.ts";

const UNTIDY = `policy   coin "Two heads" # a title
letters toss:heads,tails
  signal pair when 2 heads # two
`;
const { tocsin, write, read, files } = placeWith();

test("rewrites what is not canonical, once", () => {
  write("coin.tocsin", UNTIDY);
  expect(tocsin(["format", "--verify", "coin.tocsin"])).toEqual({
    status: 1,
    stdout: "coin.tocsin is not in canonical text; tocsin format coin.tocsin rewrites it\n",
    stderr: "",
  });
  expect(read("coin.tocsin")).toBe(UNTIDY);
  expect(tocsin(["format", "coin.tocsin"])).toEqual({
    status: 0,
    stdout: "coin.tocsin rewritten\n",
    stderr: "",
  });
  const canonical = read("coin.tocsin");
  expect(canonical).toBe(
    'policy coin "Two heads"  # a title\nletters toss: heads, tails\nsignal pair when 2 heads  # two\n',
  );
  expect(tocsin(["format", "coin.tocsin"])).toEqual({ status: 0, stdout: "", stderr: "" });
  expect(tocsin(["format", "--verify", "coin.tocsin"])).toEqual({ status: 0, stdout: "", stderr: "" });
  expect(read("coin.tocsin")).toBe(canonical);
  expect(tocsin(["format", "-"], UNTIDY)).toEqual({ status: 0, stdout: canonical, stderr: "" });
  expect(tocsin(["format", "-"], canonical).stdout).toBe(canonical);
});

test("leaves a text with errors alone, and does the others", () => {
  write("broken.tocsin", "policy p rule = 2 high\n");
  write("other.tocsin", UNTIDY);
  const { status, stdout, stderr } = tocsin(["format", "broken.tocsin", "other.tocsin"]);
  expect({ status, stdout }).toEqual({ status: 1, stdout: "other.tocsin rewritten\n" });
  expect(stderr).toContain("error[syntax] broken.tocsin:1:");
  expect(read("broken.tocsin")).toBe("policy p rule = 2 high\n");
  expect(tocsin(["format", "-"], "policy p rule = 2 high\n")).toMatchObject({ status: 1, stdout: "" });
});

test("a missing file is a usage error", () => {
  expect(tocsin(["format", "nowhere.tocsin"])).toMatchObject({ status: 2, stdout: "" });
});

test("changes no meaning: the machine of a policy squeezed onto one line is the same", () => {
  const folder = join(ROOT, "examples/fill-weight");
  const [name = ""] = readdirSync(folder).filter((file) => file.endsWith(".tocsin"));
  const text = readFileSync(join(folder, name), "utf8");
  const squeezed = text.replace(/#.*/g, "").replace(/\s+/g, " ");
  write("squeezed.tocsin", squeezed);
  expect(tocsin(["format", "squeezed.tocsin"]).status).toBe(0);
  write("before.tocsin", text);
  const emitted = (file: string) => tocsin(["emit", file, "--as", "json"]).stdout;
  const [before, after] = ["before.tocsin", "squeezed.tocsin"].map(
    (file) => JSON.parse(emitted(file)) as { id: string },
  );
  expect(after?.id).toBe(before?.id);
});

test("nothing is left behind", () => {
  expect(files().filter((name) => !name.endsWith(".tocsin"))).toEqual([]);
  expect(COIN).toBe(tocsin(["format", "-"], COIN).stdout);
});
