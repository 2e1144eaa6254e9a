import { describe, expect, it } from 'vitest';
import { additivePolarizability, componentOf } from '../../server/src/physics/additive-polarizability';
import { atomicNumberOf } from '../../server/src/physics/elements';
import { fragmentGraph } from '../../server/src/physics/fragment-graph';
import { geometryOf } from './data/geometry';
import { MOLECULES } from './data/molecules';
import { markdownTable, printIfAsked } from './markdown';

function estimate(atoms: string) {
  const { count, elements, positionsA } = geometryOf(atoms);
  const result = additivePolarizability(fragmentGraph(count, elements, positionsA), elements, 0);
  if (!result.ok) throw new Error(result.reason);
  return result;
}

/** Whether additive components can be expected to do: a molecule of H, C, N, O, F, S, Cl, Br, I with carbon. */
const isOrganic = (atoms: string) => /\bC /.test(atoms) && !/\b(Si|B|P|Li|Na|K|Al) /.test(atoms);

describe('mean polarizabilities by sum of components against published ones', () => {
  const rows = MOLECULES.flatMap(({ name, polarizabilityA3: published, polarizabilityRead, atoms }) => {
    if (published === null || /\b(Li|Na|K|Al) /.test(atoms)) return [];
    const own = estimate(atoms).polarizabilityA3;
    return [{ name, published, polarizabilityRead, own, error: own / published - 1, organic: isOrganic(atoms) }];
  });
  const lists = {
    'with carbon, published value read': rows.filter((row) => row.organic && row.polarizabilityRead),
    'with carbon, published value from memory': rows.filter((row) => row.organic && !row.polarizabilityRead),
    'without carbon': rows.filter((row) => !row.organic),
  };
  const mean = (list: typeof rows) => list.reduce((sum, row) => sum + Math.abs(row.error), 0) / list.length;
  const median = (list: typeof rows) => list.map((row) => Math.abs(row.error)).sort((a, b) => a - b)[list.length >> 1]!;
  const percent = (value: number) => `${(100 * value).toFixed(0).replace('-', '−')} %`;

  printIfAsked('Polarizability volumes', () =>
    markdownTable(
      ['molecules', 'number', 'mean error', 'median', 'worst'],
      Object.entries(lists).map(([title, list]) => {
        const worst = list.reduce((one, two) => (Math.abs(two.error) > Math.abs(one.error) ? two : one));
        return [
          title,
          `${list.length}`,
          percent(mean(list)),
          percent(median(list)),
          `${worst.name} ${percent(worst.error)}`,
        ];
      }),
    ),
  );

  it.each([
    ['with carbon, published value read', 20, 0.045, 0.13],
    ['with carbon, published value from memory', 20, 0.08, 0.45],
    ['without carbon', 12, 0.14, 0.5],
  ] as const)('%s', (title, number, average, most) => {
    const list = lists[title];
    expect(list.length).toBeGreaterThanOrEqual(number);
    expect(mean(list)).toBeLessThan(average);
    for (const row of list) expect(Math.abs(row.error), row.name).toBeLessThan(most);
  });
});

describe('components', () => {
  const components = (atoms: string) => {
    const { count, elements, positionsA } = geometryOf(atoms);
    const graph = fragmentGraph(count, elements, positionsA);
    return Array.from(elements, (_, atom) => componentOf(graph, elements, atom));
  };
  const named = (name: string) => MOLECULES.find((row) => row.name === name)!.atoms;

  it.each([
    ['methane', 2.609],
    ['ethane', 4.444],
    ['benzene', 10.434],
    ['water', 1.411],
    ['ammonia', 2.125],
    ['methanol', 3.246],
    ['ethene', 4.252],
  ])('%s: %d A3, as the components of Miller 1990 add up', (name, sum) => {
    expect(estimate(named(name)).polarizabilityA3).toBeCloseTo(sum, 10);
  });
  it('tells lone pairs in a ring from those outside', () => {
    expect(components(named('furan'))[0]).toBe('OPI2');
    expect(components(named('thiophene'))[0]).toBe('SPI2');
    expect(components(named('dimethyl ether'))).toContain('OTE');
    expect(components(named('pyridine'))[0]).toBe('NTR2');
    expect(components(named('pyrrole'))).toContain('NPI2');
    expect(components(named('acetamide'))).toContain('NPI2');
    expect(components(named('methylamine'))).toContain('NTE');
    expect(components(named('acetonitrile'))).toContain('NDI');
  });
  it('gives ions and noble gases their own', () => {
    const lone = (symbol: string, chargeE: number) => {
      const elements = [atomicNumberOf(symbol)];
      return additivePolarizability(fragmentGraph(1, elements, new Float64Array(3)), elements, chargeE);
    };
    expect(lone('Na', 1)).toEqual({ ok: true, polarizabilityA3: 0.179, source: 'atom' });
    expect(lone('Ar', 0)).toMatchObject({ polarizabilityA3: 1.642 });
    expect(lone('Na', 0).ok).toBe(false);
    expect(lone('Fe', 2).ok).toBe(false);
  });
  it('says where a component is not Miller’s, and refuses elements without one', () => {
    expect(estimate(named('silane'))).toMatchObject({ source: 'left over' });
    const { count, elements, positionsA } = geometryOf('Zn 0 0 0; Cl 2.1 0 0; Cl -2.1 0 0');
    expect(additivePolarizability(fragmentGraph(count, elements, positionsA), elements, 0).ok).toBe(false);
    expect(additivePolarizability(fragmentGraph(0, [], new Float64Array(0)), [], 0).ok).toBe(false);
  });
});
