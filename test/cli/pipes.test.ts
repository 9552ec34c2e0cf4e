// The command between other programs: live data, a reader that has seen enough, an interrupt.

import type { ChildProcess } from "node:child_process";
import { spawnSync } from "node:child_process";
import { once } from "node:events";
import { expect, test } from "vitest";
import { COMMAND, placeWith } from "./command.ts";

const POLICY = "policy p\nzones x: low <= 1 < high\nsignal s when 2 high\n";
const { folder, begin, read, write, files } = placeWith({ "p.tocsin": POLICY });

/** What a running command prints, waited for rather than timed. */
function listen(child: ChildProcess) {
  const heard = { stdout: "", stderr: "" };
  for (const name of ["stdout", "stderr"] as const)
    child[name]?.on("data", (chunk: Buffer) => {
      heard[name] += chunk.toString();
    });
  const until = async (name: "stdout" | "stderr", words: string) => {
    while (!heard[name].includes(words)) {
      if (child.exitCode !== null) throw new Error(`ended before "${words}": ${JSON.stringify(heard)}`);
      await Promise.race([once(child[name]!, "data"), once(child, "close")]);
    }
  };
  return { heard, until };
}

test("live data: what a row raises is told before the next row is there", async () => {
  const child = begin(["replay", "p.tocsin", "-"]);
  const { heard, until } = listen(child);
  child.stdin?.write("x\n2\n3\n");
  await until("stdout", "trial 2  row 2  x 3 high  s — 2 high, trials 1 to 2\n");
  // In pieces: a row is read when its line has ended.
  child.stdin?.write("4");
  child.stdin?.write("\n5");
  child.stdin?.write("\n");
  await until("stdout", "trial 4  row 4  x 5 high  s — 2 high, trials 3 to 4\n");
  expect(heard.stdout).not.toContain("trials; ");
  child.stdin?.end("6\n");
  expect(await once(child, "close")).toEqual([0, null]);
  expect(heard.stdout).toMatch(/\n5 trials; signals raised: s 2\n$/);
  expect(heard.stderr).toBe("");
});

test("a fault in live data ends the command, though more could come", async () => {
  const child = begin(["replay", "p.tocsin"]);
  const { heard } = listen(child);
  child.stdin?.on("error", () => {});
  child.stdin?.write("x\n2\noops\n");
  expect(await once(child, "close")).toEqual([1, null]);
  expect(heard.stderr).toContain('-:3: x: "oops" is not a decimal number');
});

test("an interrupt ends the reading: the summary comes, and the state is kept", async () => {
  const child = begin(["replay", "p.tocsin", "--state", "kept.json"]);
  const { heard, until } = listen(child);
  child.stdin?.write("x\n2\n3\n4\n");
  await until("stdout", "trial 2 ");
  child.kill("SIGINT");
  expect(await once(child, "close")).toEqual([0, null]);
  expect(heard.stdout).toMatch(/\n3 trials; signals raised: s 1\n$/);
  expect(JSON.parse(read("kept.json"))).toMatchObject({ streams: [["", { trial: 3 }]] });
  expect(files().filter((name) => name.endsWith(".tmp"))).toEqual([]);
});

const pipe = (line: string) =>
  spawnSync(
    "bash",
    ["-c", `set -o pipefail; tocsin() { "${process.execPath}" "${COMMAND}" "$@"; }; ${line}`],
    {
      cwd: folder,
      encoding: "utf8",
    },
  );

test.skipIf(process.platform === "win32")("a reader that has seen enough is no error", () => {
  write("many.csv", `x\n${"2\n".repeat(200_000)}`);
  const replay = pipe("tocsin replay p.tocsin many.csv | head -1");
  expect(replay).toMatchObject({ status: 0, stderr: "" });
  expect(replay.stdout).toBe("trial 2  row 2  x 2 high  s — 2 high, trials 1 to 2\n");
  write("many.tocsin", "policy p\n".repeat(3000));
  expect(pipe("{ tocsin check many.tocsin || [ $? = 0 ]; } | head -1")).toMatchObject({
    status: 0,
    stderr: "",
  });
  expect(pipe("{ tocsin assess many.tocsin 2>&1 || [ $? = 0 ]; } | head -1")).toMatchObject({
    status: 0,
    stderr: "",
  });
});

test.skipIf(process.platform === "win32")("a policy from a pipe that is slow", () => {
  const slow = `{ printf 'policy p\\nzones x: low <= 1 < high\\n'; sleep 0.3; printf 'signal s when 2 high\\n'; } | tocsin check -`;
  expect(pipe(slow)).toMatchObject({ status: 0, stdout: "-: clean (policy p, 2 states)\n", stderr: "" });
});

test.skipIf(process.platform === "win32")("a device without an end is not read for ever", () => {
  expect(pipe("tocsin check /dev/zero")).toMatchObject({
    status: 2,
    stderr: "tocsin: /dev/zero: longer than the 1,048,576 bytes it may have\n",
  });
});
