/** Cold start: the built `tocsin check` on an example as a whole process, against a bare `node -e 0`. */
import { execFileSync } from "node:child_process";
import { type Figure, timePair } from "./figure.ts";

const COMMAND = "dist/tocsin.js";
const EXAMPLE = "examples/fill-weight/fill_weight.tocsin";

export function benchStart(): Figure[] {
  const run = (...args: string[]) => execFileSync(process.execPath, args, { encoding: "utf8" });
  const checksum = run(COMMAND, "check", EXAMPLE).trim().replace(/^.*: /, "");
  const [ours, peer] = timePair(
    () => run(COMMAND, "check", EXAMPLE),
    () => run("-e", "0"),
    15,
    2,
  );
  const ratio = ours.median / peer.median;
  return [
    {
      name: "tocsin check, whole process",
      state: "cold",
      ours,
      peer: { name: "node -e 0", timing: peer },
      faster: 1 / ratio,
      target: "<= 2.5 of it",
      reached: ratio <= 2.5,
      checksum,
    },
  ];
}
