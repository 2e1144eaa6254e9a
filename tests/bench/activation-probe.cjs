// Runs inside a fresh extension host: how long each of the extensions named takes to activate, ms, in the order given.
const { appendFileSync } = require('node:fs');
const vscode = require('vscode');

exports.run = async () => {
  const times = {};
  for (const id of process.env.POLEWISE_ACTIVATE.split(' ')) {
    const extension = vscode.extensions.getExtension(id);
    if (extension.isActive) throw new Error(`${id} is active already`);
    const begin = performance.now();
    await extension.activate();
    times[id] = performance.now() - begin;
  }
  appendFileSync(process.env.POLEWISE_REPORT, `${JSON.stringify(times)}\n`);
};
