// What the bundles for a browser need of esbuild beyond those for Node.

/**
 * Throws where a bundle would ask for a module when it runs (a browser has none of Node's) or holds an empty one in its place, naming who
 * wants it. What esbuild leaves out of the bundle may want what it likes.
 *
 * @param given modules that the place where it runs gives
 */
export function refuseMissing({ inputs, outputs }, given = []) {
  const wanted = new Set();
  for (const output of Object.values(outputs)) {
    const isIn = (path) => (output.inputs[path]?.bytesInOutput ?? 0) > 0;
    const missing = [
      ...output.imports.map(({ path }) => path).filter((path) => !given.includes(path)),
      ...Object.keys(output.inputs).filter((path) => path.startsWith('(disabled):') && isIn(path)),
    ];
    for (const module of missing) {
      const importers = Object.keys(inputs).filter(
        (path) => isIn(path) && inputs[path].imports.some(({ path }) => path === module),
      );
      wanted.add(`${importers.join(', ') || 'the bundle'} wants ${module.replace('(disabled):', '')}`);
    }
  }
  if (wanted.size > 0) throw new Error(`no browser has it: ${[...wanted].join('; ')}`);
}

/**
 * Takes the evaluator of units into the bundle, but runs it at its first call alone. A worker cannot load it later as Node does: it is
 * started from a blob, and does not know where it came from.
 *
 * @param units the evaluator bundled by itself, as CommonJS: of a module that is run later, esbuild leaves out nothing
 */
export const sleepingUnits = (units) => ({
  name: 'sleeping-units',
  setup({ onResolve, onLoad }) {
    const namespace = 'sleeping-units';
    onResolve({ filter: /^sleeping-units$/ }, ({ path }) => ({ path, namespace }));
    onLoad({ filter: /.*/, namespace }, () => ({ contents: units, loader: 'js' }));
    onLoad({ filter: /[\\/]unit-evaluator\.ts$/ }, () => ({
      contents: `export const createUnitEvaluator = () => require('sleeping-units').createUnitEvaluator();`,
      loader: 'js',
    }));
  },
});
