/** Files that ship with the program: kernels and worker scripts in dist/, schemas and contracts in manifests/. */
import { existsSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';

const here = dirname(fileURLToPath(import.meta.url));

/** The folder that holds package.json: one above dist/ once bundled, two above src/sources/ before. */
export const packageRoot = ancestors(here).find((folder) => existsSync(join(folder, 'package.json'))) ?? here;

/** A file that `npm run build` makes, e.g. `compare.wasm` or `scan.worker.js`. */
export function builtAsset(name: string): string {
  return join(packageRoot, 'dist', name);
}

export function shippedManifests(...parts: string[]): string {
  return join(packageRoot, 'manifests', ...parts);
}

function ancestors(folder: string): string[] {
  const parent = dirname(folder);
  return parent === folder ? [folder] : [folder, ...ancestors(parent)];
}
