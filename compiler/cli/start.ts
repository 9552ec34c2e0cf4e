/** `tocsin start NAME`: a commented first policy, in canonical text, that checks clean. */
import { reservedWords } from "../../grammar/tokens.ts";
import { EXIT, UsageError } from "./exit.ts";
import { demandAbsent, writeWhole } from "./files.ts";
import { say } from "./output.ts";

/** Writes NAME.tocsin into the current folder; refuses to overwrite unless told. */
export function runStart(name: string, options: { force?: true | undefined }): void {
  if (!/^[A-Za-z_][A-Za-z0-9_]*$/.test(name))
    throw new UsageError(`"${name}" is no name; letters, digits and _ make one, as in oven_temperature`);
  if (reservedWords.some((word) => word === name))
    throw new UsageError(`"${name}" is a word of the language and cannot be a name; pick another`);
  const path = `${name}.tocsin`;
  demandAbsent(path, options.force === true);
  writeWhole(path, firstPolicy(name));
  say(`wrote ${path}; now try`);
  say(`  tocsin check ${path}`);
  say(`  tocsin assess ${path}`);
  say(`  tocsin replay ${path} --letters 'high mid 2 high'`);
  process.exitCode = EXIT.clean;
}

function firstPolicy(name: string): string {
  return `# A first policy to change. The numbers are invented: put in those of your process.
policy ${name} "What this stream is, and where"

# The process in control: the mean of the statistic and its standard deviation.
let mu    = 100
let sigma = 2

# How far from the mean a value counts as unusual, in standard deviations.
let d = 1.8

# Zones, from the lowest to the highest: each value has one letter. The side with the = owns the cut.
zones value: low < mu - d*sigma <= mid <= mu + d*sigma < high

# A failure that a run may bridge: one mid between two highs does not end a weak run of high.
assign high -> mid, low -> mid

# Three highs, with at most one mid in a row between two of them; and the same for low.
rule heavy = 3 high gap 1
rule light = 3 low gap 1

# When either is complete the signal is raised, and memory starts anew.
signal act when heavy or light  restart

# One value every quarter of an hour; a missing value is reported and changes nothing.
cadence 15 min
missing refuse

# What the stream may be like. Run lengths are computed for each of these.
process steady:                              value ~ normal(mu, sigma)
process shifted(delta from 0.5 to 3 by 0.5): value ~ normal(mu + delta*sigma, sigma)

# What the policy must keep to: few false signals, and soon enough after a shift of two standard deviations.
require arl(act, steady)     >= 200
require arl(act, shifted(2)) <= 10

# Examples of what it does; they are checked like tests.
expect act   on high mid 2 high
expect quiet on high 2 mid 2 high
`;
}
