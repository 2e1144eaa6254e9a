import { benchEdit } from './edit';
import { benchKernels } from './kernels';
import { compileReference } from './reference';
import { benchScaling } from './scaling';
import { benchStart } from './start';
import { benchWait } from './wait';
import { waterBox } from './water';

/** What stands beside the kernels; `--only` names one of these, or kernels. */
const OTHERS = ['scaling', 'start', 'edit', 'wait'];
/** A start takes a tenth of a second, and differs from the next by a tenth of it. */
const STARTS_A_ROUND = 3;

export interface BenchFiles {
  /** For what is compiled and written. */
  readonly folder: string;
  readonly reference: string;
  readonly emptyServer: string;
}

/** Runs what is asked for and prints it; false where results differ, never because something is slow. */
export async function runBench(files: BenchFiles, args: readonly string[]): Promise<boolean> {
  const { folder } = files;
  const option = (name: string) => args.find((arg) => arg.startsWith(`--${name}=`))?.slice(name.length + 3);
  const rounds = Math.max(1, Number(option('rounds') ?? 9));
  const only = (option('only') ?? '').toLowerCase();
  const others = OTHERS.filter((name) => name.includes(only));
  const withKernels = only === '' || others.length === 0;
  const small = waterBox(100_000);
  const large = args.includes('--small') || !(withKernels || others.includes('scaling')) ? null : waterBox(1_000_000);
  let agrees = true;

  if (withKernels || others.includes('scaling')) {
    const compiled = compileReference(files.reference, folder);
    if ('reason' in compiled) console.log(`Left out: the C reference and every ratio to it (${compiled.reason}).`);
    const program = 'program' in compiled ? compiled.program : null;
    if (withKernels) {
      const boxes = large === null ? [small] : [small, large];
      const isWanted = (name: string) => name.toLowerCase().includes(only);
      agrees = await benchKernels(boxes, folder, program, rounds, isWanted);
    }
    if (large !== null && others.includes('scaling')) await benchScaling([small, large], folder, program, rounds);
  }
  if (others.includes('start')) await benchStart(files.emptyServer, STARTS_A_ROUND * rounds);
  if (others.includes('edit')) agrees = (await benchEdit(small, rounds)) && agrees;
  if (others.includes('wait')) await benchWait(small, rounds);
  console.log(`\nMost memory the bench itself held: ${(process.resourceUsage().maxRSS / 1024).toFixed(0)} MB.`);
  return agrees;
}
