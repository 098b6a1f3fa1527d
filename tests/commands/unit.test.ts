import { describe, expect, it } from 'vitest';
import { mortiseIn } from '../support/run-mortise.ts';

const unit = (words: readonly string[], input = '') => mortiseIn({ cwd: '/', env: {}, input }, ['unit', ...words]);

describe('mortise unit', () => {
  it('answers factor and dimension', async () => {
    const { status, out } = await unit(['erg/cm^3', 'Pa']);
    expect(status).toBe(0);
    expect(out).toContain('erg/cm^3 = 0.1 Pa');
    expect(out).toContain('dimension kg m-1 s-2');
  });
  it('answers pairs from standard input with a JSON line each', async () => {
    const { status, out } = await unit(
      ['-', '--json'],
      'km\tcm\nm/\tcm\nyr\ts\nkeV\tK\tthermal\r\nMeV/baryon\terg/g\tm_u',
    );
    const answers = out
      .trim()
      .split('\n')
      .map((line) => JSON.parse(line));
    expect(answers[0]).toMatchObject({ from: 'km', to: 'cm', factor: 1e5, dimension: { m: 1 }, syntax: 'ucum' });
    expect(answers[1]).toMatchObject({ from: 'm/', factor: null, error: { column: 2 } });
    expect(answers[2].readings.length).toBeGreaterThan(1);
    // CODATA 2018: 1 eV = 11 604.518 12 K
    expect(answers[3].factor / 1.160451812e7).toBeCloseTo(1, 9);
    expect(answers[4].uses).toContain('m_u (CODATA 2022)');
    expect(status).toBe(1);
  });
  it('points at what is no unit and says what was meant', async () => {
    const { status, err } = await unit(['erg/Kg']);
    expect(status).toBe(1);
    expect(err).toContain('column 5');
    expect(err).toContain('    ^^'.slice(2));
    expect(err).toContain('Next: write kg.');
  });
  it('names the relation that a refused pair needs', async () => {
    expect((await unit(['eV', 'K'])).err).toContain('thermal');
    expect((await unit(['eV', 'K', '--equivalence', 'thermal'])).out).toContain('uses');
  });
  it('lets no control character of its input through', async () => {
    const { out, err } = await unit(['\u001b[31mm', 'cm']);
    expect(out + err).not.toContain('\u001b');
  });
  it('takes one unit alone, in SI base units', async () => {
    expect(JSON.parse((await unit(['degC', '--json'])).out)).toMatchObject({ factor: 1, offset: 273.15, to: null });
  });
});
