"""An independent client (pytest-lsp) that asks for findings, colours by difference, lenses and hierarchies."""

import pytest
import pytest_lsp
from lsprotocol import types
from pytest_lsp import ClientServerConfig, LanguageClient, client_capabilities

from conftest import SCRUPLE

URI = "file:///lab/manners.prep"
TEXT = """\
solution Salt stock
    made at    20 °C
    58.44 g    sodium chloride
    q.s.       water to 1 L

solution Saline
    made at    20 °C
    10 mL      Salt stock
    1,5 g      sucrose
    q.s.       water to 100 mL
"""


@pytest_lsp.fixture(config=ClientServerConfig(server_command=[SCRUPLE, "serve"]))
async def client(lsp_client: LanguageClient):
    capabilities = client_capabilities("visual-studio-code@v1.65.2")
    capabilities.text_document.diagnostic = types.DiagnosticClientCapabilities()
    capabilities.workspace.diagnostics = types.DiagnosticWorkspaceClientCapabilities(refresh_support=True)

    @lsp_client.feature("client/registerCapability")
    def _(params: types.RegistrationParams):
        pass

    for again in ["workspace/codeLens/refresh", "workspace/semanticTokens/refresh", "workspace/inlayHint/refresh"]:
        if again not in lsp_client.protocol.fm.features:
            lsp_client.feature(again)(lambda params: None)

    answer = await lsp_client.initialize_session(
        types.InitializeParams(process_id=None, root_uri=None, capabilities=capabilities)
    )
    lsp_client.offer = answer.capabilities
    document = types.TextDocumentItem(uri=URI, language_id="scruple", version=1, text=TEXT)
    lsp_client.text_document_did_open(types.DidOpenTextDocumentParams(text_document=document))
    yield
    await lsp_client.shutdown_session()


DOCUMENT = types.TextDocumentIdentifier(uri=URI)


@pytest.mark.asyncio
async def test_findings_are_asked_for_and_not_sent_twice(client: LanguageClient):
    assert client.offer.diagnostic_provider.workspace_diagnostics
    ask = client.text_document_diagnostic_async
    first = await ask(types.DocumentDiagnosticParams(text_document=DOCUMENT))
    assert "decimal-comma" in [finding.code for finding in first.items]
    again = await ask(types.DocumentDiagnosticParams(text_document=DOCUMENT, previous_result_id=first.result_id))
    assert again.kind == "unchanged"
    whole = await client.workspace_diagnostic_async(types.WorkspaceDiagnosticParams(previous_result_ids=[]))
    assert [item.uri for item in whole.items] == [URI]
    assert URI not in client.diagnostics


@pytest.mark.asyncio
async def test_colours_come_by_difference(client: LanguageClient):
    whole = await client.text_document_semantic_tokens_full_async(types.SemanticTokensParams(text_document=DOCUMENT))
    params = types.SemanticTokensDeltaParams(text_document=DOCUMENT, previous_result_id=whole.result_id)
    delta = await client.text_document_semantic_tokens_full_delta_async(params)
    assert not delta.edits


@pytest.mark.asyncio
async def test_lenses_and_hierarchy(client: LanguageClient):
    lenses = await client.text_document_code_lens_async(types.CodeLensParams(text_document=DOCUMENT))
    titles = [lens.command.title for lens in lenses]
    assert titles[1:] == ["used by Saline", "no values: 1 error"]
    place = types.Position(line=0, character=12)
    params = types.CallHierarchyPrepareParams(text_document=DOCUMENT, position=place)
    (stock,) = await client.text_document_prepare_call_hierarchy_async(params)
    into = await client.call_hierarchy_incoming_calls_async(types.CallHierarchyIncomingCallsParams(item=stock))
    assert [call.from_.name for call in into] == ["Saline"]
    made = await client.call_hierarchy_outgoing_calls_async(types.CallHierarchyOutgoingCallsParams(item=into[0].from_))
    assert [call.to.name for call in made] == ["Salt stock", "sucrose", "water"]


@pytest.mark.asyncio
async def test_a_file_is_renamed(client: LanguageClient):
    rename = types.FileRename(old_uri=URI, new_uri="file:///lab/other.prep")
    edit = await client.workspace_will_rename_files_async(types.RenameFilesParams(files=[rename]))
    assert edit is None
