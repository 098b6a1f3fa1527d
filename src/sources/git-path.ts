/** Paths as git holds them (any bytes but NUL) and as Mortise spells them: UTF-8 where they are, `\xHH` for each byte that is not. */
const strict = new TextDecoder('utf-8', { fatal: true, ignoreBOM: true });

/** Two paths never get the same spelling unless one holds a literal `\xHH`, which is then itself spelled `\x5cxHH`. */
export function pathFromBytes(bytes: Uint8Array): string {
  try {
    const text = strict.decode(bytes);
    return text.includes('\\x') ? text.replaceAll('\\x', '\\x5cx') : text;
  } catch {
    return spellBroken(bytes);
  }
}

/** The bytes that {@link pathFromBytes} spelled. */
export function bytesFromPath(path: string): Buffer {
  if (!path.includes('\\x')) return Buffer.from(path, 'utf8');
  const parts: Buffer[] = [];
  let from = 0;
  for (const match of path.matchAll(/\\x([0-9a-f]{2})/g)) {
    parts.push(Buffer.from(path.slice(from, match.index), 'utf8'), Buffer.from(match[1]!, 'hex'));
    from = match.index + match[0].length;
  }
  parts.push(Buffer.from(path.slice(from), 'utf8'));
  return Buffer.concat(parts);
}

/** True for a path that stays below the root: relative, and no part of it is empty, `.`, `..` or git's own folder. */
export function staysInside(path: string): boolean {
  return (
    path !== '' && path.split('/').every((part) => part !== '' && part !== '.' && part !== '..' && !isGitFolder(part))
  );
}

/** `.git` in any case: file systems that fold case would open the repository's own files through `.GIT`. */
function isGitFolder(part: string): boolean {
  return part.toLowerCase() === '.git';
}

/** Byte by byte: the longest valid UTF-8 sequences stand, every other byte is spelled out. */
function spellBroken(bytes: Uint8Array): string {
  let text = '';
  for (let at = 0; at < bytes.length; ) {
    const length = sequenceLength(bytes, at);
    if (length === 0) {
      text += `\\x${bytes[at]!.toString(16).padStart(2, '0')}`;
      at += 1;
      continue;
    }
    const piece = strict.decode(bytes.subarray(at, at + length));
    text += piece === '\\' && bytes[at + 1] === 0x78 ? '\\x5c' : piece;
    at += length;
  }
  return text;
}

function sequenceLength(bytes: Uint8Array, at: number): number {
  const lead = bytes[at]!;
  const length = lead < 0x80 ? 1 : lead < 0xc2 ? 0 : lead < 0xe0 ? 2 : lead < 0xf0 ? 3 : lead < 0xf5 ? 4 : 0;
  if (length === 0 || at + length > bytes.length) return 0;
  try {
    strict.decode(bytes.subarray(at, at + length));
    return length;
  } catch {
    return 0;
  }
}
