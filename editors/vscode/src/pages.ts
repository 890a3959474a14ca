// Pages that have no file: the built-in library and the explanations of findings.

import * as vscode from "vscode";
import type { LanguageClient } from "vscode-languageclient/node";

/** Fetches the text of a page from the server. */
export class LibraryPages implements vscode.TextDocumentContentProvider {
  constructor(private readonly client: () => LanguageClient | undefined) {}

  async provideTextDocumentContent(uri: vscode.Uri): Promise<string> {
    const answer = await this.client()?.sendRequest<{ text: string }>("scruple/libraryText", { uri: uri.toString() });
    return answer?.text ?? "";
  }
}

/** Opens the page of a finding: the one under the cursor, or one of those in the file. */
export async function explain(): Promise<void> {
  const editor = vscode.window.activeTextEditor;
  if (editor === undefined) {
    return;
  }
  const findings = vscode.languages.getDiagnostics(editor.document.uri).filter((finding) => finding.source === "scruple");
  const here = findings.filter((finding) => finding.range.contains(editor.selection.active));
  const codes = [...new Set((here.length > 0 ? here : findings).map(codeOf).filter((code) => code !== undefined))];
  const code = codes.length > 1 ? await vscode.window.showQuickPick(codes, { placeHolder: "Which finding?" }) : codes[0];
  if (code === undefined) {
    if (codes.length === 0) {
      void vscode.window.showInformationMessage("There are no findings in this file.");
    }
    return;
  }
  await vscode.commands.executeCommand("markdown.showPreview", vscode.Uri.parse(`scruple-library:/findings/${code}.md`));
}

function codeOf(finding: vscode.Diagnostic): string | undefined {
  const code = typeof finding.code === "object" ? finding.code.value : finding.code;
  return code === undefined ? undefined : String(code);
}
