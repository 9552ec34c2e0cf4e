/**
 * `npm run bench`: what Tocsin costs, each figure beside a peer measured in the same run, with a checksum that keeps both
 * honest. Every figure says warm (the same process, after warm-up rounds) or cold (the first time in a fresh process).
 * Times are medians, in brackets the least; quote the ratios, which hold when the machine's speed drifts.
 */
import { benchAnalysis, firstSolve } from "./analysis.ts";
import { benchCompile } from "./compile.ts";
import { benchDetector } from "./detector.ts";
import { type Figure, formatFigures } from "./figure.ts";
import { benchMinimise } from "./minimise.ts";
import { benchStart } from "./start.ts";

const parts: Record<string, () => Figure[]> = {
  compile: benchCompile,
  minimise: benchMinimise,
  analysis: benchAnalysis,
  detector: benchDetector,
  start: benchStart,
};

if (process.argv.includes("--first-solve")) {
  process.stdout.write(firstSolve());
  process.exit(0);
}

const chosen = process.argv.slice(2).filter((name) => !name.startsWith("--"));
const figures: Figure[] = [];
for (const [name, bench] of Object.entries(parts)) {
  if (chosen.length > 0 && !chosen.includes(name)) continue;
  process.stderr.write(`${name} …\n`);
  figures.push(...bench());
}
process.stdout.write(
  process.argv.includes("--json")
    ? `${JSON.stringify({ node: process.version, figures }, null, 2)}\n`
    : formatFigures(figures),
);
