// Installs node_modules when they are missing or are not what package-lock.json asks for; otherwise does nothing.
// Only Node's own modules here: this runs before anything is installed. What npm says goes to stderr.

import { spawnSync } from "node:child_process";
import { readFileSync } from "node:fs";
import { join } from "node:path";

const root = join(import.meta.dirname, "..");

/**
 * The packages a lock file names, by their folder.
 * @param {string} path
 * @returns {Record<string, {version?: string, optional?: boolean, devOptional?: boolean, peer?: boolean}>}
 */
function packages(path) {
  return JSON.parse(readFileSync(join(root, path), "utf8")).packages;
}

/** Whether what npm noted down at its last install agrees with the lock; packages for other platforms may be absent. */
function installed() {
  try {
    const present = packages("node_modules/.package-lock.json");
    return Object.entries(packages("package-lock.json")).every(
      ([folder, wanted]) =>
        folder === "" || wanted.optional || wanted.devOptional || present[folder]?.version === wanted.version,
    );
  } catch {
    return false;
  }
}

if (!installed()) {
  process.stderr.write("Installing what package-lock.json names (npm ci) …\n");
  const run = spawnSync("npm", ["ci"], {
    cwd: root,
    stdio: ["ignore", process.stderr, process.stderr],
    shell: process.platform === "win32",
  });
  if (run.error) process.stderr.write(`npm could not be started: ${run.error.message}\n`);
  process.exitCode = run.status ?? 1;
}
