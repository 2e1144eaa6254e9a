// Stands in for a desktop build of VS Code: takes the arguments that @vscode/test-electron gives to one, runs the same test suite in
// the extension host of the rig's server, and ends with the suite's status.
import { ensureRig, launchBrowser, main, startServer } from './rig.mjs';

const GIVE_UP_AFTER = 400_000;

const option = (name) => process.argv.find((argument) => argument.startsWith(`--${name}=`))?.slice(name.length + 3);

await main(async (atEnd) => {
  const folder = process.argv.slice(2).find((argument) => !argument.startsWith('--'));
  const rig = await ensureRig();
  const server = await startServer(rig, { user: option('user-data-dir'), extensions: option('extensions-dir') });
  atEnd(() => server.stop());
  const browser = await launchBrowser(rig);
  atEnd(() => browser.close());
  const page = await (await browser.newContext({ locale: 'en-US' })).newPage();

  const remote = (file) => `vscode-remote://127.0.0.1:${server.port}${file}`;
  const payload = JSON.stringify(
    ['extensionDevelopmentPath', 'extensionTestsPath'].map((key) => [key, remote(option(key))]),
  );
  const query = new URLSearchParams({ folder, payload });
  const ended = new Promise((resolve, reject) => {
    const giveUp = setTimeout(() => reject(new Error('the suite did not end in time')), GIVE_UP_AFTER);
    const end = (code) => {
      clearTimeout(giveUp);
      resolve(code);
    };
    // The suite writes its own report; the rest is the editor's talk.
    void page.exposeFunction('codeAutomationLog', (type, args) => {
      if (process.env.POLEWISE_VERBOSE) console.log(`[${type}]`, ...args);
    });
    void page.exposeFunction('codeAutomationExit', end);
    page.on('crash', () => end(1));
  });
  await page.goto(`${server.url}?${query}`);
  return ended;
});
