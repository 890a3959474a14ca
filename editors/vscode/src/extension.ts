// Starts the language server and gives it what only this editor has: pages of the built-in library, lists of uses, the sheet
// beside the recipe.

import { execFile } from "node:child_process";
import { promisify } from "node:util";

import * as vscode from "vscode";
import { LanguageClient, type LanguageClientOptions, type ServerOptions, type StaticFeature } from "vscode-languageclient/node";

import { LibraryPages, explain } from "./pages";
import { Sheets } from "./sheets";
import { showUses } from "./uses";

let client: LanguageClient | undefined;

export async function activate(context: vscode.ExtensionContext): Promise<void> {
  const running = () => client;
  const sheets = new Sheets(running);
  context.subscriptions.push(
    sheets,
    vscode.workspace.registerTextDocumentContentProvider("scruple-library", new LibraryPages(running)),
    vscode.commands.registerCommand("scruple.showSheet", () => sheets.show()),
    vscode.commands.registerCommand("scruple.showUses", showUses),
    vscode.commands.registerCommand("scruple.explain", explain),
    vscode.commands.registerCommand("scruple.restart", restart),
    vscode.workspace.onDidChangeConfiguration((change) => {
      if (change.affectsConfiguration("scruple.server")) {
        void restart();
      }
    }),
  );
  await start();
}

export async function deactivate(): Promise<void> {
  await client?.stop();
}

async function restart(): Promise<void> {
  await client?.stop().catch(() => undefined);
  await start();
}

async function start(): Promise<void> {
  const settings = vscode.workspace.getConfiguration("scruple.server");
  const command = settings.get("path", "scruple");
  const log = settings.get("log", "");
  try {
    await promisify(execFile)(command, ["--version"]);
  } catch (error) {
    return complain(command, error);
  }
  const server: ServerOptions = { command, args: log === "" ? ["serve"] : ["serve", "--log", log] };
  const options: LanguageClientOptions = {
    documentSelector: [
      { language: "scruple", scheme: "file" },
      { language: "scruple", scheme: "untitled" },
      { language: "scruple", scheme: "scruple-library" },
    ],
    initializationOptions: vscode.workspace.getConfiguration("scruple"),
    markdown: { isTrusted: false },
  };
  client = new LanguageClient("scruple", "scruple", server, options);
  client.registerFeature(announcement);
  await client.start();
}

/** Says why there is no server, and leads to where it can be mended. The rest of the extension works without it. */
function complain(command: string, error: unknown): void {
  const reason = error instanceof Error ? error.message : String(error);
  const message = `The program “${command}” could not be started: ${reason}. Install it, or name it in the settings.`;
  void vscode.window.showErrorMessage(message, "Open settings").then((answer) => {
    if (answer !== undefined) {
      void vscode.commands.executeCommand("workbench.action.openSettings", "scruple.server.path");
    }
  });
}

/** Tells the server what this client does itself. */
const announcement: StaticFeature = {
  fillClientCapabilities: (capabilities) => {
    capabilities.experimental = { ...capabilities.experimental, scrupleLibrary: true, scrupleShowUses: true };
  },
  initialize: () => undefined,
  getState: () => ({ kind: "static" }),
  clear: () => undefined,
};
