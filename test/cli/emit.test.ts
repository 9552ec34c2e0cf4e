// `tocsin emit`: the machine file, which the runtime opens and runs as `replay` does.

import { mkdirSync } from "node:fs";
import { join } from "node:path";
import { expect, test } from "vitest";
import { Detector, openMachine } from "../../runtime/index.ts";
import { jsonLines, OVEN, placeWith } from "./command.ts";

const LATE = OVEN.replace("restart\n", "restart\nsignal late when high then 2 low within 3\n");
const { tocsin, folder, read, write, files } = placeWith({ "oven.tocsin": OVEN });

test("what is emitted, opened by the runtime, raises what replay says", () => {
  const values = [104, 101, 105, 99, 104.5, 104, 104, 104, 95, 95, 95, 95, 95, 95, 95, 105];
  const { status, stdout, stderr } = tocsin(["emit", "oven.tocsin", "--as", "json"]);
  expect({ status, stderr }).toEqual({ status: 0, stderr: "" });
  expect(tocsin(["emit", "oven.tocsin", "--as", "json", "-o", "oven.json"])).toEqual({
    status: 0,
    stdout: `oven.json: oven, ${(JSON.parse(stdout) as { tables: { states: number } }).tables.states} states, ${stdout.length} bytes\n`,
    stderr: "",
  });
  expect(read("oven.json")).toBe(stdout);
  const { machine, problems } = openMachine(stdout);
  if (!machine) return expect.fail(JSON.stringify(problems));
  const detector = new Detector(machine, { why: true });
  const raised = values.flatMap((value, index) => {
    const raises = detector.observe(value);
    if (raises === 0) return [];
    const because = detector.because().map(({ rule, from, to }) => ({ rule, trials: [from, to] }));
    return [{ trial: index + 1, signals: detector.namesOf(raises), because }];
  });
  expect(raised.length).toBeGreaterThan(2);
  const replayed = tocsin(["replay", "oven.tocsin", "-", "--json"], `heat\n${values.join("\n")}\n`);
  expect(jsonLines(replayed.stdout).slice(0, -1)).toMatchObject(raised);
});

test("two calls give the same bytes; --let another machine", () => {
  const emit = (...options: string[]) => tocsin(["emit", "-", "--as", "json", ...options], LATE).stdout;
  expect(emit()).toBe(emit());
  const [usual, other] = [emit(), emit("--let", "d=2")].map((text) => JSON.parse(text) as { id: string });
  expect(usual?.id).not.toBe(other?.id);
});

test("a policy that breaks its word is not emitted, and what was there stays", () => {
  write("broken.tocsin", `${OVEN}require arl(act, steady) >= 1e9\n`);
  write("kept.json", "before");
  const { status, stdout, stderr } = tocsin(["emit", "broken.tocsin", "--as", "json", "-o", "kept.json"]);
  expect({ status, stdout }).toEqual({ status: 1, stdout: "" });
  expect(stderr).toContain("error[require_fails] broken.tocsin:");
  expect(read("kept.json")).toBe("before");
});

test.each<[string[], number, string]>([
  [["oven.tocsin"], 2, "required option '--as <target>' not specified"],
  [["oven.tocsin", "--as", "c"], 2, "Allowed choices are json."],
  [["nowhere.tocsin", "--as", "json"], 2, "nowhere.tocsin: there is no such file or folder"],
  [
    ["oven.tocsin", "--as", "json", "-o", "no/where.json"],
    2,
    "no/where.json: there is no such file or folder",
  ],
  [["oven.tocsin", "--as", "json", "-o", "folder"], 2, "folder: this is a folder, not a file"],
  [["oven.tocsin", "--as", "json", "-o", `${"x".repeat(300)}`], 2, "the name is too long"],
])("emit %j: exit %i, and nothing left behind", (args, status, words) => {
  mkdirSync(join(folder, "folder"), { recursive: true });
  const before = files();
  const found = tocsin(["emit", ...args]);
  expect({ status: found.status, stdout: found.stdout }).toEqual({ status, stdout: "" });
  expect(found.stderr).toContain(words);
  expect(files()).toEqual(before);
});
