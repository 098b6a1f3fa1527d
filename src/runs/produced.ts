/** Says what a result was produced by: revision, modules with their content ids, command, inputs, environment. */
import type { ManifestSet } from '../model/manifest.ts';
import type { Produced, ProducedModule } from './case-outcome.ts';
import type { Configuration } from './configuration.ts';
import { contentId } from './key.ts';
import { findProgram, thisMachine, versionOf } from './machine.edge.ts';
import type { TreeListing } from './tree-files.edge.ts';

export interface Making {
  /** Name of the case. */
  readonly case: string;
  readonly manifests: ManifestSet;
  readonly listing: TreeListing;
  readonly configuration: Configuration;
  readonly command: readonly string[];
  readonly build: readonly string[] | null;
  readonly inputs: readonly string[];
  readonly environment: Readonly<Record<string, string>>;
  readonly executor: string;
}

const versions = new Map<string, Promise<string>>();

export async function producedBy(making: Making): Promise<Produced> {
  const { listing, configuration } = making;
  const ids = idsOf(listing);
  const modules: Record<string, ProducedModule> = {};
  for (const [component, name] of Object.entries(configuration.plugged)) {
    const declaration = making.manifests.modules.get(name)!;
    const { value } = declaration;
    const files = [...value.source.files, ...(value.tables ?? []).map((table) => table.file)];
    modules[component] = {
      module: name,
      version: value.version,
      files: Object.fromEntries(files.map((file) => [file, contentId(ids.get(file))])),
      manifest: contentId(ids.get(declaration.file)),
    };
  }
  const { PATH, HOME, ...variables } = making.environment;
  const programs: Record<string, string> = {};
  const names = [
    making.command[0]!,
    ...(making.build === null ? [] : [making.build[0]!]),
    ...configuration.needs.map((need) => need.program),
  ];
  for (const name of new Set(names)) {
    const program = findProgram(name, PATH);
    if (program === null) continue;
    // Asked once a program and a process: every case of a run tells the same.
    const stamp = `${program.path} ${program.modified}`;
    if (!versions.has(stamp))
      versions.set(
        stamp,
        versionOf(program).then((version) => version ?? program.path),
      );
    programs[name] = await versions.get(stamp)!;
  }
  return {
    revision: listing.commit,
    changed: listing.changed,
    modules,
    manifests: manifestIds(making, ids),
    command: making.command,
    build: making.build,
    select: configuration.select,
    inputs: Object.fromEntries(
      making.inputs.flatMap((input) => (ids.has(input) ? [[input, contentId(ids.get(input))!]] : [])),
    ),
    environment: { ...thisMachine(), programs, variables, executor: making.executor },
  };
}

function manifestIds({ manifests, configuration, case: name }: Making, ids: ReadonlyMap<string, string>) {
  const plugged = Object.values(configuration.plugged);
  const files = [
    manifests.assembly?.file,
    manifests.cases.get(name)?.file,
    ...plugged.map((module) => manifests.modules.get(module)?.file),
    ...[...manifests.contracts.values()].map((contract) => contract.file),
  ];
  // The contracts that ship with the program are no files of the code.
  return Object.fromEntries(
    files.flatMap((file) => (file !== undefined && ids.has(file) ? [[file, contentId(ids.get(file))!]] : [])),
  );
}

const known = new WeakMap<TreeListing, ReadonlyMap<string, string>>();

function idsOf(listing: TreeListing): ReadonlyMap<string, string> {
  const earlier = known.get(listing);
  if (earlier !== undefined) return earlier;
  const ids = new Map(listing.files.map((file) => [file.path, file.id]));
  known.set(listing, ids);
  return ids;
}
