/** A repository with an attack of each kind that reading could fall for. Whatever of it is executed leaves a file behind. */
import { execFileSync } from 'node:child_process';
import { appendFileSync, chmodSync, mkdirSync, mkdtempSync, readdirSync, symlinkSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { commitAll, gitIn, SMALL_CODE, writeFiles } from '../support/small-code.ts';

export interface HostileRepository {
  readonly root: string;
  /** A file outside that links and paths reach for. */
  readonly secret: string;
  /** Names of the attacks that were executed. */
  executed(): string[];
}

/** Escape sequence, mark that reorders, bell and a carriage return, with markup of HTML and Markdown. */
export const RAW =
  '\u001b[2J\u001b]0;owned\u0007\u202e</script><img src=x onerror=alert(1)>![x](http://evil.example/x)@everyone|`\u009b31m';
export const SECRET = 'the secret that lies outside';

/** `HEAD~1..HEAD` is the change; the work tree and the index differ from HEAD too. */
export function layHostileRepository(): HostileRepository {
  const folder = mkdtempSync(join(tmpdir(), 'mortise-hostile-'));
  const root = join(folder, 'code');
  const marks = join(folder, 'marks');
  const secret = join(folder, 'secret.yaml');
  mkdirSync(root);
  mkdirSync(marks);
  writeFileSync(secret, `module: ${SECRET}\n`);
  const program = (name: string) => {
    const file = join(folder, `${name}.sh`);
    writeFileSync(file, `#!/bin/sh\necho run >> '${marks}/${name}'\ncat 2>/dev/null\nexit 0\n`);
    chmodSync(file, 0o755);
    return file;
  };
  gitIn(root, 'init', '-q', '-b', 'main');
  writeFiles(root, SMALL_CODE);
  commitAll(root, 'Begin');

  // A submodule whose address is a program.
  const submodule = join(folder, 'library');
  mkdirSync(submodule);
  gitIn(submodule, 'init', '-q', '-b', 'main');
  writeFiles(submodule, { 'a.f90': 'end\n' });
  const pinned = commitAll(submodule, 'Library');

  writeFiles(root, {
    '.gitattributes': '* filter=evil diff=evil merge=evil text\n*.ts ident\n',
    '.gitmodules': `[submodule "library"]\n\tpath = library\n\turl = ext::${program('submodule')}\n`,
    'src/cool.ts': `${SMALL_CODE['src/cool.ts']!.replace('rho: number, temp: number', 'temp: number, rho: number')}// ${RAW}\n`,
    'src/name \u001b[31m\u202e<b>.ts': `export function x(a: number): number { return a; } // ${RAW}\n`,
    'manifests/modules/tagged.yaml': `!!js/function "function(){require('fs').writeFileSync('${marks}/yaml','')}"\n`,
    'manifests/modules/tagged2.yaml': `module: !!python/object/apply:os.system ["touch ${marks}/yaml"]\ncomponent: cooling\n`,
    'manifests/cases/front.yaml': SMALL_CODE['manifests/cases/front.yaml']!.replace(
      'node {root}/run.mjs {out}',
      `${program('case')} {out}`,
    ).replace('A cooling front', '"A front</script><img src=x onerror=alert(1)>"'),
    'manifests/modules/outside.yaml': `module: outside\ncomponent: cooling\nversion: 1.0.0\nsource: {language: typescript, files: [../secret.yaml, /etc/passwd, .git/config]}\n`,
    'manifests/assembly.yaml': `${SMALL_CODE['manifests/assembly.yaml']}build: {run: ${program('build')}, makes: [x]}\n`,
  });
  // An alias that expands without end.
  writeFiles(root, {
    'manifests/modules/bomb.yaml': `a: &a [x,x,x,x,x,x,x,x,x]\n${[...'bcdefghi'].map((name, index) => `${name}: &${name} [${`*${'abcdefghi'[index]},`.repeat(9)}]`).join('\n')}\n`,
  });
  symlinkSync(secret, join(root, 'manifests', 'modules', 'linked.yaml'));
  symlinkSync('../../..', join(root, 'src', 'up'));
  gitIn(root, 'add', '-A');
  gitIn(root, 'update-index', '--add', '--cacheinfo', `160000,${pinned},library`);
  gitIn(root, 'commit', '-q', '-m', `Tidy ${RAW}`);
  gitIn(root, 'tag', '-a', 'v9', '-m', `Tag ${RAW}`);

  // What is not committed.
  appendFileSync(join(root, 'src', 'cool.ts'), `// work ${RAW}\n`);
  writeFiles(root, { 'staged.ts': `export const staged = 1; // ${RAW}\n` });
  gitIn(root, 'add', 'staged.ts');

  // Now the configuration and the hooks: everything that git can be made to run.
  for (const hook of [
    'post-checkout',
    'pre-commit',
    'post-index-change',
    'reference-transaction',
    'fsmonitor-watchman',
    'post-merge',
    'pre-auto-gc',
  ]) {
    const file = join(root, '.git', 'hooks', hook);
    mkdirSync(join(root, '.git', 'hooks'), { recursive: true });
    writeFileSync(file, `#!/bin/sh\necho run >> '${marks}/hook-${hook}'\n`);
    chmodSync(file, 0o755);
  }
  const config = `
[core]
	fsmonitor = ${program('fsmonitor')}
	pager = ${program('pager')}
	sshCommand = ${program('ssh')}
	editor = ${program('editor')}
	attributesFile = ${join(root, '.gitattributes')}
	alternateRefsCommand = ${program('alternate-refs')}
[diff]
	external = ${program('external-diff')}
[diff "evil"]
	textconv = ${program('textconv')}
	command = ${program('diff-driver')}
[filter "evil"]
	clean = ${program('clean')}
	smudge = ${program('smudge')}
	process = ${program('filter-process')}
	required = true
[merge "evil"]
	driver = ${program('merge-driver')}
[gpg]
	program = ${program('gpg')}
[log]
	showSignature = true
[pager]
	log = ${program('pager-log')}
[alias]
	diff-tree = !${program('alias')}
	merge-base = !${program('alias')}
[remote "origin"]
	url = ext::${program('remote')}
	promisor = true
	partialclonefilter = blob:none
[protocol "ext"]
	allow = always
[credential]
	helper = ${program('credential')}
[submodule "library"]
	update = !${program('submodule-update')}
[interactive]
	diffFilter = ${program('diff-filter')}
`;
  appendFileSync(join(root, '.git', 'config'), config);
  return { root, secret, executed: () => readdirSync(marks).sort() };
}

/** Proof that the attacks work: git, called the ordinary way, falls for some of them. */
export function fallFor({ root }: HostileRepository): void {
  // A filter that answers wrongly ends git before it comes to the others.
  for (const words of [
    ['status'],
    ['diff'],
    ['config', '--remove-section', 'filter.evil'],
    ['diff', 'HEAD'],
    ['log', '-p', '-1'],
  ]) {
    try {
      execFileSync('git', words, { cwd: root, stdio: 'ignore', timeout: 10_000 });
    } catch {
      // What git makes of it is not the matter.
    }
  }
}
