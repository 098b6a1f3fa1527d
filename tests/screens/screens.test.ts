import { describe, expect, it } from 'vitest';
import textWidth from '../../src/report/text-width.ts';
import { drawApp, press, startApp } from '../../src/screens/app.ts';
import { frameText, lineText } from '../../src/screens/frame.ts';
import { ASCII, UNICODE } from '../../src/screens/glyphs.ts';
import { type App, type Key, SCREEN_NAMES, type Wish } from '../../src/screens/screen.ts';
import { sampleViews } from './sample-views.ts';

const SIZES = [
  { columns: 40, rows: 12 },
  { columns: 80, rows: 23 },
  { columns: 120, rows: 39 },
  { columns: 200, rows: 59 },
];
const SIZE = SIZES[1]!;

function type(keys: readonly (string | Key)[], from: App = startApp(sampleViews)): { app: App; wishes: Wish[] } {
  let app = from;
  const wishes: Wish[] = [];
  for (const key of keys.flatMap((one) =>
    typeof one === 'string' ? [...one].map((character) => ({ character })) : [one],
  )) {
    const pressed = press(app, key, SIZE);
    app = pressed.app;
    wishes.push(...pressed.wishes);
  }
  return { app, wishes };
}

const shown = (app: App, size = SIZE) => frameText(drawApp(app, size, UNICODE));

describe('every screen', () => {
  for (const size of SIZES) {
    for (const name of SCREEN_NAMES) {
      it(`draws ${name} in exactly ${size.columns}x${size.rows}, list and opened, with and without UTF-8`, () => {
        const letter = name[0]!;
        for (const keys of [
          [letter],
          [letter, { named: 'enter' } as Key],
          [letter, { named: 'enter' } as Key, { named: 'enter' } as Key],
          ['?'],
        ]) {
          const { app } = type(keys);
          for (const glyphs of [UNICODE, ASCII]) {
            const frame = drawApp(app, size, glyphs);
            expect(frame.lines).toHaveLength(size.rows);
            if (glyphs === ASCII) expect(frameText(frame)).toMatch(/^[\x20-\x7e\n]*$/);
          }
        }
      });
    }
  }

  it('never lets a cut line grow past the terminal', () => {
    for (const name of SCREEN_NAMES) {
      const text = shown(type([name[0]!, { named: 'enter' }]).app, { columns: 80, rows: 23 });
      for (const one of text.split('\n')) expect(textWidth(one.slice(0, 80))).toBeLessThanOrEqual(80);
    }
  });

  it('says what it needs when the terminal is too small', () => {
    expect(shown(startApp(sampleViews), { columns: 39, rows: 12 })).toContain('needs 40x12');
  });
});

describe('home', () => {
  it('answers whether the campaign can start, and why not', () => {
    const text = shown(startApp(sampleViews));
    expect(text).toContain('Can the campaign start?  No: held');
    expect(text).toContain('eos-ionising offers energy-zero ionised');
    expect(text).toContain('1 unfit');
    expect(text).toContain('needs gfortran');
    expect(text).toMatch(/core-hours +41 million +of 40 million +over/);
  });

  it('opens the history of the chosen module', () => {
    expect(shown(type([{ named: 'enter' }]).app)).toContain('Measure energies');
  });
});

describe('joint', () => {
  it('sets expectation and offer side by side, the misfit in the seam', () => {
    const text = shown(type(['j', { named: 'enter' }, { named: 'down' }]).app);
    const row = text.split('\n').find((one) => one.includes('internal-energy') && one.includes('▌ ╱ ▐'));
    expect(row).toMatch(/erg\/g {2}out {2}4 eint.*▌ ╱ ▐.*erg\/g {2}out {2}4 eint/);
    expect(text).toContain('expects energy-zero neutral-atom  offers energy-zero ionised');
  });

  it('draws both domains and the footprint on one axis', () => {
    expect(shown(type(['j', { named: 'enter' }]).app)).toMatch(/▶ internal-energy/);
    const text = shown(type(['j', { named: 'enter' }, { named: 'home' }]).app);
    expect(text).toMatch(/expects +▄+ +1e-26 to 1e-18/);
    expect(text).toMatch(/offers +▀+ +1e-28 to 1e-10/);
    expect(text).toMatch(/visited +━+ +1e-24 to 1e-20/);
  });

  it('writes the adapter of a joint that fits through one', () => {
    expect(type(['j', { named: 'down' }, { named: 'enter' }, 'w']).wishes).toEqual([
      { do: 'write file', name: 'adapt-cooling.ts', text: 'export const factor = 1e-7;\n' },
    ]);
    expect(type(['j', { named: 'enter' }, 'w']).app.message).toContain('no adapter can mend');
  });
});

describe('the answer at home', () => {
  it('is not known while a case has not run', () => {
    const standing = (outcome: 'held' | 'cleared', open: number) =>
      shown(startApp({ ...sampleViews, assembly: { ...sampleViews.assembly, outcome, open } }));
    expect(standing('held', 1)).toContain('not known: 1 case is not run');
    expect(standing('held', 0)).toContain('No: held');
    expect(standing('cleared', 0)).toContain('Yes: cleared');
  });
});

describe('deviation', () => {
  it('marks the worst place above the profile and tells it below', () => {
    const text = shown(type(['d', { named: 'enter' }]).app);
    const marked = text.split('\n').find((one) => one.includes('▼'))!;
    expect(marked.indexOf('▼')).toBeGreaterThan(35);
    expect(marked.indexOf('▼')).toBeLessThan(55);
    expect(text).toContain('37 of 1');
    expect(text).toContain('value 101: 4771 against 4600 at 5e17 cm');
  });

  it('comes nearer, goes along and back again without leaving the axis', () => {
    const near = type([
      'd',
      { named: 'enter' },
      { named: 'up' },
      { named: 'right' },
      { named: 'right' },
      { named: 'right' },
    ]).app.states.deviation;
    expect(near.to - near.from).toBeCloseTo(0.5);
    expect(near.to).toBeLessThanOrEqual(1);
    const far = type(['d', { named: 'enter' }, { named: 'up' }, { named: 'down' }, { named: 'down' }]).app.states
      .deviation;
    expect([far.from, far.to]).toEqual([0, 1]);
  });
});

describe('a module through time', () => {
  it('stands on a line with its versions, what was not declared set apart from the rest', () => {
    const [history] = sampleViews.histories;
    const [born] = history!.steps;
    const steps = [born!, { ...born!, date: '2024-05-01', version: '2.0.0', undeclared: false }];
    const views = { ...sampleViews, histories: [{ ...history!, steps }] };
    const rows = shown(type(['h', { named: 'enter' }], startApp(views)).app).split('\n');
    const rail = rows.find((one) => one.startsWith('2021 '));
    expect(rail).toMatch(/^2021 ╳─+● 2024$/);
    const inside = { ...born!, date: '2022-05-01', undeclared: false, asked: 'patch' };
    const three = { ...sampleViews, histories: [{ ...history!, steps: [born!, inside, steps[1]!] }] };
    const opened = type(['h', { named: 'enter' }], startApp(three));
    expect(shown(opened.app)).toMatch(/2021 ╳─+┼─+● 2024/);
    expect(shown(type(['i'], opened.app).app)).toMatch(/2 of 3 steps[\s\S]*2021 ╳─+● 2024/);
  });
});

describe('a page longer than the screen', () => {
  it('scrolls to its end and no further', () => {
    const short = { columns: 80, rows: 13 };
    const open = type(['f', 'm']).app;
    const first = shown(open, short);
    expect(first).toContain('What it means');
    let app = open;
    for (let times = 0; times < 100; times++) app = press(app, { named: 'down' }, short).app;
    expect(shown(app, short)).toContain('An example');
    expect(shown(press(app, { named: 'up' }, short).app, short)).not.toBe(shown(app, short));
  });
});

describe('an exchange', () => {
  it('is begun alone, or with what was taken along', () => {
    const below: Key = { named: 'down' };
    expect(type(['s', below, 'b']).wishes).toEqual([{ do: 'exchange', words: ['equation-of-state=eos-perfect'] }]);
    const both = type(['s', 'm', below, 'm', 'b']);
    expect(both.wishes).toEqual([]);
    expect(both.app.message).toBe('equation-of-state can take one module at a time');
  });

  it('shows what it moved, and where along the profile', () => {
    expect(shown(type(['s']).app)).toMatch(/eos-table +37 of 1/);
    const opened = type(['s', { named: 'enter' }]);
    expect(shown(opened.app)).toMatch(/cloud-shock +temperature +beyond tolerance +37 of 1/);
    expect(shown(type([{ named: 'enter' }], opened.app).app)).toContain('▼');
  });
});

describe('what is asked of the program around', () => {
  const enter: Key = { named: 'enter' };
  const named = (suffix: string): (string | Key)[] => [...Array(3).fill({ named: 'rub-out' }), suffix, enter];

  it('writes what is shown as text, as the table behind it, or as a drawing, by the suffix of the name', () => {
    expect(type(['f', '@', enter]).wishes).toMatchObject([{ do: 'write file', name: 'mortise-findings.txt' }]);
    const [table] = type(['f', '@', ...named('csv')]).wishes;
    expect(table).toMatchObject({ do: 'write file', name: 'mortise-findings.csv' });
    expect((table as { text: string }).text).toMatch(
      /^gravity,kind,module,place,says,next,accepted\r\nstop,unit-unknown,/,
    );
    const [drawing] = type(['d', enter, '@', ...named('svg')]).wishes;
    expect((drawing as { text: string }).text).toMatch(/^<svg xmlns="http:\/\/www.w3.org\/2000\/svg"[\s\S]*<\/svg>\n$/);
    expect(type(['f', '@', ...named('svg')]).app.message).toContain('nothing is drawn here');
  });

  it('accepts a finding only with a reason', () => {
    expect(type(['f', 'g', { named: 'enter' }]).wishes).toEqual([]);
    expect(type(['f', 'g', 'known', { named: 'enter' }]).wishes).toMatchObject([{ do: 'accept', reason: 'known' }]);
  });

  it('shows what a new reference changes before it asks for the reason', () => {
    const { app } = type(['c', 'w']);
    expect(app.question?.asks).toContain('temperature beyond tolerance');
    expect(type(['c', 'w', 'new solver', { named: 'enter' }]).wishes).toEqual([
      { do: 'record', name: 'cloud-shock', reason: 'new solver' },
    ]);
  });

  it('begins one case or all of them', () => {
    expect(type(['c', 'b']).wishes).toEqual([{ do: 'run cases', names: ['cloud-shock'] }]);
    expect(type(['c', 'a']).wishes).toEqual([{ do: 'run cases', names: ['cloud-shock', 'riemann'] }]);
  });

  it('runs the failed cases again', () => {
    expect(type(['c', 't']).wishes).toEqual([{ do: 'run cases', names: ['cloud-shock'] }]);
  });

  it('asks before a running job is abandoned', () => {
    const busy = startApp({
      ...sampleViews,
      assembly: { ...sampleViews.assembly, job: { says: 'riemann', done: 0.5 } },
    });
    const asked = type(['q'], busy);
    expect(asked.wishes).toEqual([]);
    expect(asked.app.question?.asks).toContain('A job is running');
    expect(type(['no', { named: 'enter' }], asked.app).wishes).toEqual([]);
    expect(type(['yes', { named: 'enter' }], asked.app).wishes).toEqual([{ do: 'leave' }]);
    expect(type(['q']).wishes).toEqual([{ do: 'leave' }]);
  });
});

describe('finding by name', () => {
  it('narrows the list as letters are typed, and Esc gives all back', () => {
    const { app } = type(['=', 'hydro']);
    expect(shown(app)).not.toContain('eos-ionising    ');
    expect(shown(app)).toContain('find: hydro_');
    expect(shown(type([{ named: 'back' }], app).app)).toContain('dust-heating');
  });
});

describe('a long list', () => {
  it('draws only what is in sight', () => {
    const many = Array.from({ length: 10_000 }, (_, index) => ({
      finding: { ...sampleViews.findings[0]!.finding, says: `finding ${index}` },
      accepted: null,
    }));
    const { app } = type(['f', { named: 'end' }], startApp({ ...sampleViews, findings: many }));
    const frame = drawApp(app, SIZE, UNICODE);
    expect(lineText(frame.lines.at(-3)!)).toContain('finding 9999');
  });
});
