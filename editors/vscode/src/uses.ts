// The places that a lens knows, in the editor's own list of references.

import * as vscode from "vscode";

interface Place {
  line: number;
  character: number;
}

interface Location {
  uri: string;
  range: { start: Place; end: Place };
}

/** Lists the uses of the thing at a position. The arguments are the protocol's. */
export async function showUses(uri: string, position: Place, locations: Location[]): Promise<void> {
  const place = ({ line, character }: Place) => new vscode.Position(line, character);
  const found = locations.map(
    (location) =>
      new vscode.Location(
        vscode.Uri.parse(location.uri),
        new vscode.Range(place(location.range.start), place(location.range.end)),
      ),
  );
  await vscode.commands.executeCommand("editor.action.showReferences", vscode.Uri.parse(uri), place(position), found);
}
