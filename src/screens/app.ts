/**
 * The terminal UI as a state and two pure functions: `press` turns a key into a new state and things to do outside,
 * `drawApp` turns a state into a frame. Neither knows Ink, the terminal or the disk.
 */
import { csvText } from '../model/csv.ts';
import textWidth from '../report/text-width.ts';
import { type Frame, fitLine, type Line, line, lineText, type Size, span, spread } from './frame.ts';
import { type Glyphs, ASCII as PLAIN_GLYPHS } from './glyphs.ts';
import {
  type App,
  ask,
  FRESH,
  goTo,
  type Key,
  type Pressed,
  progressBar,
  type Question,
  SCREEN_NAMES,
  type ScreenName,
  type ScreenState,
  still,
  type Wish,
  withState,
} from './screen.ts';
import { SCREENS } from './screens.ts';
import type { Views } from './views.ts';

export function startApp(views: Views): App {
  return {
    views,
    screen: 'assembly',
    trail: [],
    states: Object.fromEntries(SCREEN_NAMES.map((name) => [name, FRESH])) as Record<ScreenName, ScreenState>,
    keysShown: false,
    question: null,
    message: '',
  };
}

export function press(app: App, key: Key, size: Size): Pressed {
  if (app.question !== null) return answer(app, app.question, key);
  const quiet = { ...app, message: '' };
  if (app.keysShown) return still({ ...quiet, keysShown: false });
  const screen = SCREENS[app.screen];
  const state = app.states[app.screen];
  if (state.typing) return typeOn(quiet, state, key);
  const own = screen.press?.(quiet, state, key);
  if (own !== undefined) return own;
  if ('character' in key) return everywhere(quiet, key.character);
  return move(quiet, state, key, size);
}

/** The keys that mean the same on every screen. */
export const EVERYWHERE: readonly (readonly [string, string])[] = [
  ['?', 'keys'],
  ['=', 'find by name'],
  ['@', 'write what is shown to a file'],
  ['^', 'copy what is shown'],
  ['!', 'read files again'],
  ['Q', 'leave'],
];

function everywhere(app: App, character: string): Pressed {
  const target = SCREEN_NAMES.find((name) => SCREENS[name].letter === character.toLowerCase());
  if (target !== undefined) return still(goTo(app, target));
  switch (character) {
    case '?':
      return still({ ...app, keysShown: true });
    case '=':
      return still(withState(app, { typing: true, typed: '' }));
    case '!':
      return { app: { ...app, message: 'reading again' }, wishes: [{ do: 'read again' }] };
    case '@':
      return ask(app, {
        asks: 'Write what is shown to (.txt, .csv or .svg):',
        answer: `mortise-${app.screen}.txt`,
        wants: 'words',
        wish: (name) => writing(app, name),
      });
    case '^':
      return { app, wishes: [{ do: 'clipboard', text: shownText(app) }] };
    case 'q':
    case 'Q':
      return leave(app);
    default:
      return still(app);
  }
}

/** The suffix of the name says what is written: text, the table behind it, or the drawing. */
function writing(app: App, name: string): Wish | { readonly says: string } {
  const screen = SCREENS[app.screen];
  const state = app.states[app.screen];
  if (name.endsWith('.csv')) {
    const table = screen.table?.(app.views, state);
    if (table === undefined) return { says: 'this screen is no table: write it as .txt' };
    return { do: 'write file', name, text: csvText(table) };
  }
  if (name.endsWith('.svg')) {
    const text = screen.drawing?.(app.views, state) ?? null;
    if (text === null) return { says: 'nothing is drawn here: open a deviation, a joint or a history, or write .txt' };
    return { do: 'write file', name, text };
  }
  return { do: 'write file', name, text: shownText(app) };
}

/** Leaving while a job runs is asked about first. */
export function leave(app: App): Pressed {
  if (app.views.assembly.job === null) return { app, wishes: [{ do: 'leave' }] };
  return ask(app, {
    asks: 'A job is running. Type yes to end it and leave:',
    answer: '',
    wants: 'yes',
    wish: () => ({ do: 'leave' }),
  });
}

function answer(app: App, question: Question, key: Key): Pressed {
  if ('character' in key) return still({ ...app, question: { ...question, answer: question.answer + key.character } });
  if (key.named === 'rub-out')
    return still({ ...app, question: { ...question, answer: question.answer.slice(0, -1) } });
  if (key.named === 'back') return still({ ...app, question: null, message: 'nothing was done' });
  if (key.named !== 'enter') return still(app);
  const said = question.answer.trim();
  const good = question.wants === 'yes' ? said === 'yes' : said !== '';
  if (!good) return still({ ...app, question: null, message: 'nothing was done' });
  const wish = question.wish(said);
  const answered = { ...app, question: null };
  return 'says' in wish ? still({ ...answered, message: wish.says }) : { app: answered, wishes: [wish] };
}

function typeOn(app: App, state: ScreenState, key: Key): Pressed {
  if ('character' in key) return still(withState(app, { typed: state.typed + key.character, chosen: 0 }));
  if (key.named === 'rub-out') return still(withState(app, { typed: state.typed.slice(0, -1), chosen: 0 }));
  if (key.named === 'back') return still(withState(app, { typing: false, typed: '' }));
  if (key.named === 'enter') return still(withState(app, { typing: false }));
  return still(withState(app, { typing: false }));
}

function move(app: App, state: ScreenState, key: Extract<Key, { named: string }>, size: Size): Pressed {
  const lines = SCREENS[app.screen].page?.(app.views, state, size.columns) ?? null;
  if (lines !== null) return scroll(app, state, key, lines.length, Math.max(1, size.rows - 4));
  const field = state.depth === 0 ? 'chosen' : 'inner';
  const count = SCREENS[app.screen].count(app.views, state);
  const page = Math.max(1, size.rows - 8);
  const to = (index: number) => still(withState(app, { [field]: Math.max(0, Math.min(count - 1, index)) }));
  switch (key.named) {
    case 'up':
      return to(state[field] - 1);
    case 'down':
      return to(state[field] + 1);
    case 'page-up':
      return to(state[field] - page);
    case 'page-down':
      return to(state[field] + page);
    case 'home':
      return to(0);
    case 'end':
      return to(count - 1);
    case 'enter':
    case 'right':
      return still(count > 0 && state.depth === 0 ? withState(app, { depth: 1, inner: 0 }) : app);
    default:
      return back(app, state);
  }
}

function scroll(
  app: App,
  state: ScreenState,
  key: Extract<Key, { named: string }>,
  lines: number,
  rows: number,
): Pressed {
  const steps: Partial<Record<typeof key.named, number>> = {
    up: -1,
    down: 1,
    'page-up': -rows,
    'page-down': rows,
    home: -lines,
    end: lines,
  };
  const step = steps[key.named];
  if (step === undefined) return key.named === 'back' || key.named === 'left' ? back(app, state) : still(app);
  const to = Math.max(0, Math.min(lines - rows, state.scroll + step));
  return still(withState(app, { scroll: to }));
}

/** One step out: of the opened thing, of what was typed, of the screen, and at home nowhere. */
function back(app: App, state: ScreenState): Pressed {
  if (state.depth > 0)
    return still(withState(app, { depth: state.depth - 1, inner: state.depth > 1 ? state.inner : 0, scroll: 0 }));
  if (state.typed !== '') return still(withState(app, { typed: '' }));
  const previous = app.trail.at(-1);
  return still(previous === undefined ? app : { ...app, screen: previous, trail: app.trail.slice(0, -1) });
}

export const SMALLEST: Size = { columns: 40, rows: 12 };

/** Exactly `size.rows` lines. Below the smallest size it says so and draws nothing else. */
export function drawApp(app: App, size: Size, glyphs: Glyphs): Frame {
  if (size.columns < SMALLEST.columns || size.rows < SMALLEST.rows) {
    return { lines: [line(`needs ${SMALLEST.columns}x${SMALLEST.rows}`), line(`has ${size.columns}x${size.rows}`)] };
  }
  const caution = app.views.assembly.caution;
  const top = [
    header(app, size, glyphs),
    ...(caution === null ? [] : [line(span(caution, 'warm'))]),
    places(app, size, glyphs),
  ];
  const foot = [line(span(glyphs.rule.repeat(size.columns), 'faint')), footer(app, size)];
  const room = { columns: size.columns, rows: size.rows - top.length - foot.length };
  const body = app.keysShown ? overlay(app) : bodyOf(app, room, glyphs);
  const filled = Array.from({ length: room.rows }, (_, index) => body[index] ?? []);
  const lines = [...top, ...filled, ...foot];
  return { lines: glyphs.ellipsis === '…' ? lines : lines.map((one) => respell(one, glyphs.ellipsis, size.columns)) };
}

/** What the screen shows, whole, for a file, the clipboard or a screen reader. */
export function shownText(app: App, columns = 120, glyphs?: Glyphs): string {
  const drawn = bodyOf(app, { columns, rows: 10_000 }, glyphs ?? PLAIN_GLYPHS);
  return `${drawn.map((one) => lineText(one).trimEnd()).join('\n')}\n`;
}

function bodyOf(app: App, size: Size, glyphs: Glyphs): readonly Line[] {
  const state = app.states[app.screen];
  const page = SCREENS[app.screen].page?.(app.views, state, size.columns) ?? null;
  if (page === null) return SCREENS[app.screen].draw(app.views, state, size, glyphs);
  const first = Math.max(0, Math.min(page.length - size.rows, state.scroll));
  return page.slice(first, first + size.rows);
}

function header(app: App, size: Size, glyphs: Glyphs): Line {
  const { outcome, open, title, job } = app.views.assembly;
  const style = open > 0 ? 'warm' : outcome === 'held' ? 'alarm' : outcome === 'cleared' ? 'good' : 'warm';
  const right =
    job === null
      ? line(span(open > 0 ? 'cases not run' : (outcome ?? 'not audited'), style), ' ')
      : job.done === 0
        ? line(`${job.says} ${glyphs.ellipsis} `)
        : line(`${job.says} `, span(progressBar(job.done, 10, glyphs), 'strong'), ` ${Math.round(job.done * 100)} % `);
  return spread(line(' ', span(title, 'strong'), `  ${app.screen}`), right, size.columns);
}

function footer(app: App, size: Size): Line {
  if (app.question !== null) return line(span(app.question.asks, 'strong'), ` ${app.question.answer}_`);
  if (app.message !== '') return line(span(app.message, 'strong'));
  const state = app.states[app.screen];
  if (state.typing) return line(span('find:', 'strong'), ` ${state.typed}_`);
  const own = SCREENS[app.screen].keys(app.views, state).map(([key, does]) => `${key} ${does}`);
  const always = '? all keys   Q leave';
  let text = '';
  for (const one of own) {
    if (textWidth(text) + textWidth(one) + always.length + 3 > size.columns) break;
    text += `${one}   `;
  }
  return line(text, always);
}

/** The rule below the title holds the names of the screens, each with the letter that goes there, where the terminal is wide enough. */
function places(app: App, size: Size, glyphs: Glyphs): Line {
  const names = SCREEN_NAMES.map((name) => name.charAt(0).toUpperCase() + name.slice(1));
  const rest = size.columns - names.reduce((sum, name) => sum + name.length + 3, 1);
  if (rest < 0) return line(span(glyphs.rule.repeat(size.columns), 'faint'));
  const parts = names.flatMap((name, index) => [
    span(` ${name} `, SCREEN_NAMES[index] === app.screen ? 'strong' : undefined),
    span(glyphs.rule, 'faint'),
  ]);
  return line(span(glyphs.rule, 'faint'), ...parts, span(glyphs.rule.repeat(rest), 'faint'));
}

function overlay(app: App): readonly Line[] {
  const state = app.states[app.screen];
  const block = (title: string, keys: readonly (readonly [string, string])[]) => [
    line(span(title, 'strong')),
    ...keys.map(([key, does]) => line(`  ${key.padEnd(12)} ${does}`)),
  ];
  return [
    ...block(`On the ${app.screen} screen`, SCREENS[app.screen].keys(app.views, state)),
    line(''),
    ...block('Everywhere', [...EVERYWHERE, ['Enter', 'open what is chosen'], ['Esc', 'one step back']]),
    line(''),
    line(span('Go to', 'strong'), '  by the first letter of its name'),
    ...[SCREEN_NAMES.slice(0, 4), SCREEN_NAMES.slice(4)].map((names) => line(`  ${names.join('   ')}`)),
  ];
}

/** Cuts to the width with an ellipsis that the terminal can show. */
function respell(of: Line, ellipsis: string, columns: number): Line {
  return fitLine(of, columns).map((one) => ({ ...one, text: one.text.replaceAll('…', ellipsis) }));
}
