/** Judged by OpenSSH itself: what is signed here must be what `ssh-keygen` verifies by hand. */
import { execFileSync, spawnSync } from 'node:child_process';
import { mkdtempSync, readdirSync, readFileSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { expect, it } from 'vitest';
import { checkSignature, SigningFailed, signText } from '../../src/sources/ssh-signature.edge.ts';
import { mortise } from '../support/run-mortise.ts';
import { laySmallCode } from '../support/small-code.ts';
import { describeWith } from '../support/tools.ts';

function newKey(): { key: string; line: string } {
  const key = join(mkdtempSync(join(tmpdir(), 'mortise-key-')), 'id_ed25519');
  execFileSync('ssh-keygen', ['-q', '-t', 'ed25519', '-N', '', '-C', '', '-f', key]);
  const [type, body] = readFileSync(`${key}.pub`, 'utf8').split(' ');
  return { key, line: `vale@example.org ${type} ${body}` };
}

function recordFile(root: string): string {
  const folder = join(root, 'manifests/register', String(new Date().getUTCFullYear()));
  return join(folder, readdirSync(folder).find((name) => name.includes('.entry.'))!);
}

describeWith(['ssh-keygen'], 'a signature', () => {
  it('is one that OpenSSH verifies by hand, and no other text has', () => {
    const { key, line } = newKey();
    const signature = signText('sha256:aa', key);
    const folder = mkdtempSync(join(tmpdir(), 'mortise-hand-'));
    writeFileSync(join(folder, 'allowed'), `${line}\n`);
    writeFileSync(join(folder, 'sig'), signature);
    const byHand = spawnSync(
      'ssh-keygen',
      ['-Y', 'verify', '-n', 'mortise', '-f', 'allowed', '-I', 'vale@example.org', '-s', 'sig'],
      { cwd: folder, input: 'sha256:aa', encoding: 'utf8' },
    );
    expect(byHand.status).toBe(0);
    expect(checkSignature('sha256:aa', signature, join(folder, 'allowed'))).toMatchObject({
      good: true,
      signer: 'vale@example.org',
    });
    expect(checkSignature('sha256:aa', signature)).toMatchObject({ good: true, signer: null });
    expect(checkSignature('sha256:ab', signature)).toMatchObject({ good: false });
    expect(checkSignature('sha256:aa', signature.slice(0, 80))).toMatchObject({ good: false });
  });

  it('is not made with a key that is not there, or is none', () => {
    expect(() => signText('x', '/nowhere/id')).toThrow(SigningFailed);
    const none = join(mkdtempSync(join(tmpdir(), 'mortise-key-')), 'none');
    writeFileSync(none, 'not a key', { mode: 0o600 });
    expect(() => signText('x', none)).toThrow(/did not sign/);
  });

  it('of a record is told by verify: good and known, good and unknown, not over this seal', async () => {
    const root = laySmallCode();
    const { key, line } = newKey();
    const added = await mortise(root, 'register', 'add', '--title', 'Figure 4', '--person', 'R. Vale', '--sign', key);
    expect(added.status, added.err).toBe(0);
    const verified = async () => {
      const { status, out } = await mortise(root, 'register', 'verify', '--json');
      const { signed, findings } = JSON.parse(out) as { signed: number; findings: { kind: string }[] };
      return { status, signed, kinds: findings.map((one) => one.kind) };
    };
    expect(await verified()).toEqual({ status: 0, signed: 1, kinds: ['signer-unknown'] });
    writeFileSync(join(root, 'manifests/allowed-signers'), `${line}\n`);
    expect(await verified()).toEqual({ status: 0, signed: 1, kinds: [] });
    const file = recordFile(root);
    const text = readFileSync(file, 'utf8');
    // Another signature of the same key, over something else.
    const other = signText('sha256:another', key);
    const { signature } = (await import('yaml')).parse(text) as { signature: string };
    writeFileSync(file, text.replace(JSON.stringify(signature), JSON.stringify(other)));
    expect(readFileSync(file, 'utf8')).not.toBe(text);
    expect(await verified()).toEqual({ status: 1, signed: 1, kinds: ['signature-bad'] });
  });

  it('of a clearance is named by --verify, and a wrong one shuts the gate', async () => {
    const root = laySmallCode();
    const { key, line } = newKey();
    writeFileSync(join(root, 'manifests/allowed-signers'), `${line}\n`);
    execFileSync('git', ['add', '-A'], { cwd: root });
    execFileSync('git', ['-c', 'user.name=A', '-c', 'user.email=a@example.org', 'commit', '-qm', 'signers'], {
      cwd: root,
    });
    const kept = mkdtempSync(join(tmpdir(), 'mortise-clearance-'));
    const file = join(kept, 'clearance.json');
    await mortise(root, 'audit', '--clearance', file, '--sign', key);
    const { status, out } = await mortise(root, 'audit', '--verify', file);
    expect([status, out]).toEqual([0, expect.stringContaining('signed by vale@example.org (SHA256:')]);
    expect((await mortise(root, 'audit', '--gate', file)).status).toBe(0);
    const whole = JSON.parse(readFileSync(file, 'utf8')) as { signature: string };
    writeFileSync(file, JSON.stringify({ ...whole, signature: signText('sha256:another', key) }));
    expect(await mortise(root, 'audit', '--verify', file)).toMatchObject({ status: 1 });
    expect((await mortise(root, 'audit', '--gate', file)).out).toContain('its signature is not one over its seal');
  });

  it('that can not be made leaves nothing behind', async () => {
    const root = laySmallCode();
    const { status, err } = await mortise(root, 'register', 'add', '--title', 'T', '--person', 'P', '--sign', 'nokey');
    expect(status).toBe(2);
    expect(err).toContain('nothing was written');
    expect((await mortise(root, 'register', 'list', '--json')).out).not.toContain('"T"');
  });
});
