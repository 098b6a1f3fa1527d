/** `mortise draft [PATH…]`: writes manifests for code that has none. */
import { basename, join } from 'node:path';
import { isVersionFile, versionIn, versionOfTag } from '../history/version-text.ts';
import { printable } from '../model/printable.ts';
import { draftModules } from '../readers/draft/draft-modules.ts';
import { assemblyDraftText, type DraftVersion, moduleDraftText } from '../readers/draft/draft-text.ts';
import { promotionOf } from '../readers/promotion.ts';
import { decodeText } from '../readers/read-source.ts';
import { findRepository } from '../sources/find-repository.edge.ts';
import { openRepository, openTree } from '../sources/open-tree.edge.ts';
import type { SourceTree } from '../sources/tree.ts';
import { type Command, EXIT } from './command.ts';
import { readIfThere, writeNew } from './files.edge.ts';
import { DEFINE, readPaths } from './read-paths.ts';

export const command: Command = {
  name: 'draft',
  answers: 'writes manifests for code that has none',
  usage: 'mortise draft [PATH…]',
  options: {
    define: DEFINE,
  },
  help: `
Reads the sources below the paths, or all of the code, and writes manifests/modules/NAME.yaml for each file that offers
procedures, and manifests/assembly.yaml. Components are guessed from names and folders, units and conventions are taken from
comments with the line they stand on, versions from tags and version files; what nothing says is marked unknown. Nothing that
is there already is written over: a second run tells which drafts would now read otherwise.

  mortise draft src/eos src/opacity

Exit status: 0, also when everything was there already; 2 wrong usage.`,
  async run(invocation, surroundings) {
    const words = invocation.words.length === 0 ? ['.'] : invocation.words;
    const { files } = await readPaths(
      words,
      { ...invocation, options: { ...invocation.options, at: undefined } },
      surroundings,
    );
    const tree = await openTree(surroundings.cwd);
    const modules = draftModules(new Map(Object.entries(files)));
    const version = await versionHere(tree);
    const drafts = [
      ...modules.map((module) => ({
        file: `manifests/modules/${module.module}.yaml`,
        text: moduleDraftText(module, version),
      })),
      { file: 'manifests/assembly.yaml', text: assemblyDraftText(nameOf(tree.root), modules, await promotionOf(tree)) },
    ];
    const results = [];
    for (const { file, text } of drafts) {
      const before = await readIfThere(join(tree.root, file));
      if (before === null) await writeNew(join(tree.root, file), text);
      results.push({ file, state: before === null ? 'written' : before === text ? 'as drafted' : 'kept' });
    }
    const kept = results.filter((one) => one.state === 'kept');
    surroundings.out(
      invocation.options.json === true
        ? `${JSON.stringify({ document: 'mortise draft', modules, files: results }, null, 2)}\n`
        : [
            ...results.map((one) => `${one.state.padEnd(11)} ${printable(one.file)}`),
            '',
            `${results.filter((one) => one.state === 'written').length} written, ${kept.length} kept as they are${kept.length === 0 ? '' : ': a fresh draft reads otherwise'}`,
            'Next: correct what is marked unknown, then run "mortise check".',
            '',
          ].join('\n'),
    );
    return EXIT.ok;
  },
};

function nameOf(root: string): string {
  const name = basename(root)
    .toLowerCase()
    .replace(/[^a-z0-9]+/g, '-')
    .replace(/^-+|-+$/g, '');
  return /^[a-z]/.test(name) ? name : `code-${name}`;
}

/** The latest tag that is a version, else what a version file says. */
async function versionHere(tree: SourceTree): Promise<DraftVersion> {
  if (findRepository(tree.root) !== null) {
    const repository = openRepository(tree.root);
    try {
      const tags = (await repository.tags()).flatMap((tag) => {
        const version = versionOfTag(tag.name);
        return version === null ? [] : [{ ...tag, version }];
      });
      const latest = tags.sort((a, b) => b.seconds - a.seconds)[0];
      if (latest !== undefined)
        return { version: latest.version, from: `tag ${printable(latest.name.replace(/^refs\/tags\//, ''))}` };
    } finally {
      repository.close();
    }
  }
  for (const { path, kind } of await tree.entries()) {
    if (kind !== 'file' || !isVersionFile(path)) continue;
    const bytes = await tree.read(path);
    const said = bytes === null ? null : versionIn(path, decodeText(bytes));
    if (said !== null) return { version: said.version, from: printable(path) };
  }
  return { version: '0.1.0', from: null };
}
