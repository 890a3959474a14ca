// The sheet of the recipe under the cursor, beside the text and always of the text as it stands.

import * as vscode from "vscode";
import type { LanguageClient } from "vscode-languageclient/node";

/** What the server tells of the recipe at a position. */
interface Sheet {
  name: string;
  markdown: string;
}

const SCHEME = "scruple-sheet";
/** How long the text must rest before the sheet is worked out again, in milliseconds. */
const REST = 250;

/** Shows one sheet, that of the recipe where the cursor was last. */
export class Sheets implements vscode.TextDocumentContentProvider, vscode.Disposable {
  private readonly changed = new vscode.EventEmitter<vscode.Uri>();
  readonly onDidChange = this.changed.event;
  private readonly address = vscode.Uri.parse(`${SCHEME}:/Sheet.md`);
  private readonly disposables: vscode.Disposable[];
  private timer: NodeJS.Timeout | undefined;
  private at: { uri: vscode.Uri; position: vscode.Position } | undefined;

  constructor(private readonly client: () => LanguageClient | undefined) {
    this.disposables = [
      this.changed,
      vscode.workspace.registerTextDocumentContentProvider(SCHEME, this),
      vscode.workspace.onDidChangeTextDocument((change) => this.follow(change.document)),
      vscode.window.onDidChangeTextEditorSelection((change) => this.follow(change.textEditor.document)),
    ];
  }

  async show(): Promise<void> {
    const editor = vscode.window.activeTextEditor;
    if (editor?.document.languageId !== "scruple") {
      return;
    }
    this.at = { uri: editor.document.uri, position: editor.selection.active };
    this.changed.fire(this.address);
    await vscode.commands.executeCommand("markdown.showPreviewToSide", this.address);
  }

  async provideTextDocumentContent(): Promise<string> {
    const at = this.at;
    if (at === undefined) {
      return "";
    }
    const position = { line: at.position.line, character: at.position.character };
    const params = { textDocument: { uri: at.uri.toString() }, position };
    const sheet = await this.client()?.sendRequest<Sheet | null>("scruple/sheet", params);
    return sheet?.markdown ?? "_Put the cursor into a solution._";
  }

  dispose(): void {
    clearTimeout(this.timer);
    vscode.Disposable.from(...this.disposables).dispose();
  }

  private follow(document: vscode.TextDocument): void {
    const editor = vscode.window.activeTextEditor;
    if (this.at === undefined || document.languageId !== "scruple" || editor?.document !== document) {
      return;
    }
    this.at = { uri: document.uri, position: editor.selection.active };
    clearTimeout(this.timer);
    this.timer = setTimeout(() => this.changed.fire(this.address), REST);
  }
}
