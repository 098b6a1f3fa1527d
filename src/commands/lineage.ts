/** `mortise lineage`: where a module came from and where its copies are; `--id` prints content identifiers. */
import { commitText, dayOf } from '../history/commit-text.ts';
import { type Copy, type Lineage, lineage } from '../history/lineage.ts';
import { findAssembly } from '../manifests/manifest-files.edge.ts';
import { printable } from '../model/printable.ts';
import { findingsText } from '../report/finding-text.ts';
import { idAt, openRepository } from '../sources/open-tree.edge.ts';
import { printSwhid } from '../sources/swhid.ts';
import { type Command, EXIT, type ExitStatus, type Invocation, type Surroundings, UsageError } from './command.ts';
import { textOptions } from './text-options.ts';

export const command: Command = {
  name: 'lineage',
  answers: 'where a module came from and where its copies are',
  usage: 'mortise lineage MODULE [--with REPOSITORY...], mortise lineage --id PATH [--at REV]',
  options: {
    with: {
      type: 'string',
      multiple: true,
      value: 'REPOSITORY',
      says: 'a folder with another code, to look for copies in',
    },
    id: {
      type: 'string',
      value: 'PATH',
      says: 'print the identifiers (SWHID) of a file, a folder or, for ".", the revision',
    },
    fresh: { type: 'boolean', says: 'read everything again instead of using what earlier runs kept' },
  },
  help: `
Prints a module's family tree: when its files were born, moved and given versions, who changed it in which year, the content
identifiers of its files, and when they may have been written. Without manifests each source file is a module.

  mortise lineage burn --with ../other-code      where the two parted, and what each side lacks, by procedure
  mortise lineage --id src/burn.f --at v2.1      swh:1:cnt:... (SWHID, ISO/IEC 18670)

Copies are found by content and by fingerprints of single procedures over the whole history of each repository, so new names
of variables, another layout and another source form do not hide them. Nothing is executed and nothing is fetched.`,
  async run(invocation, surroundings) {
    const { options, words } = invocation;
    if (typeof options.id === 'string') return printIds(options.id, invocation, surroundings);
    const [module, ...rest] = words;
    if (module === undefined || rest.length > 0)
      throw new UsageError(`mortise lineage takes one module; ${words.length} were given`);
    const place = findAssembly(surroundings.cwd, typeof options.assembly === 'string' ? options.assembly : undefined);
    const repository = openRepository(place?.root ?? surroundings.cwd);
    const others = ((options.with as readonly string[] | undefined) ?? []).map((name) => ({
      name,
      repository: openRepository(name.startsWith('/') ? name : `${surroundings.cwd}/${name}`),
    }));
    try {
      const to = await repository.resolve(typeof options.at === 'string' ? options.at : 'HEAD');
      const found = await lineage(repository, to, module, others, {
        folder: place?.folder ?? 'manifests',
        workers: 2,
        cache: options.fresh !== true,
        signal: surroundings.signal,
      });
      if (surroundings.signal.aborted) return EXIT.interrupted;
      if (found.lineage === null) {
        const { known } = found;
        throw new UsageError(
          `there is no module "${module}" in this history; it knows ${known.slice(0, 12).join(', ')}${known.length > 12 ? ', ...' : ''}`,
        );
      }
      surroundings.out(
        options.json === true
          ? `${JSON.stringify({ document: 'mortise lineage', ...found.lineage }, null, 2)}\n`
          : text(found.lineage, invocation, surroundings),
      );
      return EXIT.ok;
    } finally {
      for (const { repository: other } of others) other.close();
      repository.close();
    }
  },
};

async function printIds(path: string, { options }: Invocation, surroundings: Surroundings): Promise<ExitStatus> {
  const repository = openRepository(surroundings.cwd);
  try {
    if (repository.format !== 'sha1') {
      throw new UsageError('this repository names objects by SHA-256, and identifiers of version 1 are made of SHA-1');
    }
    const commit = await repository.resolve(typeof options.at === 'string' ? options.at : 'HEAD');
    const found = await idAt(repository, commit, path);
    if (found === null)
      throw new UsageError(`there is no "${path}" at ${commit.slice(0, 10)}; paths start at ${repository.place.root}`);
    const ids = {
      ...(path === '.' ? { revision: printSwhid('rev', commit) } : {}),
      [found.type === 'dir' ? 'directory' : 'content']: printSwhid(found.type, found.id),
    };
    surroundings.out(
      options.json === true
        ? `${JSON.stringify({ document: 'mortise lineage', path, commit, ids }, null, 2)}\n`
        : `${Object.values(ids).join('\n')}\n`,
    );
    return EXIT.ok;
  } finally {
    repository.close();
  }
}

function text(found: Lineage, invocation: Invocation, surroundings: Surroundings): string {
  const lines = [printable(found.module)];
  for (const { what, step } of found.events) lines.push(`  ${printable(what)}: ${printable(commitText(step.commit))}`);
  if (found.validated !== null)
    lines.push(`  last validated ${found.validated.date} in case ${printable(found.validated.case)}`);
  lines.push('', 'changed by');
  for (const { year, name, commits } of found.people)
    lines.push(`  ${year}  ${String(commits).padStart(4)}  ${printable(name)}`);
  lines.push('', 'files');
  for (const { path, swhid, vintage } of found.files) {
    lines.push(`  ${printable(path)}`, `    ${swhid}`);
    const years = [
      ...(vintage.notBefore === null ? [] : [`not before ${vintage.notBefore}`]),
      ...(vintage.likelyBefore === null ? [] : [`in the style of before ${vintage.likelyBefore}`]),
    ];
    if (vintage.evidence.length > 0)
      lines.push(`    written ${years.join(', ') || 'at an unknown time'} (${vintage.evidence.join('; ')})`);
  }
  for (const copy of found.copies) lines.push('', ...copyText(copy));
  return `${lines.join('\n')}\n\n${findingsText(found.findings, textOptions(invocation, surroundings))}`;
}

function copyText({ repository, descent, version }: Copy): string[] {
  const name = printable(repository);
  const { split, direction } = descent;
  const at = `commit ${split.commit.slice(0, 10)}${version === null ? '' : ` (version ${version})`} in ${dayOf(split.seconds).slice(0, 4)}`;
  const mends = descent.procedures.reduce((sum, one) => sum + one.missingHere.length, 0);
  const own = descent.procedures.reduce((sum, one) => sum + one.missingThere.length, 0);
  const head =
    direction === 'from there to here'
      ? `split from ${name} at ${at}`
      : direction === 'from here to there'
        ? `${name} was split from here at ${at}`
        : `shared with ${name} up to ${at} there; which side had it first is unknown`;
  const lines = [
    `${head}; since then ${mends} ${mends === 1 ? 'change' : 'changes'} there missing here, ${own} ${own === 1 ? 'change' : 'changes'} here unknown there`,
  ];
  for (const evidence of descent.evidence) lines.push(`  ${printable(evidence)}`);
  for (const one of descent.procedures) {
    const called = one.there === one.here ? '' : ` (there ${printable(one.there)})`;
    const likeness = one.exact ? 'the same' : `${Math.round(one.likeness * 100)} % alike`;
    lines.push(
      `  ${printable(one.here)}${called}: ${likeness} on ${dayOf(one.sharedThere.seconds)}; ${one.missingHere.length} missing here, ${one.missingThere.length} unknown there`,
    );
  }
  return lines;
}
