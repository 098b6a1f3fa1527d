/** The screens by name. The letter that goes to each is the first of its name. */
import { assemblyScreen } from './assembly-screen.ts';
import { casesScreen } from './cases-screen.ts';
import { deviationScreen } from './deviation-screen.ts';
import { findingsScreen } from './findings-screen.ts';
import { historyScreen } from './history-screen.ts';
import { jointScreen } from './joint-screen.ts';
import { registerScreen } from './register-screen.ts';
import type { Screen, ScreenName } from './screen.ts';
import { swapScreen } from './swap-screen.ts';

export const SCREENS: Readonly<Record<ScreenName, Screen>> = {
  assembly: assemblyScreen,
  joint: jointScreen,
  history: historyScreen,
  cases: casesScreen,
  deviation: deviationScreen,
  swap: swapScreen,
  register: registerScreen,
  findings: findingsScreen,
};
