/**
 * Which bytes a build gives what is declared without a kind, read from the compiler switches in its makefiles: a literal `0.1` or a
 * plain REAL is only single precision where no switch promotes it.
 */
import type { Place } from '../model/place.ts';
import type { SourceTree } from '../sources/tree.ts';

export interface Promotion {
  /** Type as declared to bytes, as in the assembly: `{real: 8}`. */
  readonly bytes: Readonly<Record<string, number>>;
  /** The switch and where it stands; the first of each kind. */
  readonly said: readonly { readonly place: Place; readonly text: string }[];
}

/**
 * Switches of Fortran compilers, by their manuals: GNU and LLVM `-fdefault-real-8`, `-fdefault-integer-8`; Intel, NVIDIA and NAG `-r8`,
 * `-i8`, `-real-size 64`, `-integer-size 64`, `-autodouble`; Cray `-s real64`, `-s integer64`, `-s default64`.
 */
const SWITCHES: readonly (readonly [RegExp, Readonly<Record<string, number>>])[] = [
  [/(?<![\w-])-fdefault-real-8\b/, { real: 8 }],
  [/(?<![\w-])-fdefault-integer-8\b/, { integer: 8 }],
  [/(?<![\w-])-r8\b/, { real: 8 }],
  [/(?<![\w-])-i8\b/, { integer: 8 }],
  [/(?<![\w-])-real-size[ =]64\b/, { real: 8 }],
  [/(?<![\w-])-integer-size[ =]64\b/, { integer: 8 }],
  [/(?<![\w-])-autodouble\b/, { real: 8 }],
  [/(?<![\w-])-s ?real64\b/, { real: 8 }],
  [/(?<![\w-])-s ?integer64\b/, { integer: 8 }],
  [/(?<![\w-])-s ?default64\b/, { real: 8, integer: 8 }],
];

const BUILD_FILE =
  /(^|\/)((GNU)?[Mm]akefile[^/]*|[^/]+\.(mk|make|cmake|mak)|CMakeLists\.txt|configure(\.ac|\.in)?|meson\.build|SConstruct|SConscript|make[a-z]*(\.inc)?)$/;
const MOST_FILES = 300;
const MOST_BYTES = 1 << 20;

/** The switches of one build file; lines that are comments, and switches taken out of others, say nothing. */
export function promotionIn(file: string, text: string): Promotion | null {
  const bytes: Record<string, number> = {};
  const said: Promotion['said'][number][] = [];
  text.split('\n').forEach((content, index) => {
    if (!content.includes('-') || /^\s*#|filter-out/.test(content)) return;
    const code = content.replace(/\s#.*$/, '');
    for (const [written, means] of SWITCHES) {
      const found = written.exec(code);
      if (found === null || Object.keys(means).every((type) => bytes[type] !== undefined)) continue;
      Object.assign(bytes, means);
      said.push({ place: { file, line: index + 1, column: found.index + 1 }, text: found[0] });
    }
  });
  return said.length === 0 ? null : { bytes, said };
}

/** What the build files nearest to the root say; null when none promotes anything. A code with several builds is taken by the first. */
export async function promotionOf(tree: SourceTree): Promise<Promotion | null> {
  const depth = (path: string) => path.split('/').length;
  const files = (await tree.entries())
    .filter(({ kind, path }) => kind === 'file' && BUILD_FILE.test(path))
    .map(({ path }) => path)
    .sort((a, b) => depth(a) - depth(b) || (a < b ? -1 : 1))
    .slice(0, MOST_FILES);
  for (const file of files) {
    const content = await tree.read(file);
    if (content === null || content.length > MOST_BYTES) continue;
    const found = promotionIn(file, new TextDecoder('latin1').decode(content));
    if (found !== null) return found;
  }
  return null;
}
