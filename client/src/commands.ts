import { commands, type Disposable, window } from 'vscode';
import type { BaseLanguageClient } from 'vscode-languageclient';
import { WRITE_DIMERS_COMMAND } from '../../server/src/lsp/protocol';
import type * as acting from './acting';

type Acting = typeof acting;

/** What each command runs. What it takes is loaded at the first call: a start need not wait for it. */
const COMMANDS: Readonly<
  Record<string, (acts: Acting, client: BaseLanguageClient, argument: unknown) => Promise<void>>
> = {
  [WRITE_DIMERS_COMMAND]: ({ writeDimers }, client, argument) => writeDimers(client, argument),
  'polewise.copyPairTable': ({ copyPairTable }, client, argument) => copyPairTable(client, argument),
  'polewise.insertHeader': ({ insertHeader }, client, argument) => insertHeader(client, argument),
  'polewise.addDipoles': ({ addDipoles }, client, argument) => addDipoles(client, argument),
  'polewise.chooseTemperature': ({ chooseTemperature }, client, argument) => chooseTemperature(client, argument),
  'polewise.chooseMedium': ({ chooseMedium }, client, argument) => chooseMedium(client, argument),
  'polewise.explain': ({ explain }) => explain(),
  'polewise.openSample': ({ openSample }) => openSample(),
};

/** Registers the commands; one that fails says why. */
export function registerCommands(client: BaseLanguageClient): Disposable[] {
  return Object.entries(COMMANDS).map(([name, run]) =>
    commands.registerCommand(name, async (argument: unknown) => {
      try {
        await run(await import('./acting'), client, argument);
      } catch (error) {
        void window.showErrorMessage(`Polewise: ${(error as Error).message}`);
      }
    }),
  );
}
