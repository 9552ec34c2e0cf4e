/**
 * A policy and its machine as a machine file: the tables every detector runs on, and the policy in parts, by which a
 * detector says why. The layout is `runtime/format.md`; nothing is decided here but the order of the fields.
 */
import { sha256 } from "@noble/hashes/sha2.js";
import { bytesToHex, utf8ToBytes } from "@noble/hashes/utils.js";
import { parse } from "../../grammar/parse.ts";
import { print } from "../../grammar/print.ts";
import {
  type FormulaInFile,
  MACHINE_FORMAT,
  MACHINE_VERSION,
  type MachineFile,
  type ReasonsInFile,
  type SignalReasonsInFile,
  type StatisticInFile,
} from "../../runtime/machine-file.ts";
import { doubleOf } from "../chance/quantity.ts";
import type { Automaton, Machine } from "../machine/automaton.ts";
import { DEFAULT_MOST_STATES } from "../machine/budget.ts";
import { columnsOf, setByColumn } from "../machine/columns.ts";
import { type Compiler, componentOf, makeCompiler } from "../machine/component.ts";
import { type FormulaNode, formulaOf, nameOf } from "../machine/formula.ts";
import type { Alphabet, Policy, Signal } from "../policy.ts";

/** The machine file of a policy; that its cuts differ as doubles was checked with the policy. */
export function machineFile(policy: Policy, machine: Machine): MachineFile {
  const content = {
    statistics: policy.alphabets.map(statisticOf),
    missing: policy.missing,
    signals: policy.signals.map((signal) => signal.name),
    tables: {
      states: machine.states,
      columns: machine.columns,
      columnOf: [...machine.columnOf],
      next: [...machine.next],
      raises: [...machine.output],
      broken: machine.broken ? [...machine.broken] : null,
    },
    reasons: reasonsOf(policy),
  };
  return {
    format: MACHINE_FORMAT,
    version: MACHINE_VERSION,
    policy: { name: policy.name, title: policy.title, source: sourceHash(policy) },
    id: hashOf(JSON.stringify(content)),
    ...content,
  };
}

/** SHA-256 of the canonical text of the policy and, after it, of its libraries in the order they were reached. */
function sourceHash(policy: Policy): string {
  return hashOf(policy.sources.map((source) => print(parse(source).tree)).join("\n"));
}

function hashOf(text: string): string {
  return bytesToHex(sha256(utf8ToBytes(text)));
}

function statisticOf(alphabet: Alphabet): StatisticInFile {
  const { name, missing } = alphabet;
  const letters = alphabet.letters.map((letter) => letter.name);
  if (alphabet.kind === "letters")
    return { name, kind: "letters", letters, texts: alphabet.letters.map((letter) => letter.text), missing };
  const cuts = alphabet.cuts.map(({ at, owner }) => ({
    at: doubleOf(at.value),
    exact: at.value.toFraction(),
    owner,
  }));
  return { name, kind: "zones", letters, cuts, missing };
}

function reasonsOf(policy: Policy): ReasonsInFile {
  const columns = columnsOf(policy);
  const compiler = makeCompiler(columns, DEFAULT_MOST_STATES);
  const automata: Automaton[] = [];
  const numberOf = (automaton: Automaton) => {
    const known = automata.indexOf(automaton);
    return known === -1 ? automata.push(automaton) - 1 : known;
  };
  const signals = policy.signals.map((signal) => signalReasons(compiler, signal, numberOf));
  const clearAfter = policy.clearAfter.map((condition) => numberOf(componentOf(compiler, condition)));
  return {
    columns: columns.count,
    columnOf: [...columns.columnOf],
    automata: automata.map(({ states, next, output }) => ({
      states,
      next: [...next],
      completes: [...output],
    })),
    signals,
    clearBefore: policy.clearBefore
      ? [...setByColumn(policy.clearBefore, columns)]
      : new Array<number>(columns.count).fill(0),
    clearAfter,
    block: policy.block,
  };
}

function signalReasons(
  compiler: Compiler,
  signal: Signal,
  numberOf: (automaton: Automaton) => number,
): SignalReasonsInFile {
  const formula = formulaOf(signal.condition, false);
  const conditions = formula.parts.map((part, index) => ({
    name: nameOf(formula, index),
    automaton: numberOf(componentOf(compiler, part)),
  }));
  const quiet =
    signal.quiet === null
      ? null
      : signal.quiet.kind === "for"
        ? { for: signal.quiet.count }
        : { until: numberOf(componentOf(compiler, signal.quiet.condition)) };
  return { conditions, formula: formulaInFile(formula.root), response: signal.response, quiet };
}

function formulaInFile(node: FormulaNode): FormulaInFile {
  switch (node.kind) {
    case "part":
      return node.part;
    case "and":
      return { and: node.operands.map(formulaInFile) };
    case "or":
      return { or: node.operands.map(formulaInFile) };
    case "not":
      return { not: formulaInFile(node.operand) };
    default:
      return node satisfies never;
  }
}
