//! Answers and the changes that overtake them, with the service in the test's own hands: nothing here depends on timing.

use std::future::Future;
use std::pin::pin;

use futures::poll;
use tower_lsp::LspService;

use super::*;

const URI: &str = "file:///lab/a.prep";
const TEXT: &str = "solution A\n    1 g        sodium chloride\n    q.s.       water to 1 L\n";

/// A server that has opened one text. Nothing is sent to a client that was not initialized through the service, so none is
/// needed.
async fn opened() -> LspService<Server> {
    let (service, _) = LspService::new(Server::new);
    let server = service.inner();
    let params = InitializeParams { root_uri: Url::parse("file:///lab").ok(), ..InitializeParams::default() };
    server.initialize(params).await.unwrap();
    let text_document = TextDocumentItem::new(Url::parse(URI).unwrap(), "scruple".into(), 1, TEXT.into());
    server.did_open(DidOpenTextDocumentParams { text_document }).await;
    service
}

fn here() -> TextDocumentPositionParams {
    TextDocumentPositionParams::new(TextDocumentIdentifier::new(Url::parse(URI).unwrap()), Position::new(1, 17))
}

fn hover_params() -> HoverParams {
    HoverParams { text_document_position_params: here(), work_done_progress_params: WorkDoneProgressParams::default() }
}

fn completion_params() -> CompletionParams {
    CompletionParams {
        text_document_position: here(),
        work_done_progress_params: WorkDoneProgressParams::default(),
        partial_result_params: PartialResultParams::default(),
        context: None,
    }
}

async fn change(server: &Server, version: i32) {
    let change = TextDocumentContentChangeEvent { range: None, range_length: None, text: format!("# {version}\n{TEXT}") };
    let text_document = VersionedTextDocumentIdentifier::new(Url::parse(URI).unwrap(), version);
    server.did_change(DidChangeTextDocumentParams { text_document, content_changes: vec![change] }).await;
}

#[tokio::test]
async fn a_question_that_nothing_overtakes_is_answered() {
    let service = opened().await;
    assert!(service.inner().hover(hover_params()).await.unwrap().is_some());
}

#[tokio::test]
async fn places_are_not_told_of_a_text_that_has_changed() {
    let service = opened().await;
    let server = service.inner();
    let mut hover = pin!(server.hover(hover_params()));
    let _ = poll!(&mut hover);
    change(server, 2).await;
    assert_eq!(hover.await.unwrap_err(), Error::content_modified());
    // The same place now holds other words, and asked anew it is answered.
    assert!(server.hover(hover_params()).await.is_ok());
}

#[tokio::test]
async fn what_is_offered_while_typing_stays_good() {
    let service = opened().await;
    let server = service.inner();
    let mut offered = pin!(server.completion(completion_params()));
    let _ = poll!(&mut offered);
    for version in 2..10 {
        change(server, version).await;
    }
    assert!(offered.await.is_ok());
}

#[tokio::test]
async fn an_answer_belongs_to_the_changes_before_it() {
    let service = opened().await;
    let server = service.inner();
    let symbols = || DocumentSymbolParams {
        text_document: TextDocumentIdentifier::new(Url::parse(URI).unwrap()),
        work_done_progress_params: WorkDoneProgressParams::default(),
        partial_result_params: PartialResultParams::default(),
    };
    for version in 2..50 {
        change(server, version).await;
        let Ok(Some(DocumentSymbolResponse::Flat(found))) = server.document_symbol(symbols()).await else {
            panic!("no outline at version {version}");
        };
        assert_eq!(found[0].location.range.start.line, 1, "each version has one comment line above");
    }
}

#[tokio::test]
async fn a_question_dropped_by_its_client_is_harmless() {
    let service = opened().await;
    let server = service.inner();
    for _ in 0..20 {
        let mut hover: std::pin::Pin<Box<dyn Future<Output = _> + Send>> = Box::pin(server.hover(hover_params()));
        let _ = poll!(&mut hover);
        drop(hover);
    }
    assert!(server.hover(hover_params()).await.unwrap().is_some());
}
