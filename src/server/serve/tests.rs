//! What an editor may do to a server, each with a service made for the occasion.

use std::io::{self, PipeReader, PipeWriter, pipe};
use std::sync::Arc;
use std::sync::atomic::{AtomicUsize, Ordering};
use std::time::Instant;

use serde_json::Value;
use tower_lsp::jsonrpc::Result;
use tower_lsp::lsp_types::{DidChangeTextDocumentParams, InitializeParams, InitializeResult, MessageType};
use tower_lsp::{Client, async_trait};

use super::*;

/// A server whose methods misbehave in every way that a handler can.
struct Troublesome {
    client: Client,
    versions: Arc<std::sync::Mutex<Vec<i32>>>,
    asked: Arc<AtomicUsize>,
}

#[async_trait]
impl LanguageServer for Troublesome {
    async fn initialize(&self, _: InitializeParams) -> Result<InitializeResult> {
        Ok(InitializeResult::default())
    }

    async fn shutdown(&self) -> Result<()> {
        Ok(())
    }

    async fn did_change(&self, params: DidChangeTextDocumentParams) {
        self.versions.lock().unwrap().push(params.text_document.version);
        tokio::task::yield_now().await;
    }
}

impl Troublesome {
    async fn panics_at_once(&self) -> Result<Value> {
        panic!("spilled")
    }

    async fn panics_later(&self) -> Result<Value> {
        tokio::task::yield_now().await;
        panic!("spilled later")
    }

    async fn panics_unasked(&self) {
        panic!("spilled unasked")
    }

    async fn never(&self) -> Result<Value> {
        future::pending().await
    }

    async fn slow(&self) -> Result<Value> {
        tokio::time::sleep(Duration::from_millis(300)).await;
        Ok(Value::from("slow"))
    }

    async fn quick(&self) -> Result<Value> {
        Ok(Value::from("quick"))
    }

    async fn versions(&self) -> Result<Value> {
        Ok(Value::from(self.versions.lock().unwrap().clone()))
    }

    /// Asks the client for something and waits for it.
    async fn asks_back(&self) -> Result<Value> {
        self.asked.fetch_add(1, Ordering::SeqCst);
        let answer = self.client.show_message_request(MessageType::INFO, "Well?", None).await?;
        Ok(Value::from(answer.map_or("nothing".to_owned(), |item| item.title)))
    }
}

/// The client's side of a conversation.
struct Editor {
    to_server: Option<PipeWriter>,
    from_server: io::BufReader<PipeReader>,
    ending: mpsc::Receiver<Ending>,
}

impl Editor {
    fn start() -> Editor {
        let (server_input, to_server) = pipe().unwrap();
        let (from_server, server_output) = pipe().unwrap();
        let (report, ending) = mpsc::channel();
        thread::spawn(move || {
            let (service, socket) = LspService::build(|client| Troublesome {
                client,
                versions: Arc::default(),
                asked: Arc::default(),
            })
            .custom_method("panics/at_once", Troublesome::panics_at_once)
            .custom_method("panics/later", Troublesome::panics_later)
            .custom_method("panics/unasked", Troublesome::panics_unasked)
            .custom_method("never", Troublesome::never)
            .custom_method("slow", Troublesome::slow)
            .custom_method("quick", Troublesome::quick)
            .custom_method("versions", Troublesome::versions)
            .custom_method("asks_back", Troublesome::asks_back)
            .finish();
            let runtime = tokio::runtime::Builder::new_multi_thread().worker_threads(2).enable_time().build().unwrap();
            let ended = runtime.block_on(serve(service, socket, server_input, server_output));
            runtime.shutdown_background();
            report.send(ended).unwrap();
        });
        Editor { to_server: Some(to_server), from_server: io::BufReader::new(from_server), ending }
    }

    fn initialized() -> Editor {
        let mut editor = Editor::start();
        editor.ask(0, "initialize", json!({ "capabilities": {} }));
        assert!(editor.answer(0).is_ok());
        editor.tell("initialized", json!({}));
        editor
    }

    fn raw(&mut self, bytes: &[u8]) {
        self.to_server.as_mut().unwrap().write_all(bytes).unwrap();
    }

    fn send(&mut self, message: Value) {
        let mut frame = Vec::new();
        write_message(&mut frame, message.to_string().as_bytes()).unwrap();
        self.raw(&frame);
    }

    fn ask(&mut self, id: i64, method: &str, params: Value) {
        self.send(json!({ "jsonrpc": "2.0", "id": id, "method": method, "params": params }));
    }

    fn tell(&mut self, method: &str, params: Value) {
        self.send(json!({ "jsonrpc": "2.0", "method": method, "params": params }));
    }

    fn read(&mut self) -> Message {
        read_message(&mut self.from_server).unwrap()
    }

    /// The next request or notification of the server.
    fn request(&mut self) -> Request {
        loop {
            if let Message::Request(request) = self.read() {
                return request;
            }
        }
    }

    /// The answer to `id`, skipping notifications; any other answer is a failure.
    fn answer(&mut self, id: i64) -> Result<Value> {
        self.answer_to(Id::Number(id))
    }

    fn answer_to(&mut self, id: Id) -> Result<Value> {
        loop {
            match self.read() {
                Message::Response(response) => {
                    let (answered, result) = response.into_parts();
                    assert_eq!(answered, id);
                    return result;
                }
                Message::Request(_) => (),
                other => panic!("no answer to {id}: {other:?}"),
            }
        }
    }

    fn ending(self) -> Ending {
        self.ending.recv_timeout(Duration::from_secs(5)).expect("the server still runs")
    }
}

fn code(answer: Result<Value>) -> i64 {
    answer.unwrap_err().code.code()
}

#[test]
fn exit_after_shutdown_ends_with_zero_while_input_stays_open() {
    let mut editor = Editor::initialized();
    editor.ask(1, "shutdown", Value::Null);
    assert_eq!(editor.answer(1), Ok(Value::Null));
    editor.tell("exit", Value::Null);
    let _open = editor.to_server.take();
    let ending = editor.ending();
    assert_eq!(ending, Ending::Exit { after_shutdown: true });
    assert_eq!(ending.code(), 0);
}

#[test]
fn exit_without_shutdown_ends_with_one() {
    let mut editor = Editor::initialized();
    editor.tell("exit", Value::Null);
    let ending = editor.ending();
    assert_eq!((ending, ending.code()), (Ending::Exit { after_shutdown: false }, 1));
    // A shutdown that was refused is none.
    let mut editor = Editor::start();
    editor.ask(1, "shutdown", Value::Null);
    assert_eq!(code(editor.answer(1)), -32002);
    editor.tell("exit", Value::Null);
    assert_eq!(editor.ending().code(), 1);
}

#[test]
fn the_end_of_input_ends_the_server_after_the_answers_under_way() {
    let mut editor = Editor::initialized();
    editor.ask(1, "slow", Value::Null);
    editor.to_server = None;
    assert_eq!(editor.answer(1), Ok(Value::from("slow")));
    let ending = editor.ending();
    assert_eq!((ending, ending.code()), (Ending::InputEnded { after_shutdown: false }, 1));
    let mut editor = Editor::initialized();
    editor.ask(1, "shutdown", Value::Null);
    editor.to_server = None;
    assert_eq!(editor.ending().code(), 0);
}

#[test]
fn a_closed_output_ends_the_server() {
    let mut editor = Editor::initialized();
    let (nothing, _) = pipe().unwrap();
    editor.from_server = io::BufReader::new(nothing);
    editor.ask(1, "quick", Value::Null);
    let ending = editor.ending();
    assert_eq!((ending, ending.code()), (Ending::OutputClosed, 1));
}

#[test]
fn exit_does_not_wait_for_a_client_that_does_not_read() {
    let mut editor = Editor::initialized();
    for id in 0..2_000 {
        editor.ask(id, &"unknown".repeat(10), Value::Null);
    }
    editor.tell("exit", Value::Null);
    assert_eq!(editor.ending().code(), 1);
}

#[cfg(unix)]
#[test]
fn the_end_of_the_editors_process_ends_the_server() {
    let mut process = std::process::Command::new("sleep").arg("60").spawn().unwrap();
    let mut editor = Editor::start();
    editor.ask(0, "initialize", json!({ "capabilities": {}, "processId": process.id() }));
    assert!(editor.answer(0).is_ok());
    process.kill().unwrap();
    let ending = editor.ending();
    assert_eq!((ending, ending.code()), (Ending::ClientGone, 1));
    process.wait().unwrap();
}

#[test]
fn shutdown_takes_null_an_empty_object_or_an_empty_list() {
    for params in [Value::Null, json!({}), json!([])] {
        let mut editor = Editor::initialized();
        editor.ask(1, "shutdown", params);
        assert_eq!(editor.answer(1), Ok(Value::Null));
    }
}

#[test]
fn malformed_messages_are_answered_and_the_conversation_goes_on() {
    let mut editor = Editor::initialized();
    editor.raw(b"Content-Length: 12\r\n\r\n{\"jsonrpc\": ");
    assert_eq!(code(editor.answer_to(Id::Null)), -32700);
    editor.raw(b"Content-Length: 2\r\n\r\n[]");
    assert_eq!(code(editor.answer_to(Id::Null)), -32600);
    editor.ask(1, "unknown/method", Value::Null);
    assert_eq!(code(editor.answer(1)), -32601);
    editor.tell("$/unknown", Value::Null);
    editor.tell("textDocument/didChange", json!({ "wrong": true }));
    editor.ask(2, "quick", Value::Null);
    assert_eq!(editor.answer(2), Ok(Value::from("quick")));
}

#[test]
fn a_panic_costs_one_answer() {
    let mut editor = Editor::initialized();
    for (id, method) in [(1, "panics/at_once"), (2, "panics/later")] {
        editor.ask(id, method, Value::Null);
        let error = editor.answer(id).unwrap_err();
        assert_eq!(error.code.code(), -32603);
        assert!(error.message.contains(method) && error.message.contains("spilled"), "{}", error.message);
    }
    editor.tell("panics/unasked", Value::Null);
    let told = editor.request();
    assert_eq!(told.method(), "window/logMessage");
    assert!(told.params().unwrap()["message"].as_str().unwrap().contains("panics/unasked"));
    editor.ask(3, "quick", Value::Null);
    assert_eq!(editor.answer(3), Ok(Value::from("quick")));
}

#[test]
fn an_answer_that_nobody_waits_for_any_more_is_harmless() {
    let mut editor = Editor::initialized();
    editor.ask(1, "asks_back", Value::Null);
    let question = editor.request();
    editor.tell("$/cancelRequest", json!({ "id": 1 }));
    assert_eq!(code(editor.answer(1)), -32800);
    editor.send(json!({ "jsonrpc": "2.0", "id": question.id(), "result": { "title": "late" } }));
    editor.send(json!({ "jsonrpc": "2.0", "id": 987, "result": null }));
    editor.ask(2, "quick", Value::Null);
    assert_eq!(editor.answer(2), Ok(Value::from("quick")));
}

#[test]
fn any_number_of_handlers_may_wait_and_be_cancelled() {
    let mut editor = Editor::initialized();
    for id in 1..=200 {
        editor.ask(id, "never", Value::Null);
    }
    editor.ask(1_000, "quick", Value::Null);
    assert_eq!(editor.answer(1_000), Ok(Value::from("quick")));
    for id in 1..=200 {
        editor.tell("$/cancelRequest", json!({ "id": id }));
        assert_eq!(code(editor.answer(id)), -32800);
    }
}

#[test]
fn slow_handlers_run_beside_each_other() {
    let mut editor = Editor::initialized();
    let start = Instant::now();
    for id in 0..40 {
        editor.ask(id, "slow", Value::Null);
    }
    for _ in 0..40 {
        assert!(matches!(editor.read(), Message::Response(_)));
    }
    assert!(start.elapsed() < Duration::from_secs(3), "40 of 0.3 s took {:?}", start.elapsed());
}

#[test]
fn answers_of_the_client_get_through_whatever_else_is_queued() {
    let mut editor = Editor::initialized();
    for id in 0..20 {
        editor.ask(id, "asks_back", Value::Null);
    }
    let questions: Vec<Request> = (0..20).map(|_| editor.request()).collect();
    for id in 100..1_100 {
        editor.ask(id, "never", Value::Null);
    }
    for question in questions {
        editor.send(json!({ "jsonrpc": "2.0", "id": question.id(), "result": { "title": "yes" } }));
    }
    for _ in 0..20 {
        let Message::Response(response) = editor.read() else { panic!("no answer") };
        assert_eq!(response.into_parts().1, Ok(Value::from("yes")));
    }
}

#[test]
fn changes_are_seen_in_the_order_in_which_they_came() {
    let mut editor = Editor::initialized();
    let document = |version| json!({ "textDocument": { "uri": "file:///a.prep", "version": version }, "contentChanges": [] });
    for version in 0..2_000 {
        editor.tell("textDocument/didChange", document(version));
    }
    editor.ask(1, "versions", Value::Null);
    assert_eq!(editor.answer(1), Ok(Value::from((0..2_000).collect::<Vec<i32>>())));
}
