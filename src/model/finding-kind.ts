/**
 * The closed union of finding kinds, a list a stage.
 * Every kind has a page under src/report/explanations/, checked by the compiler; add the page with the kind.
 */
export type FindingKind =
  | UnitKind
  | ManifestKind
  | ReaderKind
  | ConstantKind
  | FitKind
  | DriftKind
  | ComparisonKind
  | RunKind
  | RegisterKind
  | AuditKind
  | ReviewKind;

export type UnitKind = 'unit-unknown' | 'unit-ambiguous';
export type ManifestKind =
  | 'manifest-unreadable'
  | 'manifest-syntax'
  | 'manifest-unknown-key'
  | 'manifest-invalid'
  | 'manifest-absent'
  | 'manifest-duplicate'
  | 'manifest-unknown-name'
  | 'manifest-inconsistent'
  | 'manifest-outside';
export type ReaderKind =
  | 'source-incomplete'
  | 'call-count'
  | 'call-keyword'
  | 'call-kind'
  | 'call-type'
  | 'call-rank'
  | 'call-order'
  | 'call-constant-out'
  | 'call-claim'
  | 'result-order'
  | 'common-differs'
  | 'common-scratch'
  | 'prototype-differs';
export type ConstantKind =
  | 'constant-disagrees'
  | 'constant-edition-mixed'
  | 'constant-unlike-any-edition'
  | 'constant-truncated'
  | 'literal-single'
  | 'integer-division';
export type FitKind =
  | 'joint-unmet'
  | 'joint-ambiguous'
  | 'joint-version'
  | 'joint-quantity'
  | 'joint-unit'
  | 'joint-dimension'
  | 'joint-convention'
  | 'joint-domain'
  | 'joint-order'
  | 'joint-shape'
  | 'joint-call'
  | 'source-missing'
  | 'procedure-missing'
  | 'argument-missing'
  | 'argument-unmapped'
  | 'argument-type'
  | 'argument-intent'
  | 'table-range'
  | 'claim-contradicts';
export type DriftKind =
  | 'drift-undeclared'
  | 'drift-unversioned'
  | 'reference-renewed'
  | 'tolerance-widened'
  | 'copy-behind';
export type ComparisonKind = never;
export type RunKind = 'reference-altered' | 'tree-incomplete';
export type RegisterKind =
  | 'record-unreadable'
  | 'record-altered'
  | 'record-missing'
  | 'record-doubled'
  | 'record-renamed'
  | 'record-forked'
  | 'signature-bad'
  | 'signer-unknown'
  | 'digest-differs';
export type AuditKind =
  | 'acceptance-expired'
  | 'acceptance-unused'
  | 'table-left'
  | 'domain-left'
  | 'table-altered'
  | 'table-missing'
  | 'tree-dirty'
  | 'not-pinned'
  | 'changed-since-validated'
  | 'never-validated'
  | 'platform-differs'
  | 'campaign-over-allocation'
  | 'campaign-cost-unknown'
  | 'notice-touches'
  | 'case-not-runnable'
  | 'case-failed'
  | 'case-not-run'
  | 'result-beyond-tolerance'
  | 'result-not-comparable';
export type ReviewKind = 'commands-differ' | 'link-leaves' | 'submodule-moved' | 'text-hides';
