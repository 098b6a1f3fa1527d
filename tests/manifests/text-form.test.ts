import { describe, expect, it } from 'vitest';
import { checkText } from '../../src/manifests/text-form.ts';

describe('the form of a text', () => {
  it.each([
    ['path', 'src/eos/ionising.f90'],
    ['path', 'a b/c-d_e.F'],
    ['path', 'data/opac..dat'],
    ['version', '1.0.0'],
    ['version', '1.0.0-alpha.1+build.7'],
    ['day', '2028-02-29'],
    ['name', 'eos-ionising'],
    ['contract-reference', 'gas-state ^1.2 || ^2'],
  ] as const)('%s is met by %s', (form, text) => expect(checkText(form, text)).toBeNull());

  it.each([
    ['path', '/etc/passwd'],
    ['path', '~/eos.f90'],
    ['path', 'C:/eos.f90'],
    ['path', 'src\\eos.f90'],
    ['path', 'src/../../eos.f90'],
    ['path', 'src//eos.f90'],
    ['path', './src/eos.f90'],
    ['path', '.git/config'],
    ['path', 'a\u0000b'],
    ['version', '1.0'],
    ['version', '01.0.0'],
    ['version', 'v1.0.0'],
    ['day', '2027-02-29'],
    ['day', '31.01.2027'],
    ['name', 'eos ionising'],
    ['name', '__proto__'],
    ['name', ''],
    ['digest', 'sha256:ABC'],
    ['contract-reference', 'gas-state ^x.y'],
    ['prose', 'a\u001b[31m'],
  ] as const)('%s is not met by %j', (form, text) => {
    const wrong = checkText(form, text);
    expect(wrong?.says).toMatch(/^["A-Z].*\.$/);
    expect(wrong?.next).toMatch(/\.$/);
    expect(wrong?.says).not.toMatch(/[\u0000-\u001f]/);
  });

  it('says what to write: a name made from the text, a full version, a path with slashes', () => {
    expect(checkText('name', 'EOS Ionising (new)')!.next).toBe(
      'write a name of letters, digits and hyphens: eos-ionising-new.',
    );
    expect(checkText('version', 'v2.1')!.next).toContain('2.1.0');
    expect(checkText('path', 'src\\eos.f90')!.next).toBe('write it with slashes: "src/eos.f90".');
  });
});
