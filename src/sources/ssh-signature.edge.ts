/**
 * Signatures with the keys people have for SSH, made and tested by OpenSSH's own `ssh-keygen -Y` (SSHSIG, PROTOCOL.sshsig of OpenSSH).
 * Whoever reads a record in fifty years can test one by hand: `printf %s SEAL | ssh-keygen -Y check-novalidate -n mortise -s FILE`.
 */
import { spawnSync } from 'node:child_process';
import { existsSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';

const NAMESPACE = 'mortise';

/** No signature could be made: no ssh-keygen, no such key, a wrong passphrase. The message says what to do. */
export class SigningFailed extends Error {
  override readonly name = 'SigningFailed';
}

/**
 * @param text  what is signed, as UTF-8
 * @param key   path of a private key, or of a public one whose private key an agent holds
 * @returns the armoured signature, from `-----BEGIN SSH SIGNATURE-----` to the line end behind its END
 * @throws {SigningFailed}
 */
export function signText(text: string, key: string): string {
  if (!existsSync(key))
    throw new SigningFailed(`there is no key ${key}; name an SSH key file, such as ~/.ssh/id_ed25519`);
  const { error, status, stdout, stderr } = spawnSync('ssh-keygen', ['-Y', 'sign', '-n', NAMESPACE, '-f', key], {
    input: text,
    encoding: 'utf8',
  });
  if (error !== undefined)
    throw new SigningFailed(`ssh-keygen could not be started (${error.message}); install OpenSSH`);
  if (status !== 0 || !stdout.startsWith('-----BEGIN SSH SIGNATURE-----'))
    throw new SigningFailed(`ssh-keygen did not sign with ${key}: ${stderr.trim().split('\n').at(-1)}`);
  return stdout;
}

export type SignatureState =
  /** Made by this key over this text. `signer`: who the file of allowed signers says it belongs to; null when it says nobody. */
  | { readonly good: true; readonly key: string; readonly signer: string | null }
  | { readonly good: false; readonly why: string }
  /** Could not be tested here. */
  | { readonly good: null; readonly why: string };

/**
 * @param allowed  path of a file of allowed signers, in OpenSSH's form (a line `PRINCIPAL KEYTYPE KEY`); not there is as good as empty
 */
export function checkSignature(text: string, signature: string, allowed?: string): SignatureState {
  const folder = mkdtempSync(join(tmpdir(), 'mortise-signature-'));
  try {
    const file = join(folder, 'signature');
    writeFileSync(file, signature);
    const ask = (...words: string[]) =>
      spawnSync('ssh-keygen', ['-Y', ...words, '-s', file], { input: text, encoding: 'utf8' });
    const tested = ask('check-novalidate', '-n', NAMESPACE);
    if (tested.error !== undefined)
      return { good: null, why: `ssh-keygen could not be started: ${tested.error.message}` };
    if (tested.status !== 0) return { good: false, why: lastLine(tested.stderr) || lastLine(tested.stdout) };
    const key = /\b(SHA256:\S+)/.exec(tested.stdout)?.[1] ?? 'unknown';
    return { good: true, key, signer: signerOf(allowed, ask) };
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

function signerOf(
  allowed: string | undefined,
  ask: (...words: string[]) => { status: number | null; stdout: string },
): string | null {
  if (allowed === undefined || !existsSync(allowed)) return null;
  const found = ask('find-principals', '-f', allowed);
  const principal = found.status === 0 ? found.stdout.split('\n')[0]!.trim() : '';
  if (principal === '') return null;
  return ask('verify', '-n', NAMESPACE, '-f', allowed, '-I', principal).status === 0 ? principal : null;
}

function lastLine(text: string): string {
  return text.trim().split('\n').at(-1) ?? '';
}
