import { describe, expect, it } from 'vitest';
import { findingText } from '../../src/report/finding-text.ts';
import { niceTicks } from '../../src/report/html/plot-profile.ts';
import { reportHtml } from '../../src/report/report-html.ts';
import { reportJson } from '../../src/report/report-json.ts';
import { reportJunit } from '../../src/report/report-junit.ts';
import { reportMarkdown } from '../../src/report/report-markdown.ts';
import { reportText } from '../../src/report/report-text.ts';
import textWidth, { cutToWidth, fitToWidth } from '../../src/report/text-width.ts';
import { HOSTILE, sampleReport } from './sample-report.ts';

const finding = sampleReport.findings[0]!;
const WIDE = { width: 100, colour: false };

describe('a finding as text', () => {
  it('says where, what and what next, the characters meant underlined', () => {
    expect(
      findingText({ ...finding, module: undefined as never, evidence: finding.evidence.slice(0, 1) }, WIDE).replace(
        / +$/gm,
        '',
      ),
    ).toBe(
      [
        'manifests/modules/eos é.yaml:11:30  stop  unit-unknown',
        '  11 |     units: {internal-energy: erg/gm}',
        '     |                              ^^^^^^',
        '"erg/gm" is not a unit.',
        'Next: write "g" for gram.',
        '',
      ].join('\n'),
    );
  });

  it('shows the characters meant of a line of any length', () => {
    const text = `${'x '.repeat(500)}HERE${' y'.repeat(500)}`;
    const long = findingText(
      { ...finding, evidence: [{ says: 'here', excerpt: { line: 1, text, column: 1001, width: 4 } }] },
      { width: 60, colour: false },
    );
    const [, shown, marks] = long.split('\n');
    expect(shown!.length).toBeLessThanOrEqual(60);
    expect(shown!.slice(marks!.indexOf('^'), marks!.indexOf('^') + 4)).toBe('HERE');
  });

  it('has colour only when asked', () => {
    expect(findingText(finding, WIDE)).not.toContain('\u001b');
    expect(findingText(finding, { ...WIDE, colour: true })).toContain('\u001b[1;31mstop');
  });
});

describe('every form', () => {
  const forms = {
    text: reportText(sampleReport, WIDE),
    json: reportJson(sampleReport, '1.0.0'),
    markdown: reportMarkdown(sampleReport),
    html: reportHtml(sampleReport),
    junit: reportJunit(sampleReport),
  };

  for (const [name, text] of Object.entries(forms)) {
    it(`${name} holds outcome or finding, and no control character or mark that reorders text`, () => {
      expect(text).toMatch(/erg\/gm|erg&#47;gm/);
      if (name === 'json') expect(JSON.parse(text).findings[1].says).toBe(HOSTILE);
      else expect(text).not.toMatch(/[\u0000-\u0008\u000b-\u001f\u007f-\u009f\u202a-\u202e\u2066-\u2069]/);
    });
  }

  it('text tells outcome and count last but for the caution', () => {
    expect(forms.text.trimEnd().split('\n').slice(-2)[0]).toBe('held: 1 stop, 1 note');
  });

  it('text turns a table on its side where the terminal is narrow', () => {
    const narrow = reportText(sampleReport, { width: 40, colour: false });
    expect(narrow).toMatch(/^ {2}module:/m);
    expect(narrow).not.toMatch(/^component +module/m);
  });

  it('Markdown lets no text become markup, a link or a mention', () => {
    expect(forms.markdown).not.toContain('<img');
    expect(forms.markdown).not.toContain('[link]');
    expect(forms.markdown).not.toContain('@everyone');
  });

  it('Markdown stays below the length that forges allow, and says what was left out', () => {
    const many = { ...sampleReport, findings: Array.from({ length: 2000 }, () => finding) };
    const text = reportMarkdown(many);
    expect(text.length).toBeLessThan(65_000);
    expect(text).toMatch(/\d+ more parts are left out for length/);
    expect(text).toContain('2000 stops');
  });

  it('Markdown keeps the first rows of a table that is too long, and says how many it left out', () => {
    const rows = Array.from({ length: 5000 }, (_, index) => ['equation-of-state', `eos ${index}`, 'fits']);
    const text = reportMarkdown({ ...sampleReport, sections: [{ title: 'Modules', head: ['a', 'b', 'c'], rows }] });
    expect(text.length).toBeLessThan(65_000);
    expect(text.length).toBeGreaterThan(60_000);
    expect(text).toContain('eos 0 ');
    expect(text).toMatch(/\d+ more rows are left out for length/);
  });

  it('HTML is one file: nothing is fetched and nothing runs', () => {
    expect(forms.html).not.toMatch(/<script|<link|<img|<iframe|<[^>]*\s(src|href|on[a-z]+)=|@import|url\(|https?:\/\//);
    expect(forms.html).toContain("default-src 'none'");
  });

  it('HTML draws the profile with its band, reference and worst place', () => {
    expect(forms.html).toMatch(/<polygon class="band" points="[-\d., ]{1000,}"/);
    expect(forms.html).toMatch(/<path class="reference" d="M/);
    expect(forms.html).toContain('>worst</text>');
    expect(forms.html).not.toContain('NaN');
  });

  it('JUnit counts what failed', () => {
    expect(forms.junit).toMatch(/<testsuite name="cloud-shock" tests="1" failures="1"/);
    expect(forms.junit).toMatch(/<testsuite name="findings" tests="2" failures="1"/);
  });
});

describe('ticks', () => {
  it.each([
    [0, 10, [0, 2, 4, 6, 8, 10]],
    [0.13, 0.74, [0.2, 0.4, 0.6]],
    [-3, 3, [-2, 0, 2]],
  ])('between %d and %d are round numbers', (low, high, expected) => {
    expect(niceTicks(low, high, 5).map((tick) => Number(tick.toPrecision(10)) + 0)).toEqual(expected);
  });
});

describe('width of text', () => {
  it.each([
    ['plain', 5],
    ['日本', 4],
    ['e\u0301', 1],
    ['…', 1],
  ])('%s takes %d columns', (text, columns) => {
    expect(textWidth(text)).toBe(columns);
  });

  it('is kept when text is cut, never inside a wide character', () => {
    expect(cutToWidth('日本語', 4)).toBe('日…');
    expect(textWidth(fitToWidth('日本語', 4))).toBe(4);
  });
});
