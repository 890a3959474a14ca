//! Beginning, end, and everything a client may do wrong in between.

use std::process::{Command, Stdio};

use serde_json::{Value, json};

use crate::client::Client;

#[test]
fn the_server_says_who_it_is_and_leaves_when_told() {
    let mut client = Client::start();
    let offer = client.initialize(json!({ "processId": null, "rootUri": null, "capabilities": {} }));
    assert_eq!(offer["serverInfo"]["name"], "scruple");
    assert_eq!(offer["serverInfo"]["version"], env!("CARGO_PKG_VERSION"));
    assert_eq!(offer["capabilities"]["positionEncoding"], "utf-16");
    client.leave();
}

#[test]
fn exit_without_shutdown_and_the_end_of_input_are_failures() {
    let mut client = Client::initialized(json!({}));
    client.tell("exit", Value::Null);
    assert_eq!(client.ended().0.code(), Some(1));
    let mut client = Client::initialized(json!({}));
    client.hang_up();
    assert_eq!(client.ended().0.code(), Some(1));
    let mut client = Client::start();
    client.hang_up();
    assert_eq!(client.ended().0.code(), Some(1));
}

#[test]
fn requests_before_and_after_the_conversation_are_refused() {
    let mut client = Client::start();
    let hover = json!({ "textDocument": { "uri": "file:///a.prep" }, "position": { "line": 0, "character": 0 } });
    assert_eq!(client.ask("textDocument/hover", hover.clone())["error"]["code"], -32002);
    client.initialize(json!({ "processId": null, "capabilities": {} }));
    assert_eq!(client.ask("initialize", json!({ "processId": null, "capabilities": {} }))["error"]["code"], -32600);
    assert_eq!(client.ask("shutdown", json!({}))["result"], Value::Null);
    assert_eq!(client.ask("textDocument/hover", hover)["error"]["code"], -32600);
    client.tell("exit", json!({}));
    assert_eq!(client.ended().0.code(), Some(0));
}

#[test]
fn broken_messages_do_not_end_the_conversation() {
    let mut client = Client::initialized(json!({}));
    client.raw(b"Content-Length: 5\r\n\r\n{\"a\":");
    assert_eq!(client.wait(|message| message["id"].is_null())["error"]["code"], -32700);
    client.raw(b"Content-Length: 4\r\n\r\nnull");
    assert_eq!(client.wait(|message| message["id"].is_null())["error"]["code"], -32600);
    client.raw(b"Content-Length: 3\r\n\r\n\"\xff\"");
    assert_eq!(client.wait(|message| message["id"].is_null())["error"]["code"], -32700);
    client.raw(b"rubbish\r\n\r\nmore");
    assert_eq!(client.wait(|message| message["id"].is_null())["error"]["code"], -32700);
    assert_eq!(client.ask("no/such/method", json!({}))["error"]["code"], -32601);
    assert_eq!(client.ask("textDocument/hover", json!({ "wrong": 1 }))["error"]["code"], -32602);
    client.tell("textDocument/didOpen", json!([1, 2]));
    client.tell("$/progress", json!({}));
    client.send(&json!({ "jsonrpc": "2.0", "id": 4711, "result": null }));
    client.send(&json!({ "jsonrpc": "2.0", "id": 4712, "error": { "code": 1, "message": "no" } }));
    client.leave();
}

#[test]
fn newer_and_odd_capabilities_are_no_obstacle() {
    let mut client = Client::start();
    let offer = client.initialize(json!({
        "processId": null,
        "trace": "compact",
        "clientInfo": { "name": "editor of tomorrow" },
        "workspaceFolders": null,
        "capabilities": {
            "general": { "positionEncodings": ["utf-32", "utf-8", "utf-16"], "markdown": 3 },
            "textDocument": { "publishDiagnostics": { "relatedInformation": "maybe" }, "future": {} },
            "workspace": null,
        },
    }));
    assert_eq!(offer["capabilities"]["positionEncoding"], "utf-8");
    client.leave();
}

#[test]
fn cancelling_what_is_over_or_unknown_is_harmless() {
    let mut client = Client::initialized(json!({}));
    for id in [json!(1), json!("unheard of"), json!(9_000_000_000_i64), json!(null)] {
        client.tell("$/cancelRequest", json!({ "id": id }));
    }
    client.leave();
}

#[cfg(unix)]
#[test]
fn the_server_does_not_outlive_its_editor() {
    let mut editor = Command::new("sleep").arg("60").stdin(Stdio::null()).spawn().unwrap();
    let mut client = Client::start();
    client.initialize(json!({ "processId": editor.id(), "capabilities": {} }));
    editor.kill().unwrap();
    editor.wait().unwrap();
    assert_eq!(client.ended().0.code(), Some(1));
}

#[test]
fn an_editor_in_another_container_is_not_taken_for_dead() {
    let mut client = Client::start();
    client.initialize(json!({ "processId": i32::MAX, "capabilities": {} }));
    std::thread::sleep(std::time::Duration::from_millis(1_500));
    client.leave();
}

#[test]
fn arguments_that_editors_add_are_accepted_and_others_refused() {
    for (arguments, code) in [(vec!["serve", "--stdio", "--clientProcessId=1"], 1), (vec!["serve", "--no-such"], 2)] {
        let run = Command::new(env!("CARGO_BIN_EXE_scruple")).args(arguments).stdin(Stdio::null()).output().unwrap();
        assert_eq!(run.status.code(), Some(code));
    }
}
