/**
 * Named media: the static relative permittivity of a liquid at one temperature.
 *
 * Source of every value: CRC Handbook of Chemistry and Physics (W. M. Haynes ed., 2014), table "Permittivity (Dielectric
 * Constant) of Liquids"; the value holds at the temperature beside it and is used as it stands at every other. `vacuum` is 1
 * by definition.
 *
 * A bulk permittivity is not the screening between two touching molecules: the advice takes ε_r = 1 for those.
 */
export interface Medium {
  readonly name: string;
  readonly otherNames: readonly string[];
  readonly relativePermittivity: number;
  /** Temperature of the tabulated value, K; `null` for vacuum. */
  readonly temperatureK: number | null;
}

type Row = readonly [name: string, otherNames: readonly string[], relativePermittivity: number, temperatureK: number];

const ROWS: readonly Row[] = [
  ['water', ['h2o'], 80.1, 293.2],
  ['methanol', ['meoh'], 33.0, 293.2],
  ['ethanol', ['etoh'], 25.3, 293.2],
  ['1-propanol', [], 20.8, 293.2],
  ['2-propanol', ['isopropanol'], 20.18, 293.2],
  ['1-butanol', [], 17.84, 293.2],
  ['tert-butanol', [], 12.47, 298.2],
  ['ethylene-glycol', [], 41.4, 293.2],
  ['glycerol', [], 46.53, 293.2],
  ['propylene-glycol', [], 27.5, 303.2],
  ['acetone', [], 21.01, 293.2],
  ['2-butanone', ['mek', 'methyl-ethyl-ketone'], 18.56, 293.2],
  ['cyclohexanone', [], 16.1, 293.0],
  ['4-methyl-2-pentanone', [], 13.11, 293.2],
  ['acetonitrile', ['mecn'], 36.64, 293.2],
  ['dimethylformamide', ['dmf'], 38.25, 293.2],
  ['dimethyl-sulfoxide', ['dmso'], 47.24, 293.2],
  ['n-methylpyrrolidone', ['nmp'], 32.55, 293.2],
  ['hexamethylphosphoramide', ['hmpa'], 31.3, 293.2],
  ['formamide', [], 111.0, 293.2],
  ['n-methylformamide', [], 189.0, 293.2],
  ['n-methylacetamide', [], 179.0, 303.2],
  ['acetamide', [], 67.6, 363.7],
  ['nitromethane', [], 37.27, 293.2],
  ['nitrobenzene', [], 35.6, 293.0],
  ['propylene-carbonate', [], 66.14, 293.0],
  ['gamma-butyrolactone', [], 39.0, 293.2],
  ['formic-acid', [], 51.1, 298.2],
  ['acetic-acid', [], 6.2, 293.2],
  ['ethyl-acetate', ['etoac'], 6.0814, 293.2],
  ['methyl-acetate', [], 7.07, 288.2],
  ['dimethyl-ether', [], 6.18, 258.0],
  ['diethyl-ether', ['ether'], 4.2666, 293.2],
  ['tetrahydrofuran', ['thf'], 7.52, 295.2],
  ['1,4-dioxane', ['dioxane'], 2.2189, 293.2],
  ['hexane', ['n-hexane'], 1.8865, 293.2],
  ['pentane', ['n-pentane'], 1.8371, 293.2],
  ['heptane', ['n-heptane'], 1.9209, 293.2],
  ['cyclohexane', [], 2.0243, 293.2],
  ['benzene', [], 2.2825, 293.2],
  ['toluene', [], 2.379, 296.35],
  ['chlorobenzene', [], 5.6895, 293.2],
  ['bromobenzene', [], 5.45, 293.2],
  ['aniline', [], 7.06, 293.2],
  ['phenol', [], 12.4, 303.2],
  ['pyridine', [], 13.26, 293.2],
  ['pyrrole', [], 8.0, 293.0],
  ['furan', [], 2.94, 298.2],
  ['thiophene', [], 2.739, 293.2],
  ['carbon-tetrachloride', ['tetrachloromethane'], 2.2379, 293.2],
  ['chloroform', ['trichloromethane'], 4.8069, 293.2],
  ['dichloromethane', ['dcm', 'methylene-chloride'], 8.93, 298.0],
  ['1,2-dichloroethane', [], 10.42, 293.2],
  ['carbon-disulfide', [], 2.632, 293.2],
  ['ammonia', [], 16.61, 293.2],
  ['hydrogen-sulfide', [], 5.93, 283.2],
  ['sulfur-dioxide', [], 14.3, 293.2],
  ['hydrogen-cyanide', [], 114.9, 293.2],
  ['hydrogen-fluoride', [], 83.6, 273.2],
  ['hydrogen-peroxide', [], 74.6, 290.2],
  ['bromine', [], 3.1484, 297.9],
  ['triethylamine', [], 2.418, 293.2],
  ['methane', [], 1.6761, 91.0],
  ['nitrogen', [], 1.468, 63.15],
  ['argon', [], 1.3247, 140.0],
];

/** Every medium that can be named, vacuum first. */
export const MEDIA: readonly Medium[] = [
  { name: 'vacuum', otherNames: ['gas'], relativePermittivity: 1, temperatureK: null },
  ...ROWS.map(([name, otherNames, relativePermittivity, temperatureK]) => ({
    name,
    otherNames,
    relativePermittivity,
    temperatureK,
  })),
];

const BY_NAME = new Map<string, Medium>();
for (const medium of MEDIA) {
  for (const name of [medium.name, ...medium.otherNames]) BY_NAME.set(name, medium);
}

/** Finds a medium by name; case, blanks and underscores do not matter. */
export function findMedium(name: string): Medium | undefined {
  return BY_NAME.get(
    name
      .trim()
      .toLowerCase()
      .replace(/[\s_]+/g, '-'),
  );
}
