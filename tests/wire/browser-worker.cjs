// Runs a script as a web worker of a browser does: it has what every worker has, and nothing of Node.
const { readFileSync } = require('node:fs');
const vm = require('node:vm');
const { parentPort, workerData } = require('node:worker_threads');

/** Delivers each message in a turn of its own, as browsers do; Node's goes on with up to a thousand before anything else has its turn. */
class TurningChannel {
  constructor() {
    this.port1 = { onmessage: null };
    this.port2 = { postMessage: (data) => void setImmediate(() => this.port1.onmessage?.({ data })) };
  }
}

const scope = {
  onmessage: null,
  addEventListener: () => {},
  postMessage: (message) => parentPort.postMessage(message),
  close: () => process.exit(0),
  MessageChannel: TurningChannel,
  ...{ TextDecoder, TextEncoder, btoa, console, performance, queueMicrotask },
  ...{ clearInterval, clearTimeout, setInterval, setTimeout },
};
scope.self = scope;
vm.runInContext(readFileSync(workerData, 'utf8'), vm.createContext(scope), { filename: workerData });
parentPort.on('message', (data) => scope.onmessage?.({ data }));
