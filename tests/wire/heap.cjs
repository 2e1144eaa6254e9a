// Loaded into the server's process before the server, with --expose-gc: at each message it collects what is garbage and answers with
// the bytes still held. `external` already has the array buffers in it.
process.on('message', async () => {
  // Several times, with turns between: a finalizer, or a promise that waits, lets go of more.
  for (let pass = 0; pass < 4; pass++) {
    globalThis.gc();
    await new Promise((resolve) => setImmediate(resolve));
  }
  const { heapUsed, external } = process.memoryUsage();
  process.send(heapUsed + external);
});
