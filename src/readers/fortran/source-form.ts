/** Fixed or free form: by the name where it tells, by the content where it does not. Pure. */

/**
 * `.f .for .f77 .ftn` are fixed and `.f90` and later free; `.F`, `.h`, `.inc` and files without an ending may be either, and
 * a build can say otherwise, so content that can only be one form wins over the name.
 */
export function sourceForm(path: string, text: string): 'fixed' | 'free' {
  const ending = /\.([A-Za-z0-9]+)$/.exec(path)?.[1] ?? '';
  const byName = /^(f90|f95|f03|f08|f18|f2k|pf|fpp|fypp)$/i.test(ending) ? 'free' : 'fixed';
  let fixed = 0;
  let free = 0;
  let lines = 0;
  for (const line of text.slice(0, 60_000).split('\n')) {
    if (/^\s*$/.test(line) || line.startsWith('#')) continue;
    if (++lines > 400) break;
    if (/^[cC*]([^a-zA-Z0-9_=(%]|$)/.test(line)) fixed += 2;
    else if (/^ {5}[^ 0!\t]/.test(line) && !/^ {5}[A-Za-z]\w*\s*(=|\(|::|,)/.test(line)) fixed += 2;
    else if (/^\s{0,4}[A-Za-z]/.test(line) && !/^\s{0,4}[cCdD*]\s/.test(line)) free += 1;
    if (/^[^!'"]*&\s*(!.*)?$/.test(line) && !/^.{72}&/.test(line) && !/^ {5}&/.test(line)) free += 2;
  }
  if (byName === 'free') return fixed > 10 && fixed > free * 4 ? 'fixed' : 'free';
  return free > fixed * 2 + 4 ? 'free' : 'fixed';
}
