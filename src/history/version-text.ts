/** Versions as codes declared them before there were manifests: in tags, version files, build files, change logs. Pure. */
import semver from 'semver';

/** Files that may say which version a code is, likeliest first; the number is how they rank when several do. */
const SAYERS: readonly (readonly [RegExp, RegExp])[] = [
  [/(^|\/)VERSION(\.txt)?$/i, /^\s*(?:version\s*[:=]?\s*)?v?(\d+\.\d+[\w.+-]*)/im],
  [/(^|\/)CITATION\.cff$/, /^version:\s*["']?v?(\d+\.\d+[\w.+-]*)/m],
  [/(^|\/)pyproject\.toml$/, /^version\s*=\s*["'](\d+[\w.+-]*)["']/m],
  [/(^|\/)setup\.(py|cfg)$/, /\bversion\s*=\s*["']?(\d+\.\d+[\w.+-]*)/],
  [/(^|\/)CMakeLists\.txt$/, /\bproject\s*\([^)]*?\bVERSION\s+(\d+\.\d+[\w.]*)/i],
  [/(^|\/)configure\.(ac|in)$/, /\bAC_INIT\s*\([^,]*,\s*\[?\s*v?(\d+\.\d+[\w.+-]*)/],
  [/(^|\/)package\.json$/, /^\s*"version"\s*:\s*"(\d+\.\d+[\w.+-]*)"/m],
  [/(^|\/)(GNU)?[Mm]akefile$/, /^\s*[A-Z_]*VERSION\s*:?=\s*v?(\d+\.\d+[\w.+-]*)/m],
  [
    /(^|\/)(CHANGELOG|CHANGES|NEWS|HISTORY|RELEASE[-_]?NOTES)(\.\w+)?$/i,
    /^(?:#+\s*|=+\s*|\*\s*)?(?:version|release|v)?\s*\[?v?(\d+\.\d+(?:\.\d+)?[\w.+-]*)/im,
  ],
  [/(^|\/)version\.(f|f90|inc|h|py|c)$/i, /version\w*["']?\s*(?:=|,|\()?\s*["']v?(\d+\.\d+[\w.+-]*)["']/i],
];

/** Only near the root: deeper ones belong to bundled libraries. */
export function isVersionFile(path: string): boolean {
  return path.split('/').length <= 2 && SAYERS.some(([name]) => name.test(path));
}

/** @returns how trusted the file is (lower is more) and the version, or null when it says none */
export function versionIn(path: string, text: string): { readonly rank: number; readonly version: string } | null {
  const rank = SAYERS.findIndex(([name]) => name.test(path));
  const written = rank < 0 ? undefined : SAYERS[rank]![1].exec(text.slice(0, 200_000))?.[1];
  const version = written === undefined ? null : asVersion(written);
  return version === null ? null : { rank: rank + 10 * path.split('/').length, version };
}

/** `v1.2.3`, `release-1.2`, `code_2.0`, `1.4-rc1`; dates and nightly builds are no versions. */
export function versionOfTag(name: string): string | null {
  const short = name.replace(/^refs\/tags\//, '');
  if (/\d{6,}|\d{4}-\d{2}-\d{2}/.test(short)) return null;
  const match = /^(?:.*[^\d.])?(?<!\d)v?(\d+\.\d+(?:\.\d+)?(?:[-.]?(?:alpha|beta|rc|a|b)\.?\d*)?)$/i.exec(short);
  return match === null ? null : asVersion(match[1]!);
}

/** A full semantic version: `17.0` is 17.0.0, `1.2rc1` is 1.2.0-rc1. */
export function asVersion(text: string): string | null {
  const strict = semver.valid(text);
  if (strict !== null) return strict;
  const match = /^v?(\d+)(?:\.(\d+))?(?:\.(\d+))?[-.]?([A-Za-z][\w.-]*)?/.exec(text);
  if (match === null) return null;
  const number = (digits: string | undefined) => String(Number(digits ?? 0));
  const base = `${number(match[1])}.${number(match[2])}.${number(match[3])}`;
  return semver.valid(match[4] === undefined ? base : `${base}-${match[4].replaceAll('_', '-')}`) ?? semver.valid(base);
}
