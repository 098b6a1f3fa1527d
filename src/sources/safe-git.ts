/**
 * How git is called on a repository that nobody vouches for. Pure: the words and the environment, no process.
 * Configuration of the repository that could run a program is overridden; the user's and the machine's is not read at all,
 * so that output never depends on it. Nothing is ever fetched.
 */

/** Given before the name of every git command. */
export const SAFE_CONFIG: readonly string[] = [
  'core.fsmonitor=false',
  'core.hooksPath=/dev/null',
  'core.attributesFile=',
  'core.pager=cat',
  'core.alternateRefsCommand=',
  'core.sshCommand=false',
  'core.untrackedCache=false',
  'core.quotePath=false',
  'diff.external=',
  'log.showSignature=false',
  'gpg.program=false',
  'protocol.allow=never',
];

export const SAFE_WORDS: readonly string[] = ['--no-pager', ...SAFE_CONFIG.flatMap((entry) => ['-c', entry])];

/** The environment of every git process. The caller's own GIT_* variables could point anywhere, so none is passed on. */
export function safeEnvironment(env: Readonly<Record<string, string | undefined>>): Record<string, string> {
  const kept: Record<string, string> = {};
  for (const name of ['PATH', 'HOME', 'TMPDIR', 'SystemRoot', 'LD_LIBRARY_PATH']) {
    const value = env[name];
    if (value !== undefined) kept[name] = value;
  }
  return {
    ...kept,
    LC_ALL: 'C',
    GIT_CONFIG_NOSYSTEM: '1',
    GIT_CONFIG_SYSTEM: '/dev/null',
    GIT_CONFIG_GLOBAL: '/dev/null',
    GIT_ATTR_NOSYSTEM: '1',
    GIT_TERMINAL_PROMPT: '0',
    GIT_OPTIONAL_LOCKS: '0',
    // Read by git 2.45 and later; older ones are held by the allowed protocols, of which there is none.
    GIT_NO_LAZY_FETCH: '1',
    GIT_ALLOW_PROTOCOL: 'none',
    GIT_NO_REPLACE_OBJECTS: '1',
    GIT_LITERAL_PATHSPECS: '0',
  };
}

/** True for text that may stand where git expects a revision: no option, no line end, no NUL. */
export function isRevisionText(text: string): boolean {
  return text !== '' && !text.startsWith('-') && !/[\0\r\n]/.test(text);
}
