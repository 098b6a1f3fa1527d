/** WebAssembly kernels that `npm run build` makes from *.as.ts files, each with memory that its caller lays out. */
import { readFileSync } from 'node:fs';
import { builtAsset } from '../sources/assets.edge.ts';

export interface Kernel {
  readonly memory: ArrayBuffer;
  readonly functions: Readonly<Record<string, (...numbers: number[]) => number>>;
}

/** The compiled code, as the engine holds it. */
export type KernelModule = object;

// The type library of Node leaves out the values of this namespace.
const engine = (
  globalThis as unknown as {
    WebAssembly: {
      Module: new (bytes: Uint8Array) => KernelModule;
      Memory: new (size: { initial: number }) => { buffer: ArrayBuffer };
      Instance: new (module: KernelModule, imports: object) => { exports: Kernel['functions'] };
    };
  }
).WebAssembly;

export const PAGE_BYTES = 65_536;

const modules = new Map<string, KernelModule | null>();

/** null where it was not built, or the processor lacks vector instructions: callers then use their plain twin. */
export function kernelModule(name: string): KernelModule | null {
  const known = modules.get(name);
  if (known !== undefined) return known;
  const module = compile(builtAsset(`${name}.wasm`));
  modules.set(name, module);
  return module;
}

export function compileKernel(path: string): KernelModule {
  return new engine.Module(readFileSync(path));
}

function compile(path: string): KernelModule | null {
  try {
    return compileKernel(path);
  } catch {
    return null;
  }
}

/**
 * @param bytes   of memory; the first page is left to the module itself, up to half of it
 * @param imports functions that the kernel calls
 */
export function startKernel(
  module: KernelModule,
  bytes: number,
  imports: Readonly<Record<string, (...numbers: number[]) => number>> = {},
): Kernel {
  const memory = new engine.Memory({ initial: Math.ceil(bytes / PAGE_BYTES) });
  const instance = new engine.Instance(module, {
    env: {
      memory,
      ...imports,
      abort: () => {
        throw new Error('a kernel stopped at a broken invariant');
      },
    },
  });
  return { memory: memory.buffer, functions: instance.exports };
}
