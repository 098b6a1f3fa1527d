/** Pages on what is found in the register. */
import type { RegisterKind } from '../../model/finding-kind.ts';
import type { Explanation } from './explanation.ts';

const RESTORE = 'Bring the file back from git history or from another clone; records are never mended by hand.';

export const registerExplanations = {
  'record-unreadable': {
    means: 'A record of a published result can not be read; what it says is out of reach until it is brought back.',
    arises:
      'A file was cut short, edited by hand, saved in another encoding, or left with the marks of a merge conflict.',
    mend: RESTORE,
    accept: 'Never: the result it stands for has no provenance without it.',
    example: '2026/2026-03-01-figure-4-1a2b3c4d.entry.5e6f7a8b.yaml holds "<<<<<<< HEAD".',
  },
  'record-altered': {
    means: 'A record says something else than what was sealed: its provenance can no longer be trusted.',
    arises: 'Someone edited the file, or a tool rewrote it.',
    mend: `${RESTORE} To correct a record, amend it: "mortise register amend".`,
    accept: 'Never.',
    example: 'The version of a module was changed from 2.0.3 to 2.0.4 in the file.',
  },
  'record-missing': {
    means: 'A record that others name is gone: part of the history of the register is lost here.',
    arises: 'A file was deleted or not committed, or a branch was merged only in part.',
    mend: RESTORE,
    accept: 'Never.',
    example: 'An amendment replaces sha256:5e6f7a8b…, which no file holds.',
  },
  'record-doubled': {
    means: 'One record is kept in two files. Nothing is wrong with what it says.',
    arises: 'A file was copied or renamed on one of two branches.',
    mend: 'Remove the copy whose name does not fit.',
    accept: 'There is no need: removing it costs nothing.',
    example: '2026/a.yaml and 2026/b.yaml hold the same seal.',
  },
  'record-renamed': {
    means: 'A record does not lie under the name that its content gives it.',
    arises: 'The file was renamed or moved by hand.',
    mend: 'Give the file its name back.',
    accept: 'When a file system forces other names; reading is not affected.',
    example: 'A record of 2026 lies in the folder 2025.',
  },
  'record-forked': {
    means: 'An entry was amended twice from the same state, on two branches; which one holds is not decided.',
    arises: 'Two people amended the same entry at the same time.',
    mend: 'Amend it once more, with what is right of both.',
    accept: 'When both amendments say the same.',
    example: 'Two amendments replace the first record of figure 4.',
  },
  'signature-bad': {
    means: 'A signature does not belong to what it stands beside, so nobody vouches for the record by it.',
    arises:
      'The signature was copied from another record, cut short, or altered; or this machine has no ssh-keygen to test it.',
    mend: 'Bring the record back from git. Where it never was right, amend the entry and sign the amendment.',
    accept: 'When it is known who lost the signature, and why; the seal still guards the content.',
    example: 'Signature verification failed: incorrect signature.',
  },
  'signer-unknown': {
    means: 'The signature is good, but nothing here says whose key made it.',
    arises: 'The signer is not in manifests/allowed-signers, or there is no such file.',
    mend: 'Ask the signer for the public key, and add a line "NAME KEYTYPE KEY" (the form of OpenSSH).',
    accept: 'Where signatures are only kept for later.',
    example: 'SHA256:0x1n... signed the record of figure 4.',
  },
  'digest-differs': {
    means: 'A table, input or output is not the one that the record names, so the result can not be vouched for by it.',
    arises: 'The file was overwritten, regenerated or damaged after the result was registered.',
    mend: 'Bring back the file with the recorded digest, or amend the entry when it named the wrong one.',
    accept: 'When the file is known to be kept unaltered elsewhere: amend the entry to say where.',
    example: 'profile.h5 has another SHA-256 digest than the entry.',
  },
} satisfies Record<RegisterKind, Explanation>;
