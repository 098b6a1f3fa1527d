// Bundles src/main.ts into dist/mortise.js with lazily loaded chunks beside it, each *.worker.ts into a script of its own,
// compiles *.as.ts kernels to WebAssembly. `npm run build` and prepack call it.
import { execFileSync } from 'node:child_process';
import { chmodSync, copyFileSync, mkdirSync, readdirSync, readFileSync, rmSync } from 'node:fs';
import { basename, dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { build } from 'esbuild';

const root = join(dirname(fileURLToPath(import.meta.url)), '..');
const dist = process.env.MORTISE_DIST ?? join(root, 'dist');
const { version } = JSON.parse(readFileSync(join(root, 'package.json'), 'utf8'));

const sources = readdirSync(join(root, 'src'), { recursive: true }).map(String);
rmSync(dist, { recursive: true, force: true });
mkdirSync(dist, { recursive: true });

const shared = {
  bundle: true,
  platform: 'node',
  format: 'esm',
  target: 'node20',
  minify: true,
  keepNames: true,
  legalComments: 'none',
  define: {
    MORTISE_VERSION: JSON.stringify(version),
    'process.env.NODE_ENV': '"production"',
    'process.env.DEV': '"false"',
  },
  // What cannot or should not be bundled: native code, the TypeScript compiler, WebAssembly loaders that look for files beside them.
  external: ['better-sqlite3', 'ts-morph', 'h5wasm', 'h5wasm/node'],
  alias: { 'react-devtools-core': join(root, '.config/empty.mjs') },
  banner: {
    js: "import{createRequire as __createRequire}from'node:module';const require=__createRequire(import.meta.url);",
  },
};
await build({
  ...shared,
  entryPoints: [{ in: join(root, 'src/main.ts'), out: 'mortise' }],
  outdir: dist,
  splitting: true,
  chunkNames: 'part-[hash]',
  banner: { js: `#!/usr/bin/env node\n${shared.banner.js}` },
});
await build({
  ...shared,
  entryPoints: sources
    .filter((file) => file.endsWith('.worker.ts'))
    .map((file) => ({
      in: join(root, 'src', file),
      out: basename(file, '.ts'),
    })),
  outdir: dist,
});
for (const file of sources.filter((name) => name.endsWith('.as.ts'))) {
  const compiler = join(root, 'node_modules/assemblyscript/bin/asc.js');
  const wasm = join(dist, `${basename(file, '.as.ts')}.wasm`);
  execFileSync(
    process.execPath,
    [compiler, join(root, 'src', file), '-o', wasm, '-O3', '--runtime', 'stub', '--enable', 'simd', '--importMemory'],
    {
      stdio: 'inherit',
    },
  );
}
// The demo builds its TypeScript with this program, vendored into it when it is laid.
copyFileSync(join(root, 'node_modules/amaro/dist/index.js'), join(dist, 'strip-types.cjs'));
copyFileSync(join(root, 'node_modules/amaro/LICENSE.md'), join(dist, 'strip-types-licence.md'));
chmodSync(join(dist, 'mortise.js'), 0o755);
