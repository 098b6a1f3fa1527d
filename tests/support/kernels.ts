/** WebAssembly kernels compiled for a test from their sources, so that tests do not depend on what was built when. */
import { execFileSync } from 'node:child_process';
import { mkdtempSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { basename, join } from 'node:path';
import { compileKernel, type KernelModule } from '../../src/outputs/kernel-module.edge.ts';
import { packageRoot } from '../../src/sources/assets.edge.ts';

/** @param source relative to the root of the project: `src/compare/measure-block.as.ts` */
export function kernelFrom(source: string): KernelModule {
  const compiler = join(packageRoot, 'node_modules/assemblyscript/bin/asc.js');
  const wasm = join(mkdtempSync(join(tmpdir(), 'mortise-kernel-')), basename(source, '.as.ts'));
  const options = ['-o', wasm, '-O3', '--runtime', 'stub', '--enable', 'simd', '--importMemory'];
  execFileSync(process.execPath, [compiler, join(packageRoot, source), ...options]);
  return compileKernel(wasm);
}
