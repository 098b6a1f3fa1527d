/** The screens on 10,000 findings, without a code behind them: started in a pseudo-terminal by the benchmark. */
import { UNICODE } from '../../src/screens/glyphs.ts';
import { openScreens } from '../../src/screens/open-screens.edge.ts';
import type { Views } from '../../src/screens/views.ts';
import { sampleViews } from './sample-views.ts';

const [{ finding }] = sampleViews.findings as [Views['findings'][number]];
const views: Views = {
  ...sampleViews,
  findings: Array.from({ length: 10_000 }, (_, index) => ({
    finding: { ...finding, says: `finding ${index} of a long list` },
    accepted: null,
  })),
};

await openScreens(
  {
    views: () => views,
    over: false,
    subscribe: () => () => {},
    fulfil: async () => '',
    editor: () => ['true'],
  },
  { glyphs: UNICODE, colour: true },
);
