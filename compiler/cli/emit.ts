/** `tocsin emit FILE --as json`: the machine file. A policy that breaks its own contracts is not emitted. */
import { hasErrors } from "../../grammar/diagnostic.ts";
import { machineFile } from "../emit/machine-file.ts";
import { checkContracts } from "../review/contracts.ts";
import { EXIT, Stop } from "./exit.ts";
import { writeWhole } from "./files.ts";
import { type LoadOptions, loadMachine } from "./load.ts";
import { say, showDiagnostics } from "./output.ts";

export function runEmit(
  file: string,
  options: LoadOptions & { as: "json"; output?: string | undefined },
): void {
  const { policy, machine } = loadMachine(file, options);
  const broken = checkContracts(policy, machine, options.maxStates).filter(
    ({ severity }) => severity === "error",
  );
  if (hasErrors(broken)) {
    showDiagnostics(broken, process.stderr);
    throw new Stop(EXIT.findings);
  }
  const text = `${JSON.stringify(machineFile(policy, machine))}\n`;
  if (options.output === undefined) {
    process.stdout.write(text);
    return;
  }
  writeWhole(options.output, text);
  say(`${options.output}: ${policy.name}, ${machine.states} states, ${Buffer.byteLength(text)} bytes`);
}
