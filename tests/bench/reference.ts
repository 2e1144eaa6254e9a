import { type ChildProcess, spawn, spawnSync } from 'node:child_process';
import { join } from 'node:path';
import { createInterface } from 'node:readline';

export interface Measured {
  readonly seconds: number;
  readonly checksum: number;
}

/** Compiles the C reference; the reason where that cannot be done. */
export function compileReference(source: string, folder: string): { program: string } | { reason: string } {
  const program = join(folder, 'reference');
  let reason = 'no C compiler (gcc, clang, cc) was found';
  for (const compiler of [process.env.CC, 'gcc', 'clang', 'cc']) {
    if (!compiler) continue;
    const run = spawnSync(compiler, ['-O3', '-march=native', '-o', program, source, '-lm'], { encoding: 'utf8' });
    if (run.status === 0) return { program };
    if (run.error === undefined) reason = `${compiler} failed: ${run.stderr.slice(0, 300)}`;
  }
  return { reason };
}

/** The reference at work on one folder of data: one question and answer at a time. */
export class Reference {
  readonly #child: ChildProcess;
  readonly #answers: AsyncIterator<string>;

  constructor(program: string, folder: string, withPairs: boolean) {
    this.#child = spawn(program, withPairs ? [folder, 'pairs'] : [folder], { stdio: ['pipe', 'pipe', 'inherit'] });
    this.#answers = createInterface({ input: this.#child.stdout! })[Symbol.asyncIterator]();
  }

  async run(command: string): Promise<Measured> {
    this.#child.stdin!.write(`${command}\n`);
    const answer = await this.#answers.next();
    if (answer.done) throw new Error(`The C reference ended at "${command}".`);
    const [seconds, checksum] = answer.value.split(' ').map(Number);
    return { seconds: seconds!, checksum: checksum! };
  }

  close(): void {
    this.#child.stdin!.end();
  }
}
