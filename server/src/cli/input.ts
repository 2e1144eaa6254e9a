import { readFile } from 'node:fs/promises';
import { promisify } from 'node:util';
import { gunzip } from 'node:zlib';
import { languageOfName, parse } from '../formats/parse';
import type { CoordinateTree, Language } from '../formats/tree';
import { snapshotOfBytes } from '../text/snapshot';

/** A message for the person at the terminal; the command ends with status 2 for the file or as a whole. */
export class UsageError extends Error {}

const unzip = promisify(gunzip);

/** Reads a file, standard input for `-`, and gunzips what begins like a gzip file. */
async function readBytes(name: string): Promise<Uint8Array> {
  let bytes: Uint8Array;
  if (name === '-') {
    const chunks: Buffer[] = [];
    for await (const chunk of process.stdin) chunks.push(chunk as Buffer);
    bytes = Buffer.concat(chunks);
  } else {
    bytes = await readFile(name).catch((error: NodeJS.ErrnoException) => {
      const reasons: Record<string, string> = {
        ENOENT: 'there is no such file',
        EACCES: 'no permission to read it',
        EISDIR: 'it is a folder',
      };
      throw new UsageError(`${name}: cannot be read: ${reasons[error.code ?? ''] ?? error.message}`);
    });
  }
  if (bytes[0] !== 0x1f || bytes[1] !== 0x8b) return bytes;
  return unzip(bytes).catch(() => {
    throw new UsageError(`${name}: cannot be read: the gzip data are damaged`);
  });
}

/** Reads and parses a coordinate file. Throws {@link UsageError} where it cannot be read or its language is not known. */
export async function readCoordinates(name: string, asked: Language | undefined): Promise<CoordinateTree> {
  const language = asked ?? languageOfName(name);
  if (language === undefined) {
    const what = name === '-' ? 'standard input' : `${name}: its ending tells no format`;
    throw new UsageError(`${what}: say --language xyz or --language pdb`);
  }
  return parse(snapshotOfBytes(await readBytes(name)), language);
}
