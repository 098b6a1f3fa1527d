/** Manifests, a case and exchanges come in; what is plugged, selected and set for its build and run goes out. */
import type { Assembly, Case, ManifestSet, ModuleManifest } from '../model/manifest.ts';
import { didYouMean } from '../model/nearest.ts';
import type { Exchange } from './exchange.ts';

export interface Configuration {
  /** Component to module, for the components that this case uses. */
  readonly plugged: Readonly<Record<string, string>>;
  /** Fills `{select.NAME}`. */
  readonly select: Readonly<Record<string, string>>;
  /** Variables set for the build and the run. */
  readonly set: Readonly<Record<string, string>>;
  readonly pass: readonly string[];
  /** Programs that must exist. */
  readonly needs: readonly { readonly program: string; readonly module: string }[];
  /** Programs that any plugged module needs, whether this case uses it or not: a build makes the whole code. */
  readonly builtWith: readonly string[];
  /** null when the code needs no build. */
  readonly build: { readonly run: string; readonly makes: readonly string[] } | null;
}

/** A case, module or component that is not declared; the message names the nearest that is. */
export class NotDeclared extends Error {
  override readonly name = 'NotDeclared';
}

/**
 * What one case is built and run with: the assembly's modules, the case's own in their place, the exchanges last.
 *
 * @throws {NotDeclared} for a component or module that no manifest declares, or a module of another component
 */
export function configurationOf(
  manifests: ManifestSet,
  theCase: Case,
  exchanges: readonly Exchange[] = [],
): Configuration {
  const assembly: Assembly | undefined = manifests.assembly?.value;
  const plugged: Record<string, string> = { ...assembly?.plugged, ...theCase.with };
  const select: Record<string, string> = {};
  const set: Record<string, string> = { ...assembly?.environment?.set };
  for (const exchange of exchanges) {
    if (exchange.of !== 'module') continue;
    const module = moduleOf(manifests, exchange.name, exchange.to);
    plugged[module.component] = module.module;
  }
  const used = Object.entries(plugged).filter(
    ([component]) => theCase.uses === undefined || theCase.uses.includes(component),
  );
  const all = Object.entries(plugged).map(([component, name]) => moduleOf(manifests, component, name));
  const modules = used.map(([component, name]) => moduleOf(manifests, component, name));
  // Every plugged module gives its select values, used or not: a build command may name them all.
  for (const module of all) {
    for (const [key, value] of Object.entries(module.select ?? {})) select[key] = String(value);
  }
  for (const exchange of exchanges) {
    if (exchange.of === 'select') select[exchange.name] = exchange.to;
    if (exchange.of === 'environment') set[exchange.name] = exchange.to;
  }
  return {
    plugged: Object.fromEntries(used),
    select,
    set,
    pass: assembly?.environment?.pass ?? [],
    needs: modules.flatMap((module) => (module.needs ?? []).map((program) => ({ program, module: module.module }))),
    builtWith: [...new Set(all.flatMap((module) => module.needs ?? []))].sort(),
    build: assembly?.build === undefined ? null : { run: assembly.build.run, makes: assembly.build.makes },
  };
}

function moduleOf(manifests: ManifestSet, component: string, name: string): ModuleManifest {
  const declared = manifests.modules.get(name)?.value;
  if (declared === undefined) {
    throw new NotDeclared(`no module "${name}" is declared${didYouMean(name, manifests.modules.keys())}`);
  }
  if (declared.component !== component) {
    throw new NotDeclared(`module "${name}" fills ${declared.component}, not ${component}`);
  }
  return declared;
}

/**
 * The cases asked for, in the order of their names when none is named.
 *
 * @throws {NotDeclared} for a name that no manifest declares
 */
export function casesNamed(manifests: ManifestSet, names: readonly string[]): Case[] {
  if (names.length === 0) {
    return [...manifests.cases.keys()].sort().map((name) => manifests.cases.get(name)!.value);
  }
  return [...new Set(names)].map((name) => {
    const declared = manifests.cases.get(name)?.value;
    if (declared === undefined) {
      throw new NotDeclared(`there is no case "${name}"${didYouMean(name, manifests.cases.keys())}`);
    }
    return declared;
  });
}
