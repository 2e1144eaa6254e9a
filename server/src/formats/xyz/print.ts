/** An atom to be written. */
export interface PrintableAtom {
  readonly symbol: string;
  /** x, y, z, Å. */
  readonly positionA: readonly number[];
  /** Partial charge, e; `null` for all atoms where there is no charge column. */
  readonly chargeE: number | null;
  /** Atomic dipole, e·Å; none where there is no such column. */
  readonly dipoleEA?: readonly number[] | null;
  /** Number of the fragment. */
  readonly fragment: number;
}

const DECIMALS = 8;

/** Eight decimals where they give the number back exactly, else as many digits as it takes. */
function written(value: number): string {
  const short = value.toFixed(DECIMALS);
  if (Object.is(value, -0)) return `-${short}`;
  return Number(short) === value ? short : String(value);
}

/**
 * Prints one frame of extended XYZ: what is read back from it equals what was given, to the last bit. `keys` are written as
 * `key=value`, quoted where they hold a blank; `note` is free text before them.
 */
export function printXyzFrame(
  atoms: readonly PrintableAtom[],
  keys: readonly (readonly [key: string, value: string])[],
  note: string,
): string {
  const hasCharges = atoms.every((atom) => atom.chargeE !== null);
  const hasDipoles = atoms.every(({ dipoleEA }) => dipoleEA != null);
  const columns = `${hasCharges ? ':charge:R:1' : ''}${hasDipoles ? ':dipoles:R:3' : ''}`;
  const properties = `species:S:1:pos:R:3${columns}:fragment:I:1`;
  const pairs = [['Properties', properties] as const, ...keys].map(([key, value]) =>
    /[\s,=]/.test(value) && !value.includes(':S:') ? `${key}="${value}"` : `${key}=${value}`,
  );
  const lines = atoms.map(({ symbol, positionA, chargeE, dipoleEA, fragment }) =>
    [
      symbol.padEnd(3),
      ...positionA.map((value) => written(value).padStart(16)),
      ...(hasCharges ? [written(chargeE!).padStart(13)] : []),
      ...(hasDipoles ? dipoleEA!.map((value) => written(value).padStart(13)) : []),
      String(fragment).padStart(3),
    ].join(' '),
  );
  return [String(atoms.length), [note, ...pairs].join(' ').trim(), ...lines, ''].join('\n');
}
