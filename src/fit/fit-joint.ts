/** One expectation and the offer that meets it come in; the joint, row by row, and what is wrong with it go out. */
import { contractReference, takesVersion } from '../manifests/contract-reference.ts';
import type { Evidence, Finding, Gravity } from '../model/finding.ts';
import type { FitKind } from '../model/finding-kind.ts';
import type { Contract, ContractQuantity, Declaration, Expectation, Offer, Range } from '../model/manifest.ts';
import type { Place } from '../model/place.ts';
import { aliases, fold, observedOrder, sameOrder } from './argument-order.ts';
import { conventionFactor } from './convention-factor.ts';
import { convertRange, numberText, outside, rangeText } from './domains.ts';
import { findingAt, firstThere, type Path, seenIn } from './finding-at.ts';
import { checkCalls } from './fit-calls.ts';
import type { Adapter, AdapterStep, Carrier, Half, Joint, JointRow, JointState } from './joint.ts';
import { worseState } from './joint.ts';
import type { FoundProcedure, LinkedModule } from './linked-module.ts';
import { ordinal } from './ordinal.ts';
import { relateUnits } from './unit-relation.ts';

export interface JointInput {
  readonly contract: Declaration<Contract>;
  readonly expecting: LinkedModule;
  /** Which of its expectations. */
  readonly expects: number;
  readonly offering: LinkedModule;
  readonly offers: number;
}

export function fitJoint(input: JointInput): { readonly joint: Joint; readonly findings: readonly Finding[] } {
  const fit = new JointFit(input);
  return { joint: fit.joint(), findings: fit.findings };
}

/** What a row needs besides handing over: all of it may be nothing. */
interface RowFit {
  readonly row: JointRow;
  readonly factor: number;
  readonly offset: number;
  readonly why: readonly string[];
}

class JointFit {
  readonly findings: Finding[] = [];
  private readonly input: JointInput;
  private readonly contract: Contract;
  private readonly expectation: Expectation;
  private readonly offer: Offer;
  private readonly expectPath: Path;
  private readonly offerPath: Path;
  private readonly procedure: FoundProcedure | null;
  private readonly differs: string[] = [];
  private state: JointState = 'fits';
  /** The call whose order was told, so that it is not told again. */
  private tellsOrderAt: Place | null = null;

  constructor(input: JointInput) {
    this.input = input;
    this.contract = input.contract.value;
    this.expectation = input.expecting.declaration.value.expects![input.expects]!;
    this.offer = input.offering.declaration.value.offers![input.offers]!;
    this.expectPath = ['expects', input.expects];
    this.offerPath = ['offers', input.offers];
    this.procedure = this.offer.procedure === undefined ? null : input.offering.procedure(this.offer.procedure);
  }

  joint(): Joint {
    const { expecting, offering } = this.input;
    this.versions();
    const fits = this.quantities().map(([name, quantity]) => this.row(name, quantity));
    const order = this.order(fits.map((fit) => fit.row));
    const rows = fits.map(({ row }) => (order.moved.has(row.quantity) ? movedRow(row, order) : row));
    const calls = checkCalls({
      expecting,
      offering,
      expectation: this.expectation,
      expectPath: this.expectPath,
      offer: this.offer,
      procedure: this.procedure,
      toldAt: this.tellsOrderAt,
    });
    this.findings.push(...calls.findings);
    this.differs.push(...calls.differs);
    if (calls.differs.length > 0) this.state = 'does not fit';
    const state = rows.reduce((worst, row) => worseState(worst, row.state), this.state);
    return {
      contract: this.contract.contract,
      contractVersion: this.contract.version,
      expecting: side(expecting, this.expectPath),
      offering: side(offering, this.offerPath),
      procedure: this.offer.procedure ?? null,
      state,
      rows,
      differs: this.differs,
      adapter: state === 'fits through an adapter' ? this.adapter(fits, order) : null,
      adapted: this.expectation.adapter !== undefined,
    };
  }

  /** The range of versions of each side against the contract that is there. */
  private versions(): void {
    const { version, contract } = this.contract;
    for (const [who, path, text, verb] of [
      [this.input.expecting, this.expectPath, this.expectation.contract, 'expects'],
      [this.input.offering, this.offerPath, this.offer.contract, 'offers'],
    ] as const) {
      const reference = contractReference(text);
      if (takesVersion(reference, version)) continue;
      this.state = 'does not fit';
      this.differs.push(`${who.name} ${verb} ${contract} ${reference.range}; the contract is ${version}`);
      this.add(who.declaration, [...path, 'contract'], {
        kind: 'joint-version',
        gravity: 'stop',
        module: who.name,
        says: `${who.name} ${verb} ${contract} ${reference.range}, and the contract is at version ${version}.`,
        evidence: [seenIn(this.input.contract, ['version'], `the contract ${contract}`)],
        next: `read what changed in the contract up to ${version}, bring ${who.name} up to it, and write "${contract} ^${version}".`,
      });
    }
  }

  /** The quantities that cross this joint, in the contract's order. */
  private quantities(): [string, ContractQuantity][] {
    const { takes } = this.expectation;
    return Object.entries(this.contract.quantities).filter(([name, quantity]) => {
      if (takes !== undefined) return takes.includes(name);
      return quantity.optional !== true || this.offer.arguments?.[name] !== undefined;
    });
  }

  private row(name: string, quantity: ContractQuantity): RowFit {
    const { offering, expecting } = this.input;
    const differs: string[] = [];
    const why: string[] = [];
    let state: JointState = 'fits';
    const carrier = this.carrier(name);
    const [expectingHalf, offeringHalf] = this.halves(name, quantity, carrier);

    if (carrier === 'none') {
      state = 'does not fit';
      differs.push(`${offering.name} does not give it`);
      this.add(
        offering.declaration,
        firstThere(offering.declaration, [...this.offerPath, 'arguments'], this.offerPath),
        {
          kind: 'joint-quantity',
          gravity: 'stop',
          module: offering.name,
          says: `${offering.name} offers ${this.contract.contract} without ${name}, which ${expecting.name} needs.`,
          evidence: [seenIn(expecting.declaration, [...this.expectPath, 'contract'], `${expecting.name} expects it`)],
          next: `add "${name}:" under "arguments" with what carries it, or say with "takes" that ${expecting.name} does without it.`,
        },
      );
    }

    let factor = 1;
    let offset = 0;
    const relation = relateUnits(expectingHalf.unit, offeringHalf.unit);
    if (relation.is === 'scale') {
      ({ factor, offset } = relation);
      state = worseState(state, 'fits through an adapter');
      const words = `${expectingHalf.unit} against ${offeringHalf.unit}: ${formulaText(offeringHalf.unit, expectingHalf.unit, factor, offset)}`;
      differs.push(words);
      why.push(`${expectingHalf.unit} to ${offeringHalf.unit}`);
      this.differing(name, 'units', 'joint-unit', this.unlessAdapted(), {
        says: `${name} crosses from ${this.expectedBy(expectingHalf.unit)} to ${this.offeredBy(offeringHalf.unit)}; ${formulaText(offeringHalf.unit, expectingHalf.unit, factor, offset)}.`,
        next: this.adapterNext(
          `multiply by ${numberText(factor)}${offset === 0 ? '' : ` and add ${numberText(offset)}`} on the way in and undo it on the way out`,
        ),
      });
    } else if (relation.is === 'dimension') {
      state = 'does not fit';
      differs.push(`${expectingHalf.unit} is ${relation.from}, ${offeringHalf.unit} is ${relation.to}`);
      this.differing(name, 'units', 'joint-dimension', 'stop', {
        says: `${name} is ${this.expectedBy(expectingHalf.unit)} (${relation.from}) and ${this.offeredBy(offeringHalf.unit)} (${relation.to}); no factor turns one into the other.`,
        next: `correct the unit on the side that is wrong, or write a version of the contract that says which of the two it is${
          relation.equivalences.length === 0
            ? ''
            : ` (physics relates them: ${relation.equivalences.slice(0, 3).join(', ')})`
        }.`,
      });
    }

    const departs = relateUnits(offeringHalf.unit, quantity.unit);
    if (departs.is === 'dimension' && relation.is !== 'dimension') {
      // Both sides agree with one another and not with the contract, which then says something untrue.
      this.differing(name, 'units', 'joint-dimension', 'caution', {
        says: `${name} crosses as ${offeringHalf.unit} (${departs.from}); the contract says ${quantity.unit} (${departs.to}).`,
        next: 'write a version of the contract with the quantity that really crosses.',
      });
    }

    for (const [convention, [wants, has]] of Object.entries(
      pairs(expectingHalf.conventions, offeringHalf.conventions),
    )) {
      if (wants === has) continue;
      const stated = this.expectation.conventions?.[convention] !== undefined;
      const open = quantity.conventions?.[convention] ?? [];
      const mend = stated ? conventionFactor(convention, open, wants, has) : null;
      const words = `${convention}: ${wants} against ${has}`;
      differs.push(stated ? words : `${words} (${expecting.name} does not say which it relies on)`);
      if (mend !== null) {
        factor *= mend;
        offset *= mend;
        why.push(`${convention} from ${wants} to ${has}`);
        state = worseState(state, 'fits through an adapter');
      } else if (stated) {
        state = 'does not fit';
      }
      this.differing(
        name,
        'conventions',
        'joint-convention',
        mend !== null ? this.unlessAdapted() : stated ? 'stop' : 'caution',
        {
          key: convention,
          says: stated
            ? `${name} crosses with ${convention} ${wants} at ${expecting.name} and ${has} at ${offering.name}.`
            : `${offering.name} gives ${name} with ${convention} ${has}; the contract's default is ${wants}, and ${expecting.name} does not say which it relies on.`,
          next:
            mend !== null
              ? this.adapterNext(`multiply by ${numberText(mend)}`)
              : stated
                ? `plug in a module with ${convention} ${wants}, or change ${expecting.name} to ${has} and give it a new version.`
                : `write "${convention}: ${has}" under "conventions" of this expectation if ${expecting.name} is written for that.`,
        },
      );
    }

    if (this.domainDiffers(name, quantity, expectingHalf, offeringHalf, factor, offset, differs))
      state = 'does not fit';
    const carried = this.carriedWrongly(name, quantity, carrier, offeringHalf);
    differs.push(...carried.differs);
    if (carried.stops) state = 'does not fit';
    return {
      row: { quantity: name, state, differs, expecting: expectingHalf, offering: offeringHalf },
      factor,
      offset,
      why,
    };
  }

  /** What carries the quantity on the offering side: null when the code was not read, 'none' when nothing is said to. */
  private carrier(name: string): Carrier | null | 'none' {
    const named = this.offer.arguments?.[name];
    const { offering } = this.input;
    if (named !== undefined) return offering.carrier(this.offer, named);
    if (this.offer.arguments !== undefined) return 'none';
    for (const alias of aliases(name, name)) {
      const found = offering.carrier(this.offer, alias);
      if (found !== null) return found;
    }
    return null;
  }

  private halves(name: string, quantity: ContractQuantity, carrier: Carrier | null | 'none'): [Half, Half] {
    const shape = quantity.shape === undefined || quantity.shape === 'scalar' ? 'scalar' : quantity.shape.join(', ');
    const half = (side: Expectation | Offer, own: Carrier | null): Half => ({
      unit: side.units?.[name] ?? quantity.unit,
      shape,
      intent: quantity.intent,
      domain: side.domain?.[name] ?? null,
      conventions: Object.fromEntries(
        Object.entries(quantity.conventions ?? {}).map(([convention, open]) => [
          convention,
          side.conventions?.[convention] !== undefined && open.includes(side.conventions[convention])
            ? side.conventions[convention]
            : open[0]!,
        ]),
      ),
      carrier: own,
    });
    return [half(this.expectation, null), half(this.offer, carrier === 'none' ? null : carrier)];
  }

  /** The reachable states of the asking side inside the valid ones of the answering side; for what comes out, the other way round. */
  private domainDiffers(
    name: string,
    quantity: ContractQuantity,
    expecting: Half,
    offering: Half,
    factor: number,
    offset: number,
    differs: string[],
  ): boolean {
    const reach = expecting.domain === null ? null : convertRange(expecting.domain, factor, offset);
    const relation = relateUnits(quantity.unit, offering.unit);
    const valid: Range | null =
      offering.domain ??
      (quantity.domain === undefined || relation.is === 'dimension' || relation.is === 'unknown'
        ? null
        : relation.is === 'scale'
          ? convertRange(quantity.domain, relation.factor, relation.offset)
          : quantity.domain);
    if (reach === null || valid === null || relation.is === 'unknown') return false;
    const comesOut = quantity.intent === 'out';
    if (comesOut && offering.domain === null) return false;
    const [inner, outer] = comesOut ? [valid, reach] : [reach, valid];
    const { below, above } = outside(inner, outer);
    if (!below && !above) return false;
    const { expecting: asks, offering: answers } = this.input;
    const edges = [
      ...(below ? [`below ${numberText(outer[0]!)}`] : []),
      ...(above ? [`above ${numberText(outer[1]!)}`] : []),
    ].join(' and ');
    const unit = offering.unit === '1' ? '' : ` ${offering.unit}`;
    differs.push(
      comesOut
        ? `gives ${rangeText(inner, offering.unit)}, taken ${rangeText(outer, offering.unit)}`
        : `reaches ${rangeText(inner, offering.unit)}, valid ${rangeText(outer, offering.unit)}`,
    );
    const fromContract = offering.domain === null;
    this.add(asks.declaration, [...this.expectPath, 'domain', name], {
      kind: 'joint-domain',
      gravity: 'stop',
      module: asks.name,
      says: comesOut
        ? `${answers.name} can give ${name} ${edges}${unit}, which ${asks.name} does not take.`
        : `${asks.name} can reach ${name} ${edges}${unit}, where ${answers.name} is not valid.`,
      evidence: [
        fromContract
          ? seenIn(
              this.input.contract,
              ['quantities', name, 'domain'],
              `the contract holds for ${rangeText(valid, offering.unit)}`,
            )
          : seenIn(
              answers.declaration,
              [...this.offerPath, 'domain', name],
              `${answers.name} is valid for ${rangeText(valid, offering.unit)}`,
            ),
        ...(factor === 1 && offset === 0
          ? []
          : [{ says: `in the unit of ${answers.name} ${asks.name} reaches ${rangeText(reach, offering.unit)}` }]),
      ],
      next: `plug in a module that is valid there, keep ${asks.name} inside with a limit of its own, or correct the range that is wrong.`,
    });
    return true;
  }

  /** Type, rank and intent of what carries a quantity, as the source declares it. */
  private carriedWrongly(
    name: string,
    quantity: ContractQuantity,
    carrier: Carrier | null | 'none',
    half: Half,
  ): { stops: boolean; differs: string[] } {
    const differs: string[] = [];
    let stops = false;
    if (carrier === null || carrier === 'none') return { stops, differs };
    const { offering } = this.input;
    const path = firstThere(
      offering.declaration,
      [...this.offerPath, 'arguments', name],
      [...this.offerPath, 'procedure'],
      this.offerPath,
    );
    const evidence: Evidence[] = carrier.place === null ? [] : [{ says: carrierText(carrier), place: carrier.place }];
    const say = (kind: FitKind, gravity: Gravity, short: string, says: string, next: string) => {
      differs.push(short);
      if (gravity === 'stop') stops = true;
      this.add(offering.declaration, path, { kind, gravity, module: offering.name, says, next, evidence });
    };
    const type = carrier.type.toLowerCase();
    if (NEVER_A_QUANTITY.test(type) || (WHOLE.test(type) && half.unit !== '1')) {
      say(
        'argument-type',
        'stop',
        `${carrier.name} is ${carrier.type}`,
        `${name} is carried by ${carrier.name}, which is ${carrier.type} and cannot hold it.`,
        `name the ${carrier.how} that carries ${name}, or correct its declaration.`,
      );
    }
    const wantsRank = half.shape === 'scalar' ? 0 : half.shape.split(', ').length;
    const elemental = this.procedure?.procedure.attributes.some((one) => one.toLowerCase() === 'elemental') === true;
    if (rankKnown(carrier, offering.language) && carrier.rank !== wantsRank && !(elemental && carrier.rank === 0)) {
      // Arrays of any rank may be passed to one another by sequence association; a scalar and an array may not.
      const grave = carrier.rank === 0 || wantsRank === 0;
      say(
        'joint-shape',
        grave ? 'stop' : 'caution',
        `${carrier.name} has rank ${carrier.rank}, the contract ${wantsRank}`,
        `${name} is ${half.shape === 'scalar' ? 'a scalar' : `of shape [${half.shape}]`} in the contract; ${carrier.name} has rank ${carrier.rank}.`,
        `give ${carrier.name} rank ${wantsRank}, or write a version of the contract with the shape that the code has.`,
      );
    }
    const wrongIntent =
      (quantity.intent === 'in' && (carrier.intent === 'out' || carrier.intent === 'inout')) ||
      (quantity.intent !== 'in' && carrier.intent === 'in');
    if (carrier.how === 'argument' && wrongIntent) {
      const grave = carrier.intent !== 'inout';
      say(
        'argument-intent',
        grave ? 'stop' : 'caution',
        `${carrier.name} is intent(${carrier.intent}), the contract ${quantity.intent}`,
        grave
          ? `${name} is ${quantity.intent} in the contract, and the source declares ${carrier.name} as ${carrier.intent}.`
          : `${name} goes in only, and the source lets ${carrier.name} be changed (inout).`,
        `declare ${carrier.name} as ${quantity.intent}, or correct the contract.`,
      );
    }
    return { stops, differs };
  }

  /** The order in which the expecting side passes its arguments, against the procedure's. */
  private order(rows: readonly JointRow[]): Order {
    const positioned = rows
      .flatMap((row) => {
        const position = row.offering.carrier?.how === 'argument' ? row.offering.carrier.position : null;
        return position === null ? [] : [{ quantity: row.quantity, position }];
      })
      .sort((a, b) => a.position - b.position)
      .map((one) => one.quantity);
    const observed = this.observed(rows, positioned);
    const declared = this.expectation.order;
    const { expecting, offering } = this.input;
    if (declared !== undefined && observed !== null && !sameOrder(declared, observed.order)) {
      this.add(expecting.declaration, [...this.expectPath, 'order'], {
        kind: 'joint-order',
        gravity: 'caution',
        module: expecting.name,
        says: `The call passes ${observed.order.join(', ')}; the manifest says ${declared.filter((one) => observed.order.includes(one)).join(', ')}.`,
        evidence: [{ says: 'the call', place: observed.place }],
        next: 'write the order of the call, or mend the call.',
      });
    }
    const callsIt = this.procedure !== null && expecting.calls(this.calledName()).length > 0;
    const expected =
      (observed?.order.length === positioned.length ? observed.order : declared) ??
      // A call whose names say nothing was written against the procedure itself; only without one does the contract's order stand for it.
      (callsIt ? positioned : Object.keys(this.contract.quantities));
    const passed = expected.filter((one) => positioned.includes(one));
    if (sameOrder(passed, positioned)) return { passed, moved: new Set(), offered: positioned };
    const moved = new Set(passed.filter((one, index) => positioned[index] !== one));
    this.state = worseState(this.state, 'fits through an adapter');
    const path = firstThere(expecting.declaration, [...this.expectPath, 'order'], [...this.expectPath, 'contract']);
    const byManifest = findingAt(expecting.declaration, path, {
      kind: 'joint-order',
      gravity: this.unlessAdapted(),
      module: expecting.name,
      says: `${expecting.name} passes ${passed.join(', ')}; ${this.offer.procedure} of ${offering.name} takes ${positioned.join(', ')}.`,
      evidence:
        this.procedure === null
          ? []
          : [
              {
                says: `${this.procedure.procedure.name}(${this.procedure.procedure.args.map((one) => one.name).join(', ')})`,
                place: offering.place(this.procedure.file, this.procedure.procedure),
              },
            ],
      next: this.adapterNext(`pass them as ${positioned.join(', ')}`),
    });
    const seen = observed !== null && passed.every((one, index) => one === observed.order[index]) ? observed : null;
    this.findings.push(
      seen === null
        ? byManifest
        : {
            ...byManifest,
            place: seen.place,
            evidence: [...byManifest.evidence.slice(1), seenIn(expecting.declaration, path, 'the expectation')],
          },
    );
    this.tellsOrderAt = seen?.place ?? null;
    return { passed, moved, offered: positioned };
  }

  /** The order of the first call that passes the arguments in another order than the procedure takes them, else of the first one that shows an order. */
  private observed(rows: readonly JointRow[], positioned: readonly string[]): Observed | null {
    const { expecting } = this.input;
    let first: Observed | null = null;
    const byName = new Map<string, string>();
    for (const row of rows) {
      const argument = row.offering.carrier?.name ?? row.quantity;
      for (const alias of aliases(row.quantity, argument)) byName.set(fold(alias, expecting.language), row.quantity);
    }
    for (const { file, call } of expecting.calls(this.calledName())) {
      const order = observedOrder(call, byName, expecting.languageOf(file));
      if (order === null) continue;
      const seen = { order, place: expecting.place(file, call) };
      if (!sameOrder(order, positioned)) return seen;
      first ??= seen;
    }
    return first;
  }

  private calledName(): string {
    return this.expectation.calls ?? this.offer.procedure ?? '';
  }

  private adapter(fits: readonly RowFit[], order: Order): Adapter | null {
    if (this.offer.procedure === undefined) return null;
    const { expecting, offering } = this.input;
    const steps = fits.map(({ row, factor, offset, why }): AdapterStep => {
      const { carrier } = row.offering;
      const reasons = [...why, ...(order.moved.has(row.quantity) ? ['another place'] : [])];
      return {
        quantity: row.quantity,
        intent: row.offering.intent,
        rank: row.offering.shape === 'scalar' ? 0 : row.offering.shape.split(', ').length,
        bytes: carrier?.bytes ?? null,
        expectedPosition: positionIn(order.passed, row.quantity, fits),
        offeredPosition: carrier?.how === 'argument' ? carrier.position : null,
        name: carrier?.name ?? row.quantity,
        factor,
        offset,
        expectedUnit: row.expecting.unit,
        offeredUnit: row.offering.unit,
        why: reasons.join(', '),
      };
    });
    const mapped = new Set(steps.map((step) => step.offeredPosition));
    const args = this.procedure?.procedure.args ?? [];
    return {
      contract: this.contract.contract,
      contractVersion: this.contract.version,
      expecting: expecting.name,
      offering: offering.name,
      procedure: this.offer.procedure,
      parent: this.procedure?.procedure.parent ?? null,
      file: this.procedure?.file ?? null,
      language: expecting.language,
      steps,
      besides: args.flatMap((one, index) =>
        mapped.has(index + 1) ? [] : [{ name: one.name, position: index + 1, type: one.type }],
      ),
    };
  }

  private unlessAdapted(): Gravity {
    return this.expectation.adapter === undefined ? 'stop' : 'note';
  }

  private adapterNext(what: string): string {
    const { adapter } = this.expectation;
    return adapter === undefined
      ? `${what}: write an adapter and name it under "adapter" of this expectation, or bring the two sides to one choice.`
      : `nothing, as long as ${adapter.file} does this: ${what}.`;
  }

  private expectedBy(unit: string): string {
    return `${unit} at ${this.input.expecting.name}`;
  }

  private offeredBy(unit: string): string {
    return `${unit} at ${this.input.offering.name}`;
  }

  /** A difference in units or conventions, with the other side and the contract as evidence. */
  private differing(
    quantity: string,
    part: 'units' | 'conventions',
    kind: FitKind,
    gravity: Gravity,
    said: { readonly key?: string; readonly says: string; readonly next: string },
  ): void {
    const { expecting, offering, contract } = this.input;
    const key = said.key ?? quantity;
    const asks = [expecting, this.expectPath, `${expecting.name} expects`] as const;
    const gives = [offering, this.offerPath, `${offering.name} offers`] as const;
    const states = (side: Expectation | Offer) => side[part]?.[key] !== undefined;
    // Told where someone wrote it down; a convention that the asking side does not state is the asking side's to state.
    const atOffer = part === 'units' && !states(this.expectation) && states(this.offer);
    const [own, other] = atOffer ? [gives, asks] : [asks, gives];
    const place = ([module, path]: typeof asks | typeof gives) =>
      firstThere(module.declaration, [...path, part, key], [...path, 'contract']);
    this.add(own[0].declaration, place(own), {
      kind,
      gravity,
      module: own[0].name,
      says: said.says,
      next: said.next,
      evidence: [
        seenIn(other[0].declaration, place(other), other[2]),
        seenIn(
          contract,
          part === 'units' ? ['quantities', quantity, 'unit'] : ['quantities', quantity, 'conventions', key],
          `the contract ${contract.value.contract} ${contract.value.version}`,
        ),
      ],
    });
  }

  private add(declaration: Declaration<unknown>, path: Path, said: Parameters<typeof findingAt>[2]): void {
    this.findings.push(findingAt(declaration, path, said));
  }
}

interface Observed {
  readonly order: readonly string[];
  readonly place: Place;
}

interface Order {
  /** As the expecting side passes them. */
  readonly passed: readonly string[];
  /** As the procedure takes them. */
  readonly offered: readonly string[];
  readonly moved: ReadonlySet<string>;
}

const NEVER_A_QUANTITY = /^(logical|character|string|boolean|bool|char)\b/;
const WHOLE = /^(integer|int|long|short|int\d+_t|size_t)\b/;

function movedRow(row: JointRow, order: Order): JointRow {
  const from = order.passed.indexOf(row.quantity) + 1;
  const to = order.offered.indexOf(row.quantity) + 1;
  return {
    ...row,
    state: worseState(row.state, 'fits through an adapter'),
    differs: [...row.differs, `passed ${ordinal(from)}, taken ${ordinal(to)}`],
  };
}

function positionIn(passed: readonly string[], quantity: string, fits: readonly RowFit[]): number {
  const at = passed.indexOf(quantity);
  if (at >= 0) return at + 1;
  // Results stand behind the arguments, in the contract's order.
  const rest = fits.map((fit) => fit.row.quantity).filter((one) => !passed.includes(one));
  return passed.length + rest.indexOf(quantity) + 1;
}

function pairs(
  wants: Readonly<Record<string, string>>,
  has: Readonly<Record<string, string>>,
): Record<string, [string, string]> {
  return Object.fromEntries(Object.entries(wants).map(([name, choice]) => [name, [choice, has[name] ?? choice]]));
}

function side(module: LinkedModule, path: Path): Joint['expecting'] {
  const { version } = module.declaration.value;
  return {
    module: module.name,
    version,
    language: module.language,
    place: module.declaration.placeOf([...path, 'contract']),
  };
}

/** `rho is the 1st argument, real*8, intent in` */
export function carrierText(carrier: Carrier): string {
  const parts = [
    carrier.position === null
      ? `${carrier.name} is a ${carrier.how}`
      : `${carrier.name} is the ${ordinal(carrier.position)} argument`,
    carrier.bytes === null ? carrier.type : `${carrier.type} of ${carrier.bytes} bytes`,
    ...(carrier.rank === null || carrier.rank === 0 ? [] : [`rank ${carrier.rank}`]),
    ...(carrier.intent === null ? [] : [`intent ${carrier.intent}`]),
  ];
  return parts.join(', ');
}

/** `value in erg/g = 1e7 * value in J/g` */
function formulaText(to: string, from: string, factor: number, offset: number): string {
  const plus = offset === 0 ? '' : ` ${offset < 0 ? '-' : '+'} ${numberText(Math.abs(offset))}`;
  return `value in ${to} = ${factor === 1 ? '' : `${numberText(factor)} * `}value in ${from}${plus}`;
}

/** Only languages with declared shapes give a rank that can be relied on. */
function rankKnown(carrier: Carrier, language: LinkedModule['language']): boolean {
  if (carrier.rank === null || !['argument', 'result', 'field'].includes(carrier.how)) return false;
  if (language === 'fortran') return true;
  return carrier.rank > 0 || /^(number|double|float|real)$/i.test(carrier.type);
}
