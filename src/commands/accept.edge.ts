/** Adds an acceptance to manifests/accepted.yaml, leaving everything else in the file as it is. */
import { existsSync } from 'node:fs';
import { readFile } from 'node:fs/promises';
import { join } from 'node:path';
import { parseDocument, type YAMLSeq } from 'yaml';
import type { Finding } from '../model/finding.ts';
import { writeWhole } from './files.edge.ts';

export async function appendAcceptance(
  root: string,
  folder: string,
  finding: Finding,
  reason: string,
  by: string,
): Promise<void> {
  const file = join(root, folder, 'accepted.yaml');
  const document = parseDocument(existsSync(file) ? await readFile(file, 'utf8') : 'accepted: []\n');
  const list = document.get('accepted') as YAMLSeq;
  list.flow = false;
  list.add(
    document.createNode({
      finding: finding.kind,
      ...(finding.module === undefined ? {} : { module: finding.module }),
      file: finding.place.file,
      says: finding.says,
      ...(finding.place.revision === undefined ? {} : { revision: finding.place.revision }),
      reason,
      by,
    }),
  );
  await writeWhole(root, file, document.toString({ lineWidth: 0 }));
}
