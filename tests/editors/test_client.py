"""An independent client (pytest-lsp), announcing what real editors announced when their `initialize` was recorded."""

import pytest
import pytest_lsp
from lsprotocol import types
from pytest_lsp import ClientServerConfig, LanguageClient, client_capabilities

from conftest import SCRUPLE

EDITORS = [
    "emacs@v29.1",
    "neovim@v0.6.1",
    "neovim@v0.7.0",
    "neovim@v0.8.0",
    "neovim@v0.9.1",
    "neovim@v0.10.0",
    "neovim@v0.11.0",
    "visual-studio-code@v1.65.2",
]


@pytest_lsp.fixture(params=EDITORS, config=ClientServerConfig(server_command=[SCRUPLE, "serve"]))
async def client(request, lsp_client: LanguageClient):
    capabilities = client_capabilities(request.param)

    @lsp_client.feature("client/registerCapability")
    def _(params: types.RegistrationParams):
        lsp_client.registered = [registration.method for registration in params.registrations]

    answer = await lsp_client.initialize_session(
        types.InitializeParams(process_id=None, root_uri=None, capabilities=capabilities)
    )
    lsp_client.offer = answer.capabilities
    yield
    await lsp_client.shutdown_session()


async def opened(client, uri, text, version=1):
    document = types.TextDocumentItem(uri=uri, language_id="scruple", version=version, text=text)
    client.text_document_did_open(types.DidOpenTextDocumentParams(text_document=document))
    await client.wait_for_notification("textDocument/publishDiagnostics")
    return client.diagnostics[uri]


@pytest.mark.asyncio
async def test_what_is_clean_has_no_findings(client: LanguageClient):
    assert list(await opened(client, "file:///lab/clean.prep", "# nothing yet\n")) == []


@pytest.mark.asyncio
async def test_columns_are_counted_as_agreed(client: LanguageClient):
    general = client.capabilities.general
    offered = (general and general.position_encodings) or []
    expected = "utf-8" if "utf-8" in offered else "utf-16"
    assert client.offer.position_encoding == expected
