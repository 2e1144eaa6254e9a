import { readFileSync, writeFileSync } from 'node:fs';
import { generatedSections, type Manifest, replaceSections } from '../cli/docs';

// `docs.cjs [--check] FILE`: brings the generated parts of a document up to date, or fails where they are not.
const check = process.argv.includes('--check');
const file = process.argv.slice(2).find((word) => word !== '--check') ?? 'README.md';
const before = readFileSync(file, 'utf8');
const manifest = JSON.parse(readFileSync('package.json', 'utf8')) as Manifest;
const after = replaceSections(before, generatedSections(manifest));
if (before === after) process.stdout.write(`${file} is up to date\n`);
else if (check) {
  process.stderr.write(`${file} differs from the tables it is made from; run npm run docs\n`);
  process.exit(1);
} else {
  writeFileSync(file, after);
  process.stdout.write(`${file} updated\n`);
}
