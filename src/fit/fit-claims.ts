/** What comments, docstrings and attributes say of a quantity, against what the manifest declares. */
import { contractReference } from '../manifests/contract-reference.ts';
import type { Finding } from '../model/finding.ts';
import type { Claim } from '../model/interface.ts';
import type { Contract, ManifestSet, Offer } from '../model/manifest.ts';
import { numberText } from './domains.ts';
import { findingAt, firstThere } from './finding-at.ts';
import type { Carrier } from './joint.ts';
import { type LinkedModule, lastPart, sameName } from './linked-module.ts';
import { relateUnits } from './unit-relation.ts';

export function checkClaims(module: LinkedModule, set: ManifestSet): Finding[] {
  return (module.declaration.value.offers ?? []).flatMap((offer, at) => {
    const contract = set.contracts.get(contractReference(offer.contract).name)?.value;
    if (contract === undefined) return [];
    return Object.entries(offer.arguments ?? {}).flatMap(([quantity, name]) => {
      const carrier = module.carrier(offer, name);
      if (carrier === null || contract.quantities[quantity] === undefined) return [];
      return claimsOn(module, carrier).flatMap(({ file, claim }) =>
        contradiction(module, offer, at, contract, quantity, file, claim),
      );
    });
  });
}

/** Claims about the thing itself: of its name, and, where it belongs to a procedure or type, of that one's. */
function claimsOn(module: LinkedModule, carrier: Carrier): { file: string; claim: Claim }[] {
  const bare = lastPart(carrier.name.split('/').at(-1) ?? carrier.name);
  const owned = carrier.how === 'argument' || carrier.how === 'result' || carrier.how === 'field';
  return module.files
    .filter(([file]) => !owned || carrier.place === null || carrier.place.file === file)
    .flatMap(([file, read]) =>
      read.claims
        .filter(
          (claim) =>
            sameName(lastPart(claim.name), bare, read.language) &&
            (!owned || sameName(lastPart(claim.parent ?? ''), carrier.owner ?? '', read.language)),
        )
        .map((claim) => ({ file, claim })),
    );
}

function contradiction(
  module: LinkedModule,
  offer: Offer,
  at: number,
  contract: Contract,
  quantity: string,
  file: string,
  claim: Claim,
): Finding[] {
  const evidence = [{ says: `${claim.from}: ${claim.text}`, place: module.place(file, claim) }];
  const { declaration } = module;
  if (claim.what === 'unit') {
    const declared = offer.units?.[quantity] ?? contract.quantities[quantity]!.unit;
    const relation = relateUnits(claim.value, declared);
    if (relation.is !== 'scale' && relation.is !== 'dimension') return [];
    const how =
      relation.is === 'scale'
        ? `a factor of ${numberText(relation.factor)}${relation.offset === 0 ? '' : ' and an offset'} apart`
        : 'not even of one dimension';
    return [
      findingAt(
        declaration,
        firstThere(declaration, ['offers', at, 'units', quantity], ['offers', at, 'arguments', quantity]),
        {
          kind: 'claim-contradicts',
          gravity: 'caution',
          module: module.name,
          says: `The code says that ${claim.name} is in ${claim.value}; the manifest says that ${quantity} is in ${declared}, ${how}.`,
          evidence,
          next: `find out which is right; correct the ${claim.from} or the unit in the manifest.`,
        },
      ),
    ];
  }
  const open = contract.quantities[quantity]!.conventions?.[claim.what];
  const said = claim.value.toLowerCase().replace(/[\s_]+/g, '-');
  const declared = offer.conventions?.[claim.what] ?? open?.[0];
  if (open === undefined || declared === undefined || said === declared || !open.includes(said)) return [];
  return [
    findingAt(
      declaration,
      firstThere(declaration, ['offers', at, 'conventions', claim.what], ['offers', at, 'arguments', quantity]),
      {
        kind: 'claim-contradicts',
        gravity: 'caution',
        module: module.name,
        says: `The code says that ${claim.name} has ${claim.what} ${claim.value}; the manifest says ${declared}.`,
        evidence,
        next: `find out which is right; correct the ${claim.from} or the convention in the manifest.`,
      },
    ),
  ];
}
