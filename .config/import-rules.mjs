// Checks that imports follow the way of the data: a stage imports itself and earlier stages only, there is no cycle,
// and only files named *.edge.ts touch the machine.
import { readdirSync, readFileSync } from 'node:fs';
import { dirname, join, relative } from 'node:path';
import { fileURLToPath } from 'node:url';

const root = join(dirname(fileURLToPath(import.meta.url)), '../src');

/** Earlier to later. A stage may import any stage before it; DEVELOPERS.md tells why each stands where it does. */
const STAGES = [
  'model',
  'units',
  'sources',
  'outputs',
  'manifests',
  'readers',
  'constants',
  'fit',
  'history',
  'compare',
  'runs',
  'register',
  'audit',
  'review',
  'report',
  'screens',
  'commands',
];
const MACHINE =
  /^(node:(fs|fs\/promises|child_process|worker_threads|os|net|readline)|fs|child_process|simple-git|better-sqlite3)$/;
const EDGE = /(\.edge\.tsx?|\.worker\.ts|^main\.ts|^commands\/run-command-line\.ts)$/;

const problems = [];
const imports = new Map();
for (const file of readdirSync(root, { recursive: true })
  .map(String)
  .filter((name) => /\.tsx?$/.test(name) && !name.endsWith('.as.ts'))) {
  const text = readFileSync(join(root, file), 'utf8');
  const targets = [];
  for (const match of text.matchAll(
    /^\s*(?:import|export)\b(?<what>[^'"`;]*?)\bfrom\s*['"](?<from>[^'"]+)['"]|^\s*import\s*['"](?<bare>[^'"]+)['"]|\bimport\(\s*['"](?<lazy>[^'"]+)['"]\s*\)/gm,
  )) {
    const from = match.groups.from ?? match.groups.bare ?? match.groups.lazy;
    const typeOnly = /^\s*type\b/.test(match.groups.what ?? '');
    if (MACHINE.test(from) && !typeOnly && !EDGE.test(file))
      problems.push(`${file}: imports ${from}; move that to a file named *.edge.ts`);
    if (!from.startsWith('.')) continue;
    const target = relative(root, join(root, dirname(file), from));
    // What is imported lazily is not there yet when a module is evaluated, so it closes no cycle.
    if (match.groups.lazy === undefined) targets.push(target);
    const [own, other] = [stageOf(file), stageOf(target)];
    if (own === undefined || other === undefined || own === 'main') continue;
    if (STAGES.indexOf(other) > STAGES.indexOf(own))
      problems.push(`${file}: ${own} comes before ${other} and may not import ${target}`);
  }
  imports.set(file, targets);
}
const done = new Set();
for (const file of imports.keys()) walk(file, []);

function walk(file, trail) {
  const at = trail.indexOf(file);
  if (at >= 0) return problems.push(`import cycle: ${[...trail.slice(at), file].join(' -> ')}`);
  if (done.has(file)) return;
  for (const target of imports.get(file) ?? []) walk(target, [...trail, file]);
  done.add(file);
}

function stageOf(file) {
  const [first, ...rest] = file.split(/[\\/]/);
  if (rest.length === 0) return 'main';
  if (!STAGES.includes(first)) problems.push(`${file}: src/${first} is no stage; the stages are ${STAGES.join(', ')}`);
  return first;
}

for (const problem of problems) console.error(problem);
if (problems.length > 0) process.exit(1);
console.log(`import rules: ${imports.size} files, every import runs along the way of the data`);
