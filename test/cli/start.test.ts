// `tocsin start`: a first policy, and the commands it suggests.

import { expect, test } from "vitest";
import { placeWith } from "./command.ts";

const { tocsin, read, write, files } = placeWith();

test("writes a policy that is clean even strictly, is canonical, and does what is suggested next", () => {
  const started = tocsin(["start", "oven_temperature"]);
  expect(started).toMatchObject({ status: 0, stderr: "" });
  expect(files()).toEqual(["oven_temperature.tocsin"]);
  expect(tocsin(["check", "--strict", "oven_temperature.tocsin"])).toEqual({
    status: 0,
    stdout: "oven_temperature.tocsin: clean (policy oven_temperature, 9 states)\n",
    stderr: "",
  });
  expect(tocsin(["format", "--verify", "oven_temperature.tocsin"])).toMatchObject({ status: 0, stdout: "" });
  const suggested = [...started.stdout.matchAll(/^ {2}tocsin (.*)$/gm)].map(([, line]) => line ?? "");
  expect(suggested).toHaveLength(3);
  for (const line of suggested) {
    const words = [...line.matchAll(/'([^']*)'|(\S+)/g)].map(([, quoted, word]) => quoted ?? word ?? "");
    expect(tocsin(words), line).toMatchObject({ status: 0, stderr: "" });
  }
});

test("does not overwrite unless told", () => {
  write("mine.tocsin", "# mine\n");
  expect(tocsin(["start", "mine"])).toEqual({
    status: 2,
    stdout: "",
    stderr: "tocsin: mine.tocsin exists already; --force overwrites it\n",
  });
  expect(read("mine.tocsin")).toBe("# mine\n");
  expect(tocsin(["start", "mine", "--force"]).status).toBe(0);
  expect(read("mine.tocsin")).toContain("policy mine ");
});

test.each([
  ["3x", "is no name"],
  ["../x", "is no name"],
  ["a b", "is no name"],
  ["", "is no name"],
  ["signal", "is a word of the language"],
  ["quiet", "is a word of the language"],
])("refuses the name %j", (name, why) => {
  const before = files();
  const { status, stdout, stderr } = tocsin(["start", name]);
  expect({ status, stdout }).toEqual({ status: 2, stdout: "" });
  expect(stderr).toContain(why);
  expect(files()).toEqual(before);
});
