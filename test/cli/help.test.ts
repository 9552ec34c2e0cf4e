// What the command says of itself.

import { readFileSync } from "node:fs";
import { join } from "node:path";
import { describe, expect, test } from "vitest";
import { VERSION } from "../../compiler/cli/version.ts";
import { placeWith, ROOT } from "./command.ts";

const SUBCOMMANDS = ["check", "format", "assess", "emit", "replay", "start"];

const { tocsin } = placeWith();

test("the version is that of the package", () => {
  const { version } = JSON.parse(readFileSync(join(ROOT, "package.json"), "utf8")) as { version: string };
  expect(VERSION).toBe(version);
  expect(tocsin(["--version"])).toEqual({ status: 0, stdout: `${version}\n`, stderr: "" });
});

describe("help", () => {
  test("names every subcommand and the exit codes, and begins with a first policy", () => {
    const { status, stdout, stderr } = tocsin(["--help"]);
    expect({ status, stderr }).toEqual({ status: 0, stderr: "" });
    for (const name of SUBCOMMANDS) expect(stdout).toMatch(new RegExp(`^ {2}${name} `, "m"));
    expect(stdout).toContain("$ tocsin start my_policy");
    expect(stdout).toContain("Exit codes: 0 clean or done, 1 findings");
    expect(stdout).toContain("not a certified safety function");
  });

  test("is what a call without arguments is told, as a mistake", () => {
    expect(tocsin([])).toEqual({ status: 2, stdout: "", stderr: tocsin(["--help"]).stdout });
  });

  test.each(SUBCOMMANDS)("of %s has an example", (name) => {
    const { status, stdout, stderr } = tocsin([name, "--help"]);
    expect({ status, stderr }).toEqual({ status: 0, stderr: "" });
    expect(stdout).toContain(`Usage: tocsin ${name} `);
    expect(stdout).toMatch(new RegExp(`^Examples?:\\n {2}\\$ tocsin ${name} `, "m"));
  });
});
