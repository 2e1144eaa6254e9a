/** The fields of an atom record, as they stand in their columns. */
export interface PdbFields {
  record?: string;
  serial?: string;
  name?: string;
  alt?: string;
  residue?: string;
  chain?: string;
  number?: string;
  insertion?: string;
  x?: number;
  y?: number;
  z?: number;
  occupancy?: string;
  b?: string;
  element?: string;
  charge?: string;
}

/** An atom record; texts as they stand in their columns. */
export function pdbRecord(f: PdbFields): string {
  const [x, y, z] = [f.x ?? 0, f.y ?? 0, f.z ?? 0].map((value) => value.toFixed(3).padStart(8));
  return (
    `${(f.record ?? 'ATOM').padEnd(6)}${(f.serial ?? '1').padStart(5)} ${(f.name ?? ' HE ').padEnd(4)}${f.alt ?? ' '}` +
    `${(f.residue ?? 'UNK').padEnd(4)}${f.chain ?? 'A'}${(f.number ?? '1').padStart(4)}${f.insertion ?? ' '}   ${x}${y}${z}` +
    `${(f.occupancy ?? '1.00').padStart(6)}${(f.b ?? '0.00').padStart(6)}          ${(f.element ?? 'HE').padStart(2)}${f.charge ?? '  '}`
  );
}
