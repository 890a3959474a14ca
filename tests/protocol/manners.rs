//! How the server behaves towards what a client announces: findings asked for or sent, differences instead of wholes, folders
//! that come and go, files that are renamed or change unseen, long work that is told of.

use std::fs;

use serde_json::{Value, json};

use crate::client::Client;
use crate::features::{Library, at, codes};

/// A client that asks for findings and can be told to ask again.
fn pulling() -> Value {
    json!({
        "textDocument": { "diagnostic": {}, "publishDiagnostics": {} },
        "workspace": { "diagnostics": { "refreshSupport": true } },
    })
}

fn pull(client: &mut Client, uri: &str, known: Option<&str>) -> Value {
    let params = json!({ "textDocument": { "uri": uri }, "previousResultId": known });
    client.ask("textDocument/diagnostic", params)["result"].clone()
}

#[test]
fn findings_are_pulled_or_pushed_never_both() {
    let library = Library::new("pulled");
    let mut client = library.client(pulling());
    let uri = library.uri("buffers.prep");
    client.open(&uri, "use \"stocks.prep\"\nsolution A\n    1,5 g      sodium chloride\n    q.s.       water to 1 L\n");
    let first = pull(&mut client, &uri, None);
    assert_eq!(first["kind"], "full");
    assert!(codes(first["items"].as_array().unwrap()).contains(&"decimal-comma"), "{first}");
    let id = first["resultId"].as_str().unwrap();
    let again = pull(&mut client, &uri, Some(id));
    assert_eq!((&again["kind"], again.get("items")), (&json!("unchanged"), None), "{again}");
    // Mended, the name of the list is another.
    client.edit(&uri, 2, [2, 4, 2, 9], "1.5 g");
    let mended = pull(&mut client, &uri, Some(id));
    assert_eq!(mended["kind"], "full");
    assert!(!codes(mended["items"].as_array().unwrap()).contains(&"decimal-comma"), "{mended}");
    client.close(&uri);
    let sent = client.settle();
    assert!(sent.iter().all(|message| message["method"] != "textDocument/publishDiagnostics"), "{sent:?}");
    client.leave();
}

#[test]
fn a_change_of_one_file_makes_the_client_ask_for_the_others_again() {
    let library = Library::new("refresh");
    let mut client = library.client(pulling());
    let buffers = library.open(&mut client, "buffers.prep");
    let before = pull(&mut client, &buffers, None);
    let stocks = library.open(&mut client, "stocks.prep");
    client.settle();
    client.edit(&stocks, 2, [0, 9, 0, 19], "Brine");
    let asked = client.told("workspace/diagnostic/refresh");
    client.send(&json!({ "jsonrpc": "2.0", "id": asked["id"], "result": null }));
    let after = pull(&mut client, &buffers, before["resultId"].as_str());
    assert!(codes(after["items"].as_array().unwrap()).contains(&"unknown-name"), "{after}");
    client.leave();
}

#[test]
fn the_findings_of_a_whole_library_are_told_once() {
    let library = Library::new("workspace-pull");
    fs::write(library.folder.join("bad.prep"), "solution Bad\n    1,5 g      sodium chloride\n    q.s.       water to 1 L\n").unwrap();
    fs::write(library.folder.join("scruple.toml"), "language = 7\n").unwrap();
    let mut client = library.client(pulling());
    let ask = |client: &mut Client, known: Value| {
        let report = client.ask("workspace/diagnostic", json!({ "previousResultIds": known }));
        report["result"]["items"].as_array().unwrap().clone()
    };
    let first = ask(&mut client, json!([]));
    let of = |items: &[Value], name: &str| items.iter().find(|item| item["uri"] == library.uri(name).as_str()).cloned();
    let bad = of(&first, "bad.prep").unwrap();
    assert_eq!(bad["kind"], "full");
    assert!(codes(bad["items"].as_array().unwrap()).contains(&"decimal-comma"), "{bad}");
    assert_eq!(of(&first, "scruple.toml").unwrap()["items"].as_array().unwrap().len(), 1);
    let known: Vec<Value> = first.iter().map(|item| json!({ "uri": item["uri"], "value": item["resultId"] })).collect();
    let second = ask(&mut client, json!(known));
    assert_eq!(second.len(), first.len());
    assert!(second.iter().all(|item| item["kind"] == "unchanged" && item.get("items").is_none()), "{second:?}");
    // Mended on disk: told once more, and then it is clean.
    fs::write(library.folder.join("bad.prep"), "solution Bad\n    1.5 g      sodium chloride\n    q.s.       water to 1 L\n    made at    20 °C\n").unwrap();
    let changes = json!([{ "uri": library.uri("bad.prep"), "type": 2 }]);
    client.tell("workspace/didChangeWatchedFiles", json!({ "changes": changes }));
    let third = ask(&mut client, json!(known));
    let bad = of(&third, "bad.prep").unwrap();
    assert!(bad["kind"] == "full" && !codes(bad["items"].as_array().unwrap()).contains(&"decimal-comma"), "{bad}");
    client.leave();
}

#[test]
fn colours_are_sent_as_differences() {
    let library = Library::new("delta");
    let mut client = library.client(json!({}));
    let uri = library.open(&mut client, "stocks.prep");
    let document = json!({ "uri": uri });
    let whole = client.ask("textDocument/semanticTokens/full", json!({ "textDocument": document }))["result"].clone();
    let data = whole["data"].as_array().unwrap().clone();
    client.edit(&uri, 2, [3, 0, 3, 0], "    1 g        sucrose\n");
    let params = json!({ "textDocument": document, "previousResultId": whole["resultId"] });
    let delta = client.ask("textDocument/semanticTokens/full/delta", params)["result"].clone();
    let edit = delta["edits"][0].clone();
    let mut changed = data.clone();
    let start = edit["start"].as_u64().unwrap() as usize;
    let gone = edit["deleteCount"].as_u64().unwrap() as usize;
    assert!(edit["data"].as_array().unwrap().len() < data.len(), "a difference, not the whole: {delta}");
    changed.splice(start..start + gone, edit["data"].as_array().unwrap().iter().cloned());
    let now = client.ask("textDocument/semanticTokens/full", json!({ "textDocument": document }))["result"]["data"].clone();
    assert_eq!(json!(changed), now);
    client.leave();
}

#[test]
fn a_folder_that_is_closed_is_forgotten() {
    let (one, other) = (Library::new("folder-one"), Library::new("folder-other"));
    let mut client = Client::start();
    let folder = |library: &Library| json!({ "uri": library.uri(""), "name": "x" });
    client.initialize(json!({
        "processId": null, "rootUri": null, "workspaceFolders": [folder(&one), folder(&other)],
        "capabilities": { "workspace": { "workspaceFolders": true } },
    }));
    let count = |client: &mut Client| client.ask("workspace/symbol", json!({ "query": "Saline" }))["result"].as_array().unwrap().len();
    assert_eq!(count(&mut client), 2);
    client.tell("workspace/didChangeWorkspaceFolders", json!({ "event": { "added": [], "removed": [folder(&other)] } }));
    assert_eq!(count(&mut client), 1);
    client.tell("workspace/didChangeWorkspaceFolders", json!({ "event": { "added": [folder(&other)], "removed": [] } }));
    assert_eq!(count(&mut client), 2);
    client.leave();
}

#[test]
fn use_lines_follow_a_file_that_is_renamed() {
    let library = Library::new("will-rename");
    let files = json!({ "workspace": { "fileOperations": { "willRename": true } } });
    let mut client = Client::start();
    let offer = client.initialize(json!({ "processId": null, "rootUri": library.uri(""), "capabilities": files }));
    assert_eq!(offer["capabilities"]["workspace"]["fileOperations"]["willRename"]["filters"][0]["pattern"]["glob"], "**/*.prep");
    let renamed = json!({ "files": [{ "oldUri": library.uri("stocks.prep"), "newUri": library.uri("shelf/cold stocks.prep") }] });
    let edit = client.ask("workspace/willRenameFiles", renamed.clone())["result"].clone();
    let edits = &edit["changes"][library.uri("buffers.prep").as_str()];
    assert_eq!(edits[0]["newText"], "\"shelf/cold stocks.prep\"", "{edit}");
    // Done: what was known under the old path is known under the new one.
    fs::create_dir(library.folder.join("shelf")).unwrap();
    fs::rename(library.folder.join("stocks.prep"), library.folder.join("shelf/cold stocks.prep")).unwrap();
    client.tell("workspace/didRenameFiles", renamed);
    let found = client.ask("workspace/symbol", json!({ "query": "Salt stock" }))["result"].clone();
    assert_eq!(found.as_array().unwrap().len(), 1);
    assert!(found[0]["location"]["uri"].as_str().unwrap().ends_with("cold%20stocks.prep"), "{found}");
    client.leave();
}

#[test]
fn files_that_change_unseen_are_noticed() {
    let library = Library::new("unwatched");
    let mut client = library.client(json!({}));
    let uri = library.open(&mut client, "buffers.prep");
    assert!(!codes(&client.findings(&uri, 1)).contains(&"unknown-name"));
    // The first look remembers; what changes after it is noticed at the next.
    std::thread::sleep(std::time::Duration::from_millis(2_500));
    fs::write(library.folder.join("stocks.prep"), STOCKS_RENAMED).unwrap();
    assert!(codes(&client.findings(&uri, 1)).contains(&"unknown-name"));
    client.leave();
}

const STOCKS_RENAMED: &str = "solution Brine\n    made at    20 °C\n    58.44 g    sodium chloride\n    q.s.       water to 1 L\n";

#[test]
fn reading_a_large_library_is_told_of() {
    let library = Library::new("progress");
    for index in 0..100 {
        let text = format!("solution Number {index}\n    made at    20 °C\n    {}.5 g     Tris\n    1 g        sodium acetate\n    q.s.       hydrochloric acid, 1 mol/L to pH 8.0\n    q.s.       water to 1 L\n", index + 1);
        fs::write(library.folder.join(format!("r{index}.prep")), text).unwrap();
    }
    let mut client = Client::start();
    let capabilities = json!({ "window": { "workDoneProgress": true } });
    client.initialize(json!({ "processId": null, "rootUri": library.uri(""), "capabilities": capabilities }));
    let created = client.told("window/workDoneProgress/create");
    client.send(&json!({ "jsonrpc": "2.0", "id": created["id"], "result": null }));
    let token = created["params"]["token"].clone();
    let begin = client.told("$/progress");
    assert_eq!((&begin["params"]["token"], &begin["params"]["value"]["kind"]), (&token, &json!("begin")), "{begin}");
    client.wait(|message| message["method"] == "$/progress" && message["params"]["value"]["kind"] == "end");
    client.leave();
}

#[test]
fn the_settings_are_asked_for_where_the_client_tells_nothing_unbidden() {
    let mut client = Client::initialized(json!({ "workspace": { "didChangeConfiguration": { "dynamicRegistration": true } } }));
    let asked = client.told("client/registerCapability");
    let registered = &asked["params"]["registrations"];
    assert_eq!(registered[0]["method"], "workspace/didChangeConfiguration");
    assert_eq!(registered[0]["registerOptions"]["section"], "scruple");
    client.send(&json!({ "jsonrpc": "2.0", "id": asked["id"], "result": null }));
    client.leave();
}

#[test]
fn what_a_stock_goes_into_and_what_a_recipe_is_made_of() {
    let library = Library::new("hierarchy");
    let mut client = library.client(json!({}));
    let uri = library.open(&mut client, "stocks.prep");
    let stock = client.ask("textDocument/prepareCallHierarchy", at(&uri, 0, 12))["result"][0].clone();
    assert_eq!(stock["name"], "Salt stock");
    let into = client.ask("callHierarchy/incomingCalls", json!({ "item": stock }))["result"].clone();
    assert_eq!(into[0]["from"]["name"], "Saline µ", "{into}");
    assert_eq!(into[0]["fromRanges"][0]["start"], json!({ "line": 4, "character": 15 }));
    let made = client.ask("callHierarchy/outgoingCalls", json!({ "item": into[0]["from"] }))["result"].clone();
    let names: Vec<&str> = made.as_array().unwrap().iter().map(|one| one["to"]["name"].as_str().unwrap()).collect();
    assert_eq!(names, ["Salt stock", "water"]);
    // A substance of the built-in library is a thing like any other.
    let salt = client.ask("textDocument/prepareCallHierarchy", at(&uri, 2, 17))["result"][0].clone();
    let into = client.ask("callHierarchy/incomingCalls", json!({ "item": salt }))["result"].clone();
    let names: Vec<&str> = into.as_array().unwrap().iter().map(|one| one["from"]["name"].as_str().unwrap()).collect();
    assert_eq!(names, ["Fraction", "Salt stock"]);
    client.leave();
}

#[test]
fn lenses_tell_places_or_words() {
    let library = Library::new("lenses");
    let mut client = library.client(json!({ "experimental": { "scrupleShowUses": true } }));
    let uri = library.open(&mut client, "stocks.prep");
    let lenses = client.ask("textDocument/codeLens", json!({ "textDocument": { "uri": uri } }))["result"].clone();
    assert!(lenses[0]["command"]["title"].as_str().unwrap().starts_with("pH "), "{lenses}");
    let used = &lenses[1]["command"];
    assert_eq!((&used["title"], &used["command"]), (&json!("used by Saline µ"), &json!("scruple.showUses")));
    assert_eq!(used["arguments"][2][0]["uri"], library.uri("buffers.prep").as_str());
    client.leave();

    let mut client = library.client(json!({}));
    let uri = library.open(&mut client, "stocks.prep");
    let lenses = client.ask("textDocument/codeLens", json!({ "textDocument": { "uri": uri } }))["result"].clone();
    let command = &lenses[1]["command"];
    let done = client.ask("workspace/executeCommand", json!({ "command": command["command"], "arguments": command["arguments"] }));
    assert_eq!(done["result"], Value::Null, "{done}");
    let shown = client.told("window/showMessage")["params"]["message"].as_str().unwrap().to_owned();
    assert!(shown.contains("Salt stock") && shown.contains("Saline µ (buffers.prep:5)"), "{shown}");
    let refused = client.ask("workspace/executeCommand", json!({ "command": "scruple.tell", "arguments": [] }));
    assert!(refused.get("error").is_some());
    client.leave();
}

#[test]
fn the_page_of_a_completion_is_fetched_when_it_is_looked_at() {
    let library = Library::new("resolve");
    let item = json!({ "resolveSupport": { "properties": ["documentation"] }, "documentationFormat": ["markdown"] });
    let mut client = library.client(json!({ "textDocument": { "completion": { "completionItem": item } } }));
    let uri = library.uri("new.prep");
    client.open(&uri, "solution A\n    1 g        sodium chl\n");
    let offered = client.ask("textDocument/completion", at(&uri, 1, 25))["result"].clone();
    let item = offered["items"].as_array().unwrap().iter().find(|item| item["label"] == "sodium chloride").unwrap().clone();
    assert!(item.get("documentation").is_none(), "{item}");
    let resolved = client.ask("completionItem/resolve", item)["result"].clone();
    // 58.44 g/mol by the standard atomic weights (IUPAC 2021).
    assert!(resolved["documentation"]["value"].as_str().unwrap().contains("58.44 g/mol"), "{resolved}");
    client.leave();
}

#[test]
fn a_statement_shows_how_it_is_written() {
    let library = Library::new("signature");
    let mut client = library.client(json!({}));
    let uri = library.open(&mut client, "stocks.prep");
    let help = client.ask("textDocument/signatureHelp", at(&uri, 3, 24))["result"].clone();
    assert_eq!(help["signatures"][0]["label"], "q.s. NAME to TARGET");
    assert_eq!(help["activeParameter"], 1, "{help}");
    client.leave();
}

#[test]
fn the_sheet_of_the_recipe_under_the_cursor_is_told() {
    let library = Library::new("sheet");
    let mut client = library.client(json!({}));
    let uri = library.open(&mut client, "buffers.prep");
    let sheet = client.ask("scruple/sheet", at(&uri, 3, 6))["result"].clone();
    assert_eq!(sheet["name"], "Saline µ");
    let text = sheet["markdown"].as_str().unwrap();
    assert!(text.contains("# Saline µ") && text.contains("Salt stock") && !text.contains("Fraction"), "{text}");
    assert_eq!(client.ask("scruple/sheet", at(&uri, 0, 0))["result"], Value::Null);
    client.leave();
}
