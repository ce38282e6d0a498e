import * as vscode from 'vscode';
import { LanguageClient, ServerOptions } from 'vscode-languageclient/node';

let client: LanguageClient | undefined;

/** Starts the server; a program that is not there is said once, with the way out. */
async function start(): Promise<void> {
  const command = vscode.workspace.getConfiguration('wellposed').get<string[]>('command', ['wellposed', 'serve']);
  const server: ServerOptions = { command: command[0], args: command.slice(1) };
  client = new LanguageClient('wellposed', 'wellposed', server, {
    documentSelector: [{ language: 'bayes' }, { pattern: '**/wellposed.toml' }],
    synchronize: {
      configurationSection: 'wellposed',
      fileEvents: vscode.workspace.createFileSystemWatcher('**/*.{bayes,csv,toml}'),
    },
  });
  try {
    await client.start();
  } catch (problem) {
    client = undefined;
    const settings = 'Open settings';
    const chosen = await vscode.window.showErrorMessage(
      `wellposed could not be started as "${command.join(' ')}": ${problem}. Install it, or say where it is.`, settings);
    if (chosen === settings) {
      await vscode.commands.executeCommand('workbench.action.openSettings', 'wellposed.command');
    }
  }
}

export async function activate(context: vscode.ExtensionContext): Promise<void> {
  context.subscriptions.push(
    vscode.commands.registerCommand('wellposed.restart', async () => {
      await client?.stop();
      await start();
    }),
    { dispose: () => void client?.stop() },
  );
  await start();
}

export function deactivate(): Thenable<void> | undefined {
  return client?.stop();
}
