/** An adapter as data comes in; its source text in the language of the expecting side goes out. The text is a start to be read, not code to be trusted. */
import type { Language } from '../model/interface.ts';
import { numberText } from './domains.ts';
import type { Adapter, AdapterStep } from './joint.ts';

/** Languages in which an adapter can be written. */
export function canWriteAdapter(language: Language): boolean {
  return language === 'fortran' || language === 'typescript' || language === 'javascript';
}

/** A value of the expecting side as the offering side has it: factor * value + offset. */
export function toOffered(step: AdapterStep, value: number): number {
  return value * step.factor + step.offset;
}

/** A value of the offering side as the expecting side has it; the inverse of `toOffered`. */
export function toExpected(step: AdapterStep, value: number): number {
  return (value - step.offset) / step.factor;
}

/**
 * The adapter as source text, named `PROCEDURE_for_MODULE`.
 *
 * @returns null for a language in which none is written
 */
export function adapterSource(adapter: Adapter): { readonly file: string; readonly text: string } | null {
  if (adapter.language === 'fortran') {
    return { file: `${fortranName(adapter)}.f90`, text: fortran(adapter) };
  }
  if (adapter.language === 'typescript' || adapter.language === 'javascript') {
    const typed = adapter.language === 'typescript';
    return { file: `${kebab(fortranName(adapter))}.${typed ? 'ts' : 'js'}`, text: script(adapter, typed) };
  }
  return null;
}

function heading(adapter: Adapter): string[] {
  const changed = adapter.steps.filter((step) => step.why !== '').map((step) => `${step.quantity}: ${step.why}`);
  return [
    `Joins ${adapter.expecting} to ${adapter.procedure} of ${adapter.offering}, contract ${adapter.contract} ${adapter.contractVersion}.`,
    ...changed,
  ];
}

function fortranName(adapter: Adapter): string {
  const plain = (name: string) => name.replace(/[^A-Za-z0-9]+/g, '_').replace(/^_+|_+$/g, '');
  // Fortran 2003 and later allow 63 characters in a name.
  return `${plain(adapter.procedure)}_for_${plain(adapter.expecting)}`.slice(0, 63);
}

function fortran(adapter: Adapter): string {
  const steps = inExpectedOrder(adapter);
  const result = steps.find((step) => step.offeredPosition === null);
  const dummy = (step: AdapterStep) => identifier(step.quantity);
  const extra = adapter.besides.map((one) => one.name);
  const name = fortranName(adapter);
  const dummies = [...steps.map(dummy), ...extra];
  const lines = [
    ...heading(adapter).map((one) => `! ${one}`),
    `subroutine ${name}(${dummies.join(', ')})`,
    ...(adapter.parent === null ? [] : [`  use ${adapter.parent}, only: ${adapter.procedure}`]),
    '  implicit none',
  ];
  for (const step of steps) {
    lines.push(
      `  ${fortranType(step)}, intent(${step.intent}) :: ${dummy(step)}${dimensions(step)} ! ${step.expectedUnit}`,
    );
  }
  for (const one of adapter.besides) lines.push(`  ${one.type}, intent(inout) :: ${one.name}`);
  for (const step of steps) {
    if (needsLocal(step)) {
      const shape = step.rank === 0 ? '' : `, allocatable`;
      lines.push(`  ${fortranType(step)}${shape} :: ${local(step)}${dimensions(step)} ! ${step.offeredUnit}`);
    }
  }
  if (result !== undefined && adapter.parent === null)
    lines.push(`  ${fortranType(result)}, external :: ${adapter.procedure}`);
  for (const step of steps.filter(needsLocal)) {
    if (step.rank > 0) lines.push(`  allocate (${local(step)}, mold=${dummy(step)})`);
    if (step.intent !== 'out') lines.push(`  ${local(step)} = ${apply(dummy(step), step, 'd')}`);
  }
  const passed = [
    ...steps
      .filter((step) => step.offeredPosition !== null)
      .map((step) => [step.offeredPosition!, needsLocal(step) ? local(step) : dummy(step)] as const),
    ...adapter.besides.map((one) => [one.position, one.name] as const),
  ]
    .sort((a, b) => a[0] - b[0])
    .map(([, text]) => text);
  const call = `${adapter.procedure}(${passed.join(', ')})`;
  lines.push(
    result === undefined ? `  call ${call}` : `  ${needsLocal(result) ? local(result) : dummy(result)} = ${call}`,
  );
  for (const step of steps.filter(needsLocal)) {
    if (step.intent !== 'in') lines.push(`  ${dummy(step)} = ${undo(local(step), step, 'd')}`);
  }
  lines.push(`end subroutine ${name}`);
  return `${lines.flatMap(continued).join('\n')}\n`;
}

/** Free form allows 132 characters a line; a longer statement goes on after `&`. */
function continued(line: string): string[] {
  if (line.length <= 120 || line.startsWith('!')) return [line];
  const cut = line.lastIndexOf(', ', 110);
  return cut < 0 ? [line] : [`${line.slice(0, cut + 1)} &`, ...continued(`    ${line.slice(cut + 2)}`)];
}

function fortranType(step: AdapterStep): string {
  if (step.bytes === 4) return 'real(kind(1.0))';
  return step.bytes === null || step.bytes === 8
    ? 'real(kind(1.0d0))'
    : `real(selected_real_kind(${step.bytes === 16 ? 30 : 15}))`;
}

function dimensions(step: AdapterStep): string {
  return step.rank === 0 ? '' : `(${Array(step.rank).fill(':').join(', ')})`;
}

function script(adapter: Adapter, typed: boolean): string {
  const steps = inExpectedOrder(adapter);
  const inputs = steps.filter((step) => step.offeredPosition !== null);
  const results = steps.filter((step) => step.offeredPosition === null);
  const type = (step: AdapterStep) => (typed ? `: ${step.rank === 0 ? 'number' : 'Float64Array'}` : '');
  const name = camel(fortranName(adapter));
  const parameters = [
    ...inputs.map((step) => `${camel(step.quantity)}${type(step)}`),
    ...adapter.besides.map((one) => `${one.name}${typed ? `: ${one.type === 'unknown' ? 'unknown' : one.type}` : ''}`),
  ];
  const passed = [
    ...inputs.map((step) => [step.offeredPosition!, applied(camel(step.quantity), step)] as const),
    ...adapter.besides.map((one) => [one.position, one.name] as const),
  ]
    .sort((a, b) => a[0] - b[0])
    .map(([, text]) => text);
  const call = `${adapter.procedure}(${passed.join(', ')})`;
  const from = `./${(adapter.file ?? kebab(adapter.offering)).split('/').at(-1)}`;
  const lines = [
    ...heading(adapter).map((one) => `// ${one}`),
    `import { ${adapter.parent ?? adapter.procedure} } from '${from}';`,
    '',
    `export function ${name}(${parameters.join(', ')}) {`,
  ];
  const full = adapter.parent === null ? call : `${adapter.parent}.${call}`;
  if (results.length === 0) {
    lines.push(`  return ${full};`);
  } else if (results.length === 1 && results[0]!.name === 'result') {
    lines.push(`  const result = ${full};`, `  return ${undone('result', results[0]!)};`);
  } else {
    lines.push(`  const result = ${full};`, '  return {', '    ...result,');
    for (const step of results.filter((one) => one.why !== '')) {
      lines.push(`    ${step.name}: ${undone(`result.${step.name}`, step)}, // ${step.expectedUnit}`);
    }
    lines.push('  };');
  }
  lines.push('}');
  return `${lines.join('\n')}\n`;
}

function applied(value: string, step: AdapterStep): string {
  if (!needsLocal(step)) return value;
  return step.rank === 0 ? apply(value, step, '') : `${value}.map((value) => ${apply('value', step, '')})`;
}

function undone(value: string, step: AdapterStep): string {
  if (!needsLocal(step)) return value;
  return step.rank === 0 ? undo(value, step, '') : `${value}.map((value) => ${undo('value', step, '')})`;
}

function inExpectedOrder(adapter: Adapter): AdapterStep[] {
  return [...adapter.steps].sort((a, b) => a.expectedPosition - b.expectedPosition);
}

/** True when the value itself changes on its way. */
function needsLocal(step: AdapterStep): boolean {
  return step.factor !== 1 || step.offset !== 0;
}

function apply(value: string, step: AdapterStep, exponent: 'd' | ''): string {
  const scaled =
    step.factor === 1 ? value : step.factor === -1 ? `-${value}` : `${value} * ${literal(step.factor, exponent)}`;
  return step.offset === 0 ? scaled : `${scaled} ${sign(step.offset)} ${literal(Math.abs(step.offset), exponent)}`;
}

function undo(value: string, step: AdapterStep, exponent: 'd' | ''): string {
  const moved =
    step.offset === 0 ? value : `(${value} ${sign(-step.offset)} ${literal(Math.abs(step.offset), exponent)})`;
  return step.factor === 1 ? moved : step.factor === -1 ? `-${moved}` : `${moved} / ${literal(step.factor, exponent)}`;
}

function sign(offset: number): string {
  return offset < 0 ? '-' : '+';
}

/** All digits of the double, in double precision on the Fortran side, with parentheses where a sign would meet an operator. */
function literal(value: number, exponent: 'd' | ''): string {
  const plain = String(value);
  if (exponent === '') return value < 0 ? `(${plain})` : plain;
  const text = plain.includes('e')
    ? plain.replace('e+', 'd').replace('e', 'd')
    : `${plain}${plain.includes('.') ? '' : '.0'}d0`;
  return value < 0 ? `(${text})` : text;
}

function local(step: AdapterStep): string {
  return `own_${identifier(step.quantity)}`.slice(0, 63);
}

function identifier(quantity: string): string {
  return quantity.replace(/[^A-Za-z0-9]+/g, '_').slice(0, 59);
}

function camel(name: string): string {
  return name.replace(/[-_.]+(\w)/g, (_, letter: string) => letter.toUpperCase());
}

function kebab(name: string): string {
  return name.replace(/_/g, '-').toLowerCase();
}

/** One line for people: `internal-energy: multiply by 1e7`. */
export function stepText(step: AdapterStep): string {
  const parts = [
    ...(step.factor === 1 ? [] : [`multiply by ${numberText(step.factor)}`]),
    ...(step.offset === 0 ? [] : [`add ${numberText(step.offset)}`]),
    ...(step.why.includes('another place') ? [`pass it as argument ${step.offeredPosition}`] : []),
  ];
  return `${step.quantity}: ${parts.length === 0 ? 'hand over' : parts.join(', ')}${step.why === '' ? '' : ` (${step.why})`}`;
}
