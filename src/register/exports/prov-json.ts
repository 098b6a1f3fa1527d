/**
 * An entry as provenance: outputs that a run generated from code, modules and inputs, by people.
 *
 * @source The PROV-JSON Serialization, W3C Member Submission 24 April 2013; W3C PROV-DM (2013-04-30)
 */
import type { StandingEntry } from '../chain.ts';
import { resultText } from '../find.ts';
import { canonicalOrcid } from '../identifiers.ts';

type Attributes = Readonly<Record<string, unknown>>;

export interface ProvDocument {
  readonly prefix: Readonly<Record<string, string>>;
  readonly entity: Readonly<Record<string, Attributes>>;
  readonly activity: Readonly<Record<string, Attributes>>;
  readonly agent: Readonly<Record<string, Attributes>>;
  readonly used: Readonly<Record<string, Attributes>>;
  readonly wasGeneratedBy: Readonly<Record<string, Attributes>>;
  readonly wasDerivedFrom: Readonly<Record<string, Attributes>>;
  readonly wasAssociatedWith: Readonly<Record<string, Attributes>>;
  readonly wasAttributedTo: Readonly<Record<string, Attributes>>;
}

export function provJson(entry: StandingEntry): ProvDocument {
  const { content } = entry;
  const run = 'run:made';
  const result = 'result:published';
  const modules = content.modules.map(
    (one) =>
      [
        `module:${one.module}`,
        { 'prov:label': `${one.module} ${one.version}`, 'prov:type': 'module', 'result:version': one.version },
      ] as const,
  );
  const code = content.code.map(
    (one, index) => [`code:${index + 1}`, { 'prov:label': one.swhid ?? one.commit, 'prov:type': 'revision' }] as const,
  );
  const inputs = (content.inputs ?? []).map(
    (one, index) => [`input:${index + 1}`, { 'prov:label': one.name, 'result:digest': one.digest }] as const,
  );
  const outputs = (content.outputs ?? []).map(
    (one, index) => [`output:${index + 1}`, { 'prov:label': one.name, 'result:digest': one.digest }] as const,
  );
  const agents = content.people.map((one, index) => {
    const orcid = one.orcid === undefined ? null : canonicalOrcid(one.orcid);
    return [
      `person:${index + 1}`,
      { 'prov:label': one.name, 'prov:type': 'prov:Person', ...(orcid === null ? {} : { 'result:orcid': orcid }) },
    ] as const;
  });
  const taken = [...code, ...modules, ...inputs];
  const { begun, ended } = content.dates ?? {};
  return {
    prefix: {
      run: 'urn:mortise:run:',
      result: 'urn:mortise:result:',
      module: 'urn:mortise:module:',
      code: 'urn:mortise:code:',
      input: 'urn:mortise:input:',
      output: 'urn:mortise:output:',
      person: 'urn:mortise:person:',
    },
    entity: Object.fromEntries([
      [result, { 'prov:label': resultText(content.result), 'result:entry': entry.id, 'result:seal': entry.seal }],
      ...taken,
      ...outputs,
    ]),
    activity: {
      [run]: {
        'prov:label': `run registered as ${entry.id}`,
        ...(begun === undefined ? {} : { 'prov:startTime': begun }),
        ...(ended === undefined ? {} : { 'prov:endTime': ended }),
      },
    },
    agent: Object.fromEntries(agents),
    used: numbered('used', taken, ([id]) => ({ 'prov:activity': run, 'prov:entity': id })),
    wasGeneratedBy: numbered('made', [...outputs.map(([id]) => id), result], (id) => ({
      'prov:entity': id,
      'prov:activity': run,
    })),
    wasDerivedFrom: numbered('from', outputs, ([id]) => ({ 'prov:generatedEntity': result, 'prov:usedEntity': id })),
    wasAssociatedWith: numbered('with', agents, ([id]) => ({ 'prov:activity': run, 'prov:agent': id })),
    wasAttributedTo: numbered('to', agents, ([id]) => ({ 'prov:entity': result, 'prov:agent': id })),
  };
}

function numbered<T>(name: string, all: readonly T[], relation: (one: T) => Attributes): Record<string, Attributes> {
  return Object.fromEntries(all.map((one, index) => [`_:${name}${index + 1}`, relation(one)]));
}
