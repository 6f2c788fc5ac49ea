// Starts pintle-server and hands it the sheets. Everything that is known about
// the language is in the server; this file knows the editor only.

import { commands, ExtensionContext, window, workspace } from "vscode";
import { LanguageClient, LanguageClientOptions, ServerOptions } from "vscode-languageclient/node";

let client: LanguageClient | undefined;

export async function activate(context: ExtensionContext): Promise<void> {
  context.subscriptions.push(
    commands.registerCommand("pintle.restartServer", restart),
    workspace.onDidChangeConfiguration(async (event) => {
      if (event.affectsConfiguration("pintle.server")) {
        await restart();
      }
    }),
  );
  await start();
}

export async function deactivate(): Promise<void> {
  await stop();
}

async function start(): Promise<void> {
  const settings = workspace.getConfiguration("pintle.server");
  const command = settings.get<string>("path") || "pintle-server";
  const log = settings.get<string>("log");
  // No transport is named: the server talks on standard input and output anyway.
  const server: ServerOptions = { command, args: log ? ["--log", log] : [] };
  const options: LanguageClientOptions = {
    // Sheets that are not saved yet have results too.
    documentSelector: [
      { scheme: "file", language: "pintle" },
      { scheme: "untitled", language: "pintle" },
    ],
  };
  client = new LanguageClient("pintle", "Pintle", server, options);
  try {
    await client.start();
  } catch (error) {
    client = undefined;
    const words = error instanceof Error ? error.message : String(error);
    void window.showErrorMessage(
      `The Pintle language server \`${command}\` does not start: ${words}. ` +
        "Install it, or set `pintle.server.path`. Colours work without it.",
    );
  }
}

async function stop(): Promise<void> {
  const running = client;
  client = undefined;
  if (running) {
    await running.dispose();
  }
}

async function restart(): Promise<void> {
  await stop();
  await start();
}
