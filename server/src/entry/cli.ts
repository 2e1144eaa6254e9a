import { runCommandLine } from '../cli/program';

const INTERRUPTED = 130;

process.on('SIGINT', () => process.exit(INTERRUPTED));
// Whoever reads our output may stop reading; that is no error of ours.
process.stdout.on('error', (error: NodeJS.ErrnoException) => {
  process.exit(error.code === 'EPIPE' ? 0 : 2);
});

runCommandLine(process.argv.slice(2)).then(
  (status) => {
    process.exitCode = status;
  },
  (error: Error & { code?: string }) => {
    if (error.code === 'EPIPE') process.exit(0);
    process.stderr.write(`polewise: ${error.stack ?? error.message}\n`);
    process.exit(2);
  },
);
