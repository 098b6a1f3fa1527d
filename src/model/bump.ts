/** Version bumps and the policy that says which change asks for which. History, review and audit use it. */

export const BUMPS = ['none', 'patch', 'minor', 'major'] as const;
export type Bump = (typeof BUMPS)[number];

/** The greater of two bumps. */
export function greaterBump(a: Bump, b: Bump): Bump {
  return BUMPS.indexOf(a) >= BUMPS.indexOf(b) ? a : b;
}

export function coversBump(declared: Bump, asked: Bump): boolean {
  return BUMPS.indexOf(declared) >= BUMPS.indexOf(asked);
}

/** Everything that can change about a module between two revisions; the policy gives each the least bump it asks for. */
export const CHANGE_KINDS = {
  'procedure-removed': 'major',
  'procedure-added': 'minor',
  'argument-removed': 'major',
  'argument-added': 'major',
  'optional-argument-added': 'minor',
  'argument-reordered': 'major',
  'argument-renamed': 'major',
  'argument-type': 'major',
  'argument-bytes': 'major',
  'argument-rank': 'major',
  'argument-intent': 'major',
  'argument-optional': 'major',
  'argument-default': 'minor',
  'result-type': 'major',
  'return-order': 'major',
  'common-layout': 'major',
  'type-layout': 'major',
  'unit-changed': 'major',
  'convention-changed': 'major',
  'claim-changed': 'major',
  'domain-narrowed': 'major',
  'domain-widened': 'minor',
  'contract-changed': 'major',
  'constant-value': 'minor',
  'literal-value': 'minor',
  'literal-kind': 'minor',
  'expression-sign': 'minor',
  'expression-factor': 'minor',
  'expression-order': 'minor',
  'expression-changed': 'minor',
  'table-content': 'minor',
  'table-edges-narrowed': 'major',
  'table-edges-widened': 'minor',
  'reference-renewed': 'minor',
  'tolerance-widened': 'minor',
  'result-beyond-tolerance': 'major',
  'result-within-tolerance': 'minor',
  implementation: 'patch',
} as const satisfies Record<string, Bump>;

export type ChangeKind = keyof typeof CHANGE_KINDS;

/** The least bump of each kind of change; an assembly may change entries. */
export type BumpPolicy = Readonly<Record<ChangeKind, Bump>>;

export const DEFAULT_POLICY: BumpPolicy = CHANGE_KINDS;
