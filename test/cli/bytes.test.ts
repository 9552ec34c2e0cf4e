// Any bytes as a policy: a clear error with its place, from every command that reads one.

import { mkdirSync, symlinkSync } from "node:fs";
import { join } from "node:path";
import { describe, expect, test } from "vitest";
import { type Content, placeWith } from "./command.ts";

const { folder, tocsin, write, files, read } = placeWith();
const COMMANDS: readonly (readonly string[])[] = [
  ["check"],
  ["format"],
  ["assess"],
  ["emit", "--as", "json"],
  ["replay", "--letters", "high"],
];
const noise = (size: number) =>
  Uint8Array.from({ length: size }, (_, i) => (Math.imul(i + 7, 2654435761) >>> 13) & 255);

describe("bytes that are no policy", () => {
  test.each<[string, Content, number, string]>([
    ["NUL", "policy p\n\0", 1, "error[not_text] p.tocsin:2:1\n  the file holds a NUL character"],
    [
      "not UTF-8",
      new Uint8Array([0x70, 0x20, 0xff, 0x0a]),
      1,
      "error[not_text] p.tocsin:1:3\n  the file is not UTF-8 text from here on",
    ],
    ["UTF-16", new Uint8Array([0xff, 0xfe, 0x70, 0x00]), 1, "error[not_text] p.tocsin:1:1"],
    ["noise", noise(100_000), 1, "error[not_text] p.tocsin:"],
    ["20 MB", "a".repeat(20_000_000), 2, "tocsin: p.tocsin: longer than the 1,048,576 bytes it may have\n"],
    ["a megabyte of one word", "a".repeat(1_000_000), 1, "begins no declaration"],
    ["a hundred thousand brackets", "(".repeat(100_000), 1, "error[nesting_too_deep]"],
    ["a program", "#!/bin/sh\necho hello\n", 1, "`echo` begins no declaration"],
  ])("%s", (_, content, status, words) => {
    write("p.tocsin", content);
    for (const [command, ...options] of COMMANDS) {
      const found = tocsin([command!, "p.tocsin", ...options]);
      expect(found.status, command).toBe(status);
      expect(found.stdout + found.stderr, command).toContain(words);
      expect(found.stderr).not.toMatch(/\n {4}at /);
    }
    expect(files()).toEqual(["p.tocsin"]);
  });
});

test("an empty file is a library: it checks clean and has no machine", () => {
  write("p.tocsin", "");
  expect(tocsin(["check", "p.tocsin"]).stdout).toBe("p.tocsin: clean (library)\n");
  expect(tocsin(["emit", "p.tocsin", "--as", "json"])).toMatchObject({ status: 2, stdout: "" });
});

test("a byte order mark and CRLF are no fault", () => {
  write("p.tocsin", "\uFEFFpolicy p\r\nzones x: low <= 1 < high\r\nsignal s when high\r\n");
  expect(tocsin(["check", "p.tocsin"])).toMatchObject({
    status: 0,
    stdout: "p.tocsin: clean (policy p, 1 state)\n",
  });
  expect(tocsin(["format", "p.tocsin"]).status).toBe(0);
  expect(read("p.tocsin")).not.toMatch(/\uFEFF|\r/);
});

describe("files that are not there or are something else", () => {
  test.each<[string, string]>([
    ["nowhere.tocsin", "nowhere.tocsin: there is no such file or folder"],
    [".", ".: this is a folder, not a file"],
    ["p.tocsin/x", "p.tocsin/x: a part of the path is not a folder"],
    ["x".repeat(300), "the name is too long"],
    ["", "there is no such file or folder"],
  ])("%j", (path, words) => {
    write("p.tocsin", "policy p\n");
    for (const [command, ...options] of COMMANDS) {
      const found = tocsin([command!, path, ...options]);
      expect({ status: found.status, stdout: found.stdout }, command).toEqual({ status: 2, stdout: "" });
      expect(found.stderr, command).toContain(words);
    }
  });
});

describe("libraries", () => {
  const user = (path: string) => `policy p\nuse "${path}"\nzones x: low <= 1 < high\nsignal s when twice\n`;

  test.each<[string, string, string]>([
    ["that is missing", "nowhere.tocsin", "use_not_found"],
    ["that is a folder", "sub", "use_not_found"],
    ["that is not text", "noise.tocsin", "use_not_found"],
    ["outside the folder", "../twice.tocsin", "use_outside"],
    ["outside through a link", "link.tocsin", "use_not_found"],
  ])("%s", (_, path, code) => {
    mkdirSync(join(folder, "home/sub"), { recursive: true });
    write("twice.tocsin", "rule twice = 2 high\n");
    write("home/noise.tocsin", noise(500));
    try {
      symlinkSync("../twice.tocsin", join(folder, "home/link.tocsin"));
    } catch {
      // It is there already.
    }
    write("home/p.tocsin", user(path));
    const { status, stdout } = tocsin(["check", "home/p.tocsin"]);
    expect(status).toBe(1);
    expect(stdout).toContain(`error[${code}] home/p.tocsin:2:`);
  });

  test("beside the policy, wherever the command is called from", () => {
    mkdirSync(join(folder, "home"), { recursive: true });
    write("home/twice.tocsin", "rule twice = 2 high\n");
    write("home/p.tocsin", user("twice.tocsin"));
    expect(tocsin(["check", "home/p.tocsin"]).status).toBe(0);
    expect(tocsin(["check", join(folder, "home/p.tocsin")]).status).toBe(0);
  });
});
