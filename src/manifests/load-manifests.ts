/** Manifest files come in as bytes; the records that they declare and everything that is wrong with them go out. Pure. */
import { type Finding, sortFindings } from '../model/finding.ts';
import type {
  Accepted,
  Assembly,
  Case,
  Contract,
  Declaration,
  ManifestSet,
  ModuleManifest,
} from '../model/manifest.ts';
import { compareText } from '../model/place.ts';
import { crossReferences } from './cross-references.ts';
import { ManifestDeclaration } from './declaration.ts';
import { decodeManifest } from './decode.ts';
import { ManifestText } from './manifest-text.ts';
import { type Problem, problemFinding, quoted } from './problem.ts';
import { MANIFEST_SHAPES, type ManifestSort } from './shapes.ts';
import { validate } from './validate.ts';
import { readYamlTree, type TreeNode } from './yaml-tree.ts';

export interface LoadOptions {
  /** The folder of the manifests as it stands before the paths; `manifests` when absent. */
  readonly folder?: string;
  /** The path of the assembly among the files, when it is not `assembly.yaml` in that folder. */
  readonly assembly?: string;
  /** The contracts that ship with the program; one of the code's own with the same name goes before. */
  readonly shipped?: ReadonlyMap<string, Uint8Array>;
  /** The commit the files come from; absent for the work tree. */
  readonly revision?: string;
}

export interface Loaded {
  readonly set: ManifestSet;
  /** Sorted, gravest first. */
  readonly findings: Finding[];
}

/**
 * Reads every manifest of a code.
 * A file that is not sound is left out of the set, and names that only it would declare are not reported as unknown.
 *
 * @param files  path from the root of the repository, as it is to be printed, to the bytes of the file
 * @returns the set and the findings; no bytes whatever make it throw
 */
export function loadManifests(files: ReadonlyMap<string, Uint8Array>, options: LoadOptions = {}): Loaded {
  const loader = new Loader(options);
  for (const path of [...files.keys()].sort(compareText)) loader.add(path, files.get(path)!);
  for (const path of [...(options.shipped?.keys() ?? [])].sort(compareText)) {
    loader.addShipped(path, options.shipped!.get(path)!);
  }
  return loader.finish();
}

/** True when a manifest could not be read or is not sound: the exit status is then 2. */
export function manifestsUnreadable(findings: readonly Finding[]): boolean {
  return findings.some(
    (finding) =>
      finding.gravity === 'stop' &&
      [
        'manifest-unreadable',
        'manifest-syntax',
        'manifest-unknown-key',
        'manifest-invalid',
        'manifest-absent',
      ].includes(finding.kind),
  );
}

/** Problems shown for one file; a file of nothing but mistakes is not shown line by line. */
const MOST_PROBLEMS = 100;

class Loader {
  private readonly options: LoadOptions;
  private readonly findings: Finding[] = [];
  private readonly sound: { [S in ManifestSort]: Map<string, ManifestDeclaration<unknown>> } = {
    assembly: new Map(),
    module: new Map(),
    contract: new Map(),
    case: new Map(),
    accepted: new Map(),
  };
  /** Names that unsound files would declare. */
  private readonly unsound = new Set<string>();

  constructor(options: LoadOptions) {
    this.options = options;
  }

  add(path: string, bytes: Uint8Array): void {
    const sort = this.sortOf(path);
    if (sort !== null) this.read(path, bytes, sort);
  }

  addShipped(path: string, bytes: Uint8Array): void {
    const name = baseName(path);
    if (!this.sound.contract.has(name) && !this.unsound.has(`contract ${name}`)) this.read(path, bytes, 'contract');
  }

  private sortOf(path: string): ManifestSort | null {
    if (this.options.assembly === path) return 'assembly';
    const folder = this.options.folder ?? 'manifests';
    const inside = folder === '' ? path : path.startsWith(`${folder}/`) ? path.slice(folder.length + 1) : null;
    if (inside === null || !/\.ya?ml$/.test(inside)) return null;
    if (/^assembly\.ya?ml$/.test(inside)) return this.options.assembly === undefined ? 'assembly' : null;
    if (/^accepted\.ya?ml$/.test(inside)) return 'accepted';
    return FOLDERS[inside.slice(0, inside.indexOf('/') + 1)] ?? null;
  }

  private read(path: string, bytes: Uint8Array, sort: ManifestSort): void {
    const decoded = decodeManifest(bytes);
    if (decoded.text === null) {
      const { line, column, says, next } = decoded;
      const { revision } = this.options;
      const place = { file: path, line, column, ...(revision === undefined ? {} : { revision }) };
      this.findings.push({ kind: 'manifest-unreadable', gravity: 'stop', place, says, evidence: [], next });
      this.unsound.add(`${sort} ${baseName(path)}`);
      return;
    }
    const source = new ManifestText(path, decoded.text, this.options.revision);
    const { root, problems } = readYamlTree(source);
    if (root === null) {
      const empty: Problem = {
        kind: 'manifest-invalid',
        span: { start: 0, end: 1 },
        says: 'The manifest is empty.',
        next: `write ${sort === 'accepted' ? 'a list of accepted findings' : `a ${sort}`}, beginning with "${sort}:", or remove the file.`,
      };
      this.refuse(source, problems.length === 0 ? [empty] : problems, sort, null);
      return;
    }
    const validation = { problems: [] as Problem[] };
    const value = otherSort(root, sort, validation.problems)
      ? undefined
      : validate(root, MANIFEST_SHAPES[sort], validation);
    if (value === undefined) this.refuse(source, validation.problems, sort, root);
    else {
      for (const caution of validation.problems) this.findings.push(problemFinding(source, caution));
      this.keep(new ManifestDeclaration(value, source, root), sort);
    }
  }

  private keep(declaration: ManifestDeclaration<unknown>, sort: ManifestSort): void {
    const name = (declaration.value as Record<string, string>)[sort]!;
    // There is one assembly and one list of accepted findings, whatever they are called.
    const key = sort === 'accepted' || sort === 'assembly' ? sort : name;
    const first = this.sound[sort].get(key);
    if (first === undefined) {
      this.sound[sort].set(key, declaration);
      return;
    }
    const place = first.placeOf([sort]);
    this.findings.push({
      ...problemFinding(declaration.source, {
        kind: 'manifest-duplicate',
        span: declaration.spanOf([sort]),
        says:
          key === sort
            ? `There is a second ${sort === 'accepted' ? 'list of accepted findings' : 'assembly'} here; it is not used.`
            : `The ${sort} ${quoted(name)} is declared a second time; this file is not used.`,
        next:
          key === 'assembly'
            ? 'move it away, or name the one that is meant with --assembly FILE.'
            : 'give it another name, or remove one of the two files.',
      }),
      evidence: [
        { says: 'the line meant', excerpt: declaration.source.excerpt(declaration.spanOf([sort])) },
        { says: 'first declared here', place, excerpt: first.source.excerpt(first.spanOf([sort])) },
      ],
    });
  }

  private refuse(source: ManifestText, problems: readonly Problem[], sort: ManifestSort, root: TreeNode | null): void {
    this.unsound.add(`${sort} ${baseName(source.file)}`);
    const entry = root?.is === 'map' ? root.entries.get(sort) : undefined;
    if (entry?.node.is === 'scalar') this.unsound.add(`${sort} ${entry.node.written}`);
    const sorted = [...problems].sort((a, b) => a.span.start - b.span.start);
    for (const problem of sorted.slice(0, MOST_PROBLEMS)) this.findings.push(problemFinding(source, problem));
    if (sorted.length > MOST_PROBLEMS) {
      this.findings.push(
        problemFinding(source, {
          kind: 'manifest-invalid',
          span: sorted[MOST_PROBLEMS]!.span,
          says: `${sorted.length - MOST_PROBLEMS} more problems follow in this file.`,
          next: 'mend those above first; some of the rest will go with them.',
        }),
      );
    }
  }

  finish(): Loaded {
    const { sound } = this;
    const set: ManifestSet = {
      assembly: ([...sound.assembly.values()][0] as Declaration<Assembly> | undefined) ?? null,
      modules: sound.module as ReadonlyMap<string, Declaration<ModuleManifest>>,
      contracts: sound.contract as ReadonlyMap<string, Declaration<Contract>>,
      cases: sound.case as ReadonlyMap<string, Declaration<Case>>,
      accepted: (sound.accepted.get('accepted') as Declaration<Accepted> | undefined) ?? null,
    };
    const unsoundNames = (sort: ManifestSort) =>
      [...this.unsound].filter((one) => one.startsWith(`${sort} `)).map((one) => one.slice(sort.length + 1));
    return { set, findings: sortFindings([...this.findings, ...crossReferences(set, unsoundNames)]) };
  }
}

const FOLDERS: Readonly<Record<string, ManifestSort>> = {
  'modules/': 'module',
  'contracts/': 'contract',
  'cases/': 'case',
};

/** A module manifest in the folder of cases is one clear problem, not a dozen about keys. */
function otherSort(root: TreeNode, sort: ManifestSort, problems: Problem[]): boolean {
  if (root.is !== 'map' || root.entries.has(sort)) return false;
  const other = (Object.keys(MANIFEST_SHAPES) as ManifestSort[]).find(
    (one) => root.entries.keys().next().value === one,
  );
  if (other === undefined) return false;
  const folder = {
    assembly: 'assembly.yaml',
    module: 'modules/',
    contract: 'contracts/',
    case: 'cases/',
    accepted: 'accepted.yaml',
  };
  problems.push({
    kind: 'manifest-invalid',
    span: root.entries.get(other)!.key,
    says: `This manifest declares ${MANIFEST_SHAPES[other].title}, but lies where ${MANIFEST_SHAPES[sort].title} belongs.`,
    next: `move it to ${folder[other]} in the folder of the manifests.`,
  });
  return true;
}

function baseName(path: string): string {
  return path.slice(path.lastIndexOf('/') + 1).replace(/\.ya?ml$/, '');
}
