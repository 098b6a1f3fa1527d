/** What an entry can be filled in with without asking: the modules plugged in with their contents, contracts, revision and machine. Pure. */
import { contractReference } from '../manifests/contract-reference.ts';
import type { ManifestSet } from '../model/manifest.ts';
import type { Entry, UsedModule } from './record.ts';

export interface CodeNow {
  readonly manifests: ManifestSet;
  /** Full commit id; null outside git. */
  readonly revision: string | null;
  /** Content id (`swh:1:cnt:…`) of a file; null when it is not there. */
  contentOf(file: string): string | null;
  /** `sha256:` digest of a file; null when it is not there. */
  digestOf(file: string): string | null;
  readonly environment: Readonly<Record<string, string>>;
}

/** The parts of an entry that the code itself answers. */
export function entryFromCode(code: CodeNow): Pick<Entry, 'code' | 'modules' | 'contracts' | 'environment'> {
  const { manifests, revision } = code;
  const plugged = Object.entries(manifests.assembly?.value.plugged ?? {});
  const modules = plugged.flatMap(([component, name]): UsedModule[] => {
    const declaration = manifests.modules.get(name);
    if (declaration === undefined) return [];
    const { version, source, tables } = declaration.value;
    const files = [...source.files, ...(tables ?? []).map((table) => table.file)];
    const contents = files.flatMap((file) => {
      const id = code.contentOf(file);
      return id === null ? [] : [[file, id] as const];
    });
    const manifest = code.digestOf(declaration.file);
    return [
      {
        module: name,
        component,
        version,
        ...(manifest === null ? {} : { manifest }),
        contents: Object.fromEntries(contents),
      },
    ];
  });
  const contracts = new Map<string, string>();
  for (const [, name] of plugged) {
    const { offers, expects } = manifests.modules.get(name)?.value ?? {};
    for (const { contract } of [...(offers ?? []), ...(expects ?? [])]) {
      const declared = manifests.contracts.get(contractReference(contract).name)?.value;
      if (declared !== undefined) contracts.set(declared.contract, declared.version);
    }
  }
  return {
    code:
      revision === null
        ? []
        : [{ commit: revision, ...(revision.length === 40 ? { swhid: `swh:1:rev:${revision}` } : {}) }],
    modules,
    contracts: Object.fromEntries([...contracts].sort(([a], [b]) => (a < b ? -1 : 1))),
    environment: code.environment,
  };
}

/** What is wrong with an entry before it is sealed, one sentence each; empty when it may be. */
export function entryMistakes(
  entry: Entry,
  readers: { orcid(text: string): string | null; doi(text: string): unknown; arxiv(text: string): unknown },
): string[] {
  const { result, people, modules, code } = entry;
  const named = Object.values(result).some((value) => value !== undefined && value !== '');
  return [
    ...(named ? [] : ['the result has no name: give a DOI, an arXiv id, a thesis, a data set, a campaign or a title']),
    ...(result.doi !== undefined && readers.doi(result.doi) === null
      ? [`"${result.doi}" is no DOI: one looks like 10.1000/182`]
      : []),
    ...(result.arxiv !== undefined && readers.arxiv(result.arxiv) === null
      ? [`"${result.arxiv}" is no arXiv id: one looks like 2103.01234`]
      : []),
    ...(people.length === 0 ? ['nobody is named: give at least one person'] : []),
    ...people
      .filter((one) => one.orcid !== undefined && readers.orcid(one.orcid) === null)
      .map((one) => `"${one.orcid}" of ${one.name} is no ORCID iD: its check character is wrong or digits are missing`),
    ...(modules.length === 0 ? ['no module is named'] : []),
    ...(code.length === 0 ? ['no code revision is named: commit the code, or give one'] : []),
  ];
}
