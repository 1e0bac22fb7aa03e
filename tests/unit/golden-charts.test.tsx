import { renderToStaticMarkup } from 'react-dom/server';
import { describe, expect, it } from 'vitest';
import { zoneRules } from '../../shared/local-time.ts';
import { LanesChart } from '../../src/charts/lanes-chart.tsx';
import { layoutLanes, type Visit } from '../../src/charts/lanes-layout.ts';
import { SectionChart } from '../../src/charts/section-chart.tsx';
import { layoutSection, type Basin } from '../../src/charts/section-layout.ts';
import { shortened } from '../../src/charts/shortened.ts';
import { roundedSvg } from '../support/rounded-svg.ts';

const basin = (id: number, name: string, given: Partial<Basin> = {}): Basin => ({
  id,
  name,
  place: id,
  level: 10,
  inProcess: 4,
  mean: 12,
  peak: 20,
  cap: null,
  perDay: 24,
  ...given,
});

function sectionPicture(basins: readonly Basin[], width: number, scale: 'shared' | 'own'): string {
  const section = layoutSection(basins, width, scale);
  return roundedSvg(
    renderToStaticMarkup(
      <SectionChart
        section={section}
        width={width}
        formatAmount={String}
        formatRate={String}
        below={(id) => ({
          lines: [`${id} h`, `P85 ${2 * id} h`],
          levels: [1, 2, null, 4, 3],
        })}
        wrap={(drawn, picture) => <a href={`#${drawn.id}`}>{picture}</a>}
      />,
    ),
  );
}

describe('the section of a site', () => {
  it('with a full basin, a cap, an unknown split and an empty one', async () => {
    const basins = [
      basin(1, 'Receiving'),
      basin(2, 'Strip-down', { level: 60, inProcess: 6, mean: 50, peak: 62 }),
      basin(3, 'Cleaning', { inProcess: null, cap: 18 }),
      basin(4, 'Dispatch', { level: 0, inProcess: 0 }),
    ];
    await expect(sectionPicture(basins, 700, 'shared')).toMatchFileSnapshot(
      './golden/section-shared.svg',
    );
    await expect(sectionPicture(basins, 700, 'own')).toMatchFileSnapshot(
      './golden/section-own.svg',
    );
  });

  it('with areas side by side, in rows', async () => {
    const basins = Array.from({ length: 9 }, (_, index) =>
      basin(index + 1, `Work centre number ${index + 1}`, { place: index < 3 ? 1 : index }),
    );
    await expect(sectionPicture(basins, 420, 'shared')).toMatchFileSnapshot(
      './golden/section-side-by-side.svg',
    );
  });

  it('of sixty areas stays within the width, and its basins apart', () => {
    const basins = Array.from({ length: 60 }, (_, index) => basin(index + 1, `Area ${index + 1}`));
    const { basins: drawn, compact, height, rowHeight } = layoutSection(basins, 1130, 'shared');
    expect(compact).toBe(true);
    expect(drawn).toHaveLength(60);
    expect(height).toBeLessThanOrEqual(6 * rowHeight);
    for (const [index, each] of drawn.entries()) {
      expect(each.x).toBeGreaterThanOrEqual(0);
      expect(each.x + each.width).toBeLessThanOrEqual(1130);
      expect(each.width).toBeGreaterThan(48);
      const before = drawn[index - 1];
      if (before?.floor === each.floor)
        expect(each.x - (before.x + before.width)).toBeGreaterThan(20);
    }
  });
});

const at = (text: string) => Date.parse(text);
const visit = (id: string, lane: string, given: Partial<Visit>): Visit => ({
  id,
  lane,
  entered: at('2026-10-24T06:00Z'),
  started: at('2026-10-24T08:00Z'),
  left: at('2026-10-24T10:00Z'),
  pass: 1,
  ...given,
});

const lanesPicture = (visits: readonly Visit[], until: string): string =>
  roundedSvg(
    renderToStaticMarkup(
      <LanesChart
        lanes={layoutLanes(visits, at(until), 600, zoneRules('Europe/Dublin'))}
        width={728}
        formatTick={(moment, withTime) =>
          new Date(moment).toISOString().slice(withTime ? 11 : 0, withTime ? 16 : 10)
        }
        wrap={(drawn, picture) => <a href={`#${drawn.id}`}>{picture}</a>}
      />,
    ),
  );

describe('the way of a job in lanes', () => {
  it('with waiting, a return, an unknown split, and an open end over the clock change', async () => {
    const visits = [
      visit('a', 'Sawing', {}),
      visit('b', 'Turning', {
        entered: at('2026-10-24T10:00Z'),
        started: null,
        left: at('2026-10-25T04:00Z'),
      }),
      visit('c', 'Sawing', {
        entered: at('2026-10-25T04:00Z'),
        started: at('2026-10-25T04:00Z'),
        left: at('2026-10-25T05:00Z'),
      }),
      visit('d', 'Grinding', {
        entered: at('2026-10-25T05:00Z'),
        started: at('2026-10-25T09:00Z'),
        left: null,
      }),
    ];
    await expect(lanesPicture(visits, '2026-10-26T00:00Z')).toMatchFileSnapshot(
      './golden/lanes-return.svg',
    );
  });

  it('of one visit', async () => {
    await expect(lanesPicture([visit('a', 'Sawing', {})], '2026-10-25T00:00Z')).toMatchFileSnapshot(
      './golden/lanes-one.svg',
    );
  });

  it('in two passes over a year', async () => {
    const visits = [
      visit('a', 'Sawing', {}),
      visit('b', 'Sawing', {
        entered: at('2027-09-01T00:00Z'),
        started: at('2027-09-02T00:00Z'),
        left: at('2027-09-03T00:00Z'),
        pass: 2,
      }),
    ];
    await expect(lanesPicture(visits, '2027-10-01T00:00Z')).toMatchFileSnapshot(
      './golden/lanes-passes.svg',
    );
  });

  it('of two hundred visits draws each wide enough to be seen', () => {
    const visits = Array.from({ length: 200 }, (_, index) =>
      visit(String(index), `Area ${index % 20}`, {
        entered: at('2026-10-24T06:00Z') + index * 3_600_000,
        started: at('2026-10-24T06:00Z') + index * 3_600_000,
        left: at('2026-10-24T06:01Z') + index * 3_600_000,
      }),
    );
    const lanes = layoutLanes(visits, 0, 600, zoneRules('Europe/Dublin'));
    expect(lanes.names).toHaveLength(20);
    expect(Math.min(...lanes.visits.map(({ width }) => width))).toBeGreaterThanOrEqual(3);
    expect(lanes.visits.at(-1)?.visit).toBe(10);
  });
});

describe('a name that is too long', () => {
  it.each([
    ['Saw', 5, 'Saw'],
    ['Work centre 16', 10, 'Work c… 16'],
    ['Receiving', 4, 'Rec…'],
  ])('%s in %d characters is %s', (name, most, expected) => {
    expect(shortened(name, most)).toBe(expected);
    expect(shortened(name, most).length).toBeLessThanOrEqual(most);
  });
});
