/**
 * What a screen is and what the terminal UI remembers, as plain data with a few pure steps. Screens and the app build on it.
 */
import type { Finding } from '../model/finding.ts';
import type { Line, Size } from './frame.ts';
import type { Glyphs } from './glyphs.ts';
import type { Views } from './views.ts';

export const SCREEN_NAMES = [
  'assembly',
  'joint',
  'history',
  'cases',
  'deviation',
  'swap',
  'register',
  'findings',
] as const;
export type ScreenName = (typeof SCREEN_NAMES)[number];

/** What one screen remembers: which row is chosen, whether it is opened, how far it is scrolled, and what it alone needs. */
export interface ScreenState {
  readonly chosen: number;
  /** How deep the chosen thing is opened: 0 the list, 1 the thing, 2 a part of it. */
  readonly depth: number;
  /** Row chosen inside the opened thing. */
  readonly inner: number;
  /** First line in sight of an opened page of text. */
  readonly scroll: number;
  /** Text typed to find something. */
  readonly typed: string;
  readonly typing: boolean;
  /** Part of the axis in sight, for the deviation screen. */
  readonly from: number;
  readonly to: number;
  readonly logValue: boolean;
  /** Leave out the rows that matter to nobody outside. */
  readonly narrow: boolean;
  /** Names of rows taken together. */
  readonly taken: readonly string[];
}

export const FRESH: ScreenState = {
  chosen: 0,
  depth: 0,
  inner: 0,
  scroll: 0,
  typed: '',
  typing: false,
  from: 0,
  to: 1,
  logValue: false,
  narrow: false,
  taken: [],
};

/** Something that the screens ask of the program around them. */
export type Wish =
  | { readonly do: 'leave' }
  | { readonly do: 'edit'; readonly finding: Finding }
  | { readonly do: 'accept'; readonly finding: Finding; readonly reason: string }
  | { readonly do: 'run cases'; readonly names: readonly string[] }
  | { readonly do: 'exchange'; readonly words: readonly string[] }
  | { readonly do: 'end job' }
  | { readonly do: 'record'; readonly name: string; readonly reason: string }
  | { readonly do: 'write file'; readonly name: string; readonly text: string }
  | { readonly do: 'clipboard'; readonly text: string }
  | { readonly do: 'read again' };

/** A line at the foot that asks for words or for a yes, and what is done with the answer. */
export interface Question {
  readonly asks: string;
  readonly answer: string;
  /** `words`: any text; `yes`: only the word yes goes on. */
  readonly wants: 'words' | 'yes';
  /** What is wished then, or why that can't be. */
  readonly wish: (answer: string) => Wish | { readonly says: string };
}

export interface App {
  readonly views: Views;
  readonly screen: ScreenName;
  readonly trail: readonly ScreenName[];
  readonly states: Readonly<Record<ScreenName, ScreenState>>;
  readonly keysShown: boolean;
  readonly question: Question | null;
  /** A line about what was just done or could not be. */
  readonly message: string;
}

export interface ScreenOptions {
  readonly glyphs: Glyphs;
  readonly colour: boolean;
}

/** A key as the terminal names it: a printable character, or one of these. */
export type Key =
  | { readonly character: string }
  | {
      readonly named:
        | 'up'
        | 'down'
        | 'left'
        | 'right'
        | 'page-up'
        | 'page-down'
        | 'home'
        | 'end'
        | 'enter'
        | 'back'
        | 'rub-out';
    };

/** What a screen is: how many rows can be chosen, what it draws, what its own keys do. */
export interface Screen {
  readonly letter: string;
  /** Rows that can be chosen in the state it is in. */
  count(views: Views, state: ScreenState): number;
  draw(views: Views, state: ScreenState, size: Size, glyphs: Glyphs): readonly Line[];
  /** Its own keys with what each does, for the foot and the overlay. */
  keys(views: Views, state: ScreenState): readonly (readonly [string, string])[];
  /** The whole of what is opened when it is a page of text, which the app scrolls; null when it is not. */
  page?(views: Views, state: ScreenState, columns: number): readonly Line[] | null;
  /** What is shown as a table for a CSV file, the heads first. */
  table?(views: Views, state: ScreenState): readonly (readonly string[])[];
  /** What is opened as an SVG drawing; null when it is nothing that can be drawn. */
  drawing?(views: Views, state: ScreenState): string | null;
  /** Undefined when the key means nothing here. */
  press?(app: App, state: ScreenState, key: Key): Pressed | undefined;
}

export interface Pressed {
  readonly app: App;
  readonly wishes: readonly Wish[];
}

export function ask(app: App, question: Question): Pressed {
  return still({ ...app, question });
}

export function still(app: App): Pressed {
  return { app, wishes: [] };
}

export function goTo(app: App, screen: ScreenName, change: Partial<ScreenState> = {}): App {
  const trail = app.screen === screen ? app.trail : [...app.trail, app.screen];
  return withState({ ...app, screen, trail }, change);
}

export function withState(app: App, change: Partial<ScreenState>): App {
  return { ...app, states: { ...app.states, [app.screen]: { ...app.states[app.screen], ...change } } };
}

export function progressBar(done: number, width: number, glyphs: Glyphs): string {
  const full = Math.round(Math.max(0, Math.min(1, done)) * width);
  return glyphs.full.repeat(full) + glyphs.empty.repeat(width - full);
}
