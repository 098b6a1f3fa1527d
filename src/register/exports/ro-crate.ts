/**
 * The metadata file of a research object crate: `ro-crate-metadata.json` beside the files of a result.
 *
 * @source RO-Crate Metadata Specification 1.2: descriptor, root data entity, files, software used to create files
 */
import type { StandingEntry } from '../chain.ts';
import { dayOf, resultText } from '../find.ts';
import { canonicalOrcid, readDoi } from '../identifiers.ts';

type Entity = { readonly '@id': string; readonly '@type': string | readonly string[]; readonly [key: string]: unknown };

export function roCrate(entry: StandingEntry): { '@context': string; '@graph': Entity[] } {
  const { content } = entry;
  const people = content.people.map((one, index): Entity => {
    const orcid = one.orcid === undefined ? null : canonicalOrcid(one.orcid);
    return { '@id': orcid ?? `#person-${index + 1}`, '@type': 'Person', name: one.name };
  });
  const outputs = (content.outputs ?? []).map((one) => file(one.name, one.digest));
  const inputs = (content.inputs ?? []).map((one) => file(one.name, one.digest));
  const software = content.modules.map(
    (one): Entity => ({
      '@id': `#module-${one.module}`,
      '@type': 'SoftwareApplication',
      name: one.module,
      version: one.version,
      applicationCategory: one.component,
      ...(one.contents === undefined ? {} : { identifier: Object.values(one.contents) }),
    }),
  );
  const code = content.code.map(
    (one): Entity => ({
      '@id': one.swhid ?? `#revision-${one.commit}`,
      '@type': 'SoftwareSourceCode',
      name: `revision ${one.commit.slice(0, 12)}`,
      version: one.commit,
      ...(one.repository === undefined ? {} : { codeRepository: one.repository }),
    }),
  );
  const doi = content.result.doi === undefined ? null : readDoi(content.result.doi);
  const run: Entity = {
    '@id': `#run-${entry.id}`,
    '@type': 'CreateAction',
    name: `run that made ${resultText(content.result)}`,
    instrument: [...software, ...code].map(refer),
    object: inputs.map(refer),
    result: outputs.map(refer),
    agent: people.map(refer),
    ...(content.dates?.begun === undefined ? {} : { startTime: content.dates.begun }),
    ...(content.dates?.ended === undefined ? {} : { endTime: content.dates.ended }),
  };
  const root: Entity = {
    '@id': './',
    '@type': 'Dataset',
    name: resultText(content.result),
    description: content.notes ?? `What made ${resultText(content.result)}, as registered under ${entry.id}.`,
    datePublished: dayOf(entry),
    license: 'No licence was stated with the result; ask the people named.',
    identifier: [entry.id, entry.seal, ...(doi === null ? [] : [doi.link])],
    author: people.map(refer),
    hasPart: [...outputs, ...inputs].map(refer),
    mentions: [refer(run)],
  };
  const descriptor: Entity = {
    '@id': 'ro-crate-metadata.json',
    '@type': 'CreativeWork',
    conformsTo: { '@id': 'https://w3id.org/ro/crate/1.2' },
    about: { '@id': './' },
  };
  return {
    '@context': 'https://w3id.org/ro/crate/1.2/context',
    '@graph': distinct([descriptor, root, run, ...people, ...software, ...code, ...outputs, ...inputs]),
  };
}

function file(name: string, digest: string): Entity {
  return {
    '@id': name.split('/').map(encodeURIComponent).join('/'),
    '@type': 'File',
    name,
    sha256: digest.replace(/^sha256:/, ''),
  };
}

function refer(entity: Entity): { '@id': string } {
  return { '@id': entity['@id'] };
}

/** No two entities have the same id: the first stays. */
function distinct(entities: readonly Entity[]): Entity[] {
  return [...new Map([...entities].reverse().map((one) => [one['@id'], one])).values()].reverse();
}
