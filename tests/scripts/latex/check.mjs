// Passes what the program prints under `--format latex` through KaTeX, every warning an error.
//
//     node check.mjs PROGRAM FILE.circuit…
//
// Each file is derived in every shape, and its roots are found. Run by .ci/run, which installs KaTeX.

import { spawnSync } from "node:child_process";
import katex from "katex";

const SHAPES = ["powers", "bode", "product", "sections", "by-element", "nested"];
const COMMANDS = [
  ["derive"],
  ...SHAPES.map((shape) => ["derive", "--shape", shape]),
  ["roots"],
];
// A shape that is too long, and roots without numbers, are no fault of the LaTeX.
const isRefusal = (run) => run.status === 4 || run.stderr.includes("[no-nominal-values]");

const [program, ...files] = process.argv.slice(2);
if (!program || files.length === 0) {
  console.error("usage: node check.mjs PROGRAM FILE.circuit…");
  process.exit(2);
}

let formulas = 0;
const faults = [];

for (const file of files) {
  for (const [command, ...options] of COMMANDS) {
    const call = [command, file, "--format", "latex", "--quiet", ...options];
    const run = spawnSync(program, call, { encoding: "utf8", maxBuffer: 1 << 28 });
    if (run.error) throw run.error;
    if (run.status !== 0 && !isRefusal(run)) {
      faults.push(`${call.join(" ")}: exit code ${run.status}\n${run.stderr}`);
      continue;
    }
    for (const fault of check(run.stdout)) faults.push(`${call.join(" ")}: ${fault}`);
  }
}

for (const fault of faults) console.error(fault);
if (formulas === 0) console.error("no formula was checked");
console.log(`${formulas} formulas of ${files.length} files, ${faults.length} faults`);
process.exit(faults.length > 0 || formulas === 0 ? 1 : 0);

// What is wrong with a fragment: displays between \[ and \], and nothing outside them.
function check(text) {
  const found = [];
  const outside = text.replace(/\\\[\n([\s\S]*?)\n\\\]/g, (_, formula) => {
    formulas += 1;
    try {
      katex.renderToString(formula, { displayMode: true, throwOnError: true, strict: "error" });
    } catch (error) {
      found.push(`${error.message}\n${formula}`);
    }
    return "";
  });
  if (outside.trim() !== "") found.push(`outside of a display: ${outside.trim()}`);
  return found;
}
