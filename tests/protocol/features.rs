//! What an editor asks about a recipe, end to end: the conversion of places, what each client can show, changes that reach
//! other files. What the answers say is the editor features' own affair, tested there.

use std::fs;
use std::path::PathBuf;

use serde_json::{Value, json};

use crate::client::Client;

/// A folder with a small library of recipes, removed at the end.
pub struct Library {
    /// Where it is.
    pub folder: PathBuf,
}

impl Library {
    /// A new one.
    pub fn new(name: &str) -> Library {
        let folder = std::env::temp_dir().join(format!("scruple-protocol-{name}-{}", std::process::id()));
        let _ = fs::remove_dir_all(&folder);
        fs::create_dir_all(folder.join("cache")).unwrap();
        fs::write(folder.join("scruple.toml"), "language = 1\n").unwrap();
        fs::write(folder.join("stocks.prep"), STOCKS).unwrap();
        fs::write(folder.join("buffers.prep"), BUFFERS).unwrap();
        Library { folder: folder.canonicalize().unwrap() }
    }

    /// The address of a file.
    pub fn uri(&self, file: &str) -> String {
        format!("file://{}/{file}", self.folder.display())
    }

    /// A client that has it open.
    pub fn client(&self, mut capabilities: Value) -> Client {
        let cache = self.folder.join("cache");
        let mut client = Client::start_with(&[("XDG_CACHE_HOME", cache.to_str().unwrap())]);
        if capabilities.get("textDocument").is_none() {
            capabilities["textDocument"] = json!({});
        }
        client.initialize(json!({ "processId": null, "rootUri": self.uri(""), "capabilities": capabilities }));
        client
    }

    /// Opens one of its files.
    pub fn open(&self, client: &mut Client, file: &str) -> String {
        let uri = self.uri(file);
        client.open(&uri, &fs::read_to_string(self.folder.join(file)).unwrap());
        uri
    }
}

impl Drop for Library {
    fn drop(&mut self) {
        let _ = fs::remove_dir_all(&self.folder);
    }
}

const STOCKS: &str = "\
solution Salt stock
    made at    20 °C
    58.44 g    sodium chloride
    q.s.       water to 1 L
";

const BUFFERS: &str = "\
use \"stocks.prep\"

solution Saline µ
    made at    20 °C
    10 mL      Salt stock
    q.s.       water to 100 mL
    expect     total chloride 95 to 105 mmol/L

solution Fraction
    made at    20 °C
    50 mmol/L  sodium chloride
    q.s.       water to 1 L
";

/// A place, as requests name it.
pub fn at(uri: &str, line: u32, character: u32) -> Value {
    json!({ "textDocument": { "uri": uri }, "position": { "line": line, "character": character } })
}

/// The codes of findings.
pub fn codes(findings: &[Value]) -> Vec<&str> {
    findings.iter().filter_map(|finding| finding["code"].as_str()).collect()
}

/// The text of a range, counting UTF-16 code units as the server does where nothing else is agreed.
fn text_of(text: &str, range: &Value) -> String {
    let line = text.lines().nth(range["start"]["line"].as_u64().unwrap() as usize).unwrap();
    let units: Vec<u16> = line.encode_utf16().collect();
    let column = |end: &str| range[end]["character"].as_u64().unwrap() as usize;
    String::from_utf16(&units[column("start")..column("end")]).unwrap()
}

#[test]
fn a_hover_is_markdown_only_for_clients_that_draw_it() {
    let library = Library::new("hover");
    for (formats, kind) in [(json!(["markdown", "plaintext"]), "markdown"), (json!(["plaintext"]), "plaintext")] {
        let mut client = library.client(json!({ "textDocument": { "hover": { "contentFormat": formats } } }));
        let uri = library.open(&mut client, "stocks.prep");
        let hover = client.ask("textDocument/hover", at(&uri, 2, 17))["result"].clone();
        assert_eq!(hover["contents"]["kind"], kind);
        // Sodium chloride, 58.44 g/mol (IUPAC standard atomic weights 2021).
        assert!(hover["contents"]["value"].as_str().unwrap().contains("58.44"), "{hover}");
        assert_eq!(text_of(STOCKS, &hover["range"]), "sodium chloride");
        assert_eq!(client.ask("textDocument/hover", at(&library.uri("nowhere.prep"), 0, 0))["result"], Value::Null);
        client.leave();
    }
}

#[test]
fn the_built_in_library_opens_as_a_read_only_copy() {
    let library = Library::new("copy");
    let mut client = library.client(json!({}));
    let uri = library.open(&mut client, "stocks.prep");
    let found = client.ask("textDocument/definition", at(&uri, 2, 17))["result"][0].clone();
    let address = found["uri"].as_str().unwrap();
    let path = PathBuf::from(address.strip_prefix("file://").unwrap());
    assert!(path.starts_with(library.folder.join("cache/scruple").join(env!("CARGO_PKG_VERSION"))), "{address}");
    assert!(fs::metadata(&path).unwrap().permissions().readonly());
    let text = fs::read_to_string(&path).unwrap();
    assert!(text_of(&text, &found["range"]).contains("sodium chloride"));
    // The copy is a page like any other: it has no findings, and its names lead on.
    client.open(address, &text);
    assert!(client.findings(address, 1).is_empty());
    let name = &found["range"]["start"];
    let hover = client.ask("textDocument/hover", json!({ "textDocument": { "uri": address }, "position": name }));
    assert!(hover["result"]["contents"]["value"].as_str().unwrap().contains("58.44"), "{hover}");
    client.close(address);
    client.leave();
}

#[test]
fn a_client_that_opens_pages_itself_gets_their_addresses_and_texts() {
    let library = Library::new("virtual");
    let links = json!({ "definition": { "linkSupport": true }, "publishDiagnostics": { "codeDescriptionSupport": true } });
    let mut client = library.client(json!({ "textDocument": links, "experimental": { "scrupleLibrary": true } }));
    let uri = library.open(&mut client, "stocks.prep");
    let found = client.ask("textDocument/definition", at(&uri, 2, 17))["result"][0].clone();
    let address = found["targetUri"].as_str().unwrap();
    assert!(address.starts_with("scruple-library:/"), "{address}");
    assert_eq!(text_of(STOCKS, &found["originSelectionRange"]), "sodium chloride");
    let page = client.ask("scruple/libraryText", json!({ "uri": address }));
    let text = page["result"]["text"].as_str().unwrap();
    assert!(text_of(text, &found["targetSelectionRange"]).contains("sodium chloride"));
    assert!(fs::read_dir(library.folder.join("cache")).unwrap().next().is_none(), "no copies were needed");

    client.edit(&uri, 2, [2, 4, 2, 9], "58,44");
    let findings = client.findings(&uri, 2);
    let page = findings.iter().find(|finding| finding["code"] == "decimal-comma").unwrap()["codeDescription"]["href"].clone();
    assert!(!client.ask("scruple/libraryText", json!({ "uri": page }))["result"]["text"].as_str().unwrap().is_empty());
    for wrong in ["scruple-library:/no-such.prep", "scruple-library:/../../etc/passwd", "file:///etc/passwd"] {
        assert_eq!(client.ask("scruple/libraryText", json!({ "uri": wrong }))["error"]["code"], -32602);
    }
    client.leave();
}

#[test]
fn columns_are_those_that_were_agreed() {
    let library = Library::new("columns");
    for (encodings, column) in [(json!(["utf-16"]), 22), (json!(["utf-8"]), 24)] {
        let mut client = library.client(json!({ "general": { "positionEncodings": encodings } }));
        let uri = library.uri("columns.prep");
        client.open(&uri, "solution µ\n    1 mL 𝛂 µ  Salt\u{b5} 1,5 g\n");
        client.findings(&uri, 1);
        client.edit(&uri, 2, [1, 0, 1, 99], "    step       µ 𝛂, 3 g");
        client.edit(&uri, 3, [1, column, 1, column + 1], "4");
        client.findings(&uri, 3);
        let tokens = client.ask("textDocument/semanticTokens/full", json!({ "textDocument": { "uri": uri } }));
        assert!(tokens["result"]["data"].as_array().unwrap().len() >= 10, "{tokens}");
        client.leave();
    }
}

#[test]
fn a_finding_comes_with_its_fix_and_goes_with_it() {
    let library = Library::new("fix");
    let capabilities = json!({
        "textDocument": { "codeAction": { "codeActionLiteralSupport": { "codeActionKind": { "valueSet": ["quickfix"] } } } },
    });
    let mut client = library.client(capabilities);
    let uri = library.open(&mut client, "stocks.prep");
    assert!(!codes(&client.findings(&uri, 1)).contains(&"decimal-comma"));
    client.edit(&uri, 2, [2, 4, 2, 9], "58,44");
    let findings = client.findings(&uri, 2);
    let finding = findings.iter().find(|finding| finding["code"] == "decimal-comma").unwrap();
    assert_eq!((&finding["severity"], &finding["source"]), (&json!(1), &json!("scruple")));
    assert!(finding.get("codeDescription").is_none() && finding.get("relatedInformation").is_none(), "not announced");
    let context = json!({ "diagnostics": [finding], "only": ["quickfix"] });
    let params = json!({ "textDocument": { "uri": uri }, "range": finding["range"], "context": context });
    let actions = client.ask("textDocument/codeAction", params)["result"].clone();
    let action = &actions[0];
    assert_eq!(action["kind"], "quickfix");
    assert_eq!(action["diagnostics"][0]["code"], "decimal-comma");
    let edit = &action["edit"]["changes"][&uri][0];
    client.tell(
        "textDocument/didChange",
        json!({
            "textDocument": { "uri": uri, "version": 3 },
            "contentChanges": [{ "range": edit["range"], "text": edit["newText"] }],
        }),
    );
    assert!(!codes(&client.findings(&uri, 3)).contains(&"decimal-comma"));
    client.leave();
}

#[test]
fn a_change_in_one_file_is_told_of_in_those_that_use_it() {
    let library = Library::new("across");
    let mut client = library.client(json!({ "workspace": { "inlayHint": { "refreshSupport": true } } }));
    let buffers = library.open(&mut client, "buffers.prep");
    assert!(!codes(&client.findings(&buffers, 1)).contains(&"expectation-fails"));
    let stocks = library.open(&mut client, "stocks.prep");
    client.findings(&stocks, 1);
    client.edit(&stocks, 2, [2, 4, 2, 9], "99.99");
    // The text of buffers.prep is still at version 1, and its findings are told anew.
    let told = client.wait(|message| {
        message["method"] == "textDocument/publishDiagnostics"
            && message["params"]["uri"] == buffers.as_str()
            && message["params"]["diagnostics"].as_array().is_some_and(|found| codes(found).contains(&"expectation-fails"))
    });
    assert_eq!(told["params"]["version"], 1);
    let refresh = client.told("workspace/inlayHint/refresh");
    client.send(&json!({ "jsonrpc": "2.0", "id": refresh["id"], "result": null }));
    // A closed file counts as it is on disk.
    client.close(&stocks);
    client.wait(|message| {
        message["method"] == "textDocument/publishDiagnostics"
            && message["params"]["uri"] == buffers.as_str()
            && message["params"]["diagnostics"].as_array().is_some_and(|found| !codes(found).contains(&"expectation-fails"))
    });
    client.leave();
}

#[test]
fn files_on_disk_are_read_again_when_the_client_says_so_or_saves() {
    for watches in [true, false] {
        let library = Library::new(if watches { "watched" } else { "saved" });
        let mut client = library
            .client(json!({ "workspace": { "didChangeWatchedFiles": { "dynamicRegistration": watches } } }));
        if watches {
            let asked = client.told("client/registerCapability");
            assert_eq!(asked["params"]["registrations"][0]["method"], "workspace/didChangeWatchedFiles");
            client.send(&json!({ "jsonrpc": "2.0", "id": asked["id"], "result": null }));
        }
        let buffers = library.open(&mut client, "buffers.prep");
        assert!(!codes(&client.findings(&buffers, 1)).contains(&"expectation-fails"));
        fs::write(library.folder.join("stocks.prep"), STOCKS.replace("58.44", "99.99")).unwrap();
        if watches {
            let changes = json!({ "changes": [{ "uri": library.uri("stocks.prep"), "type": 2 }] });
            client.tell("workspace/didChangeWatchedFiles", changes);
        } else {
            client.tell("textDocument/didSave", json!({ "textDocument": { "uri": buffers } }));
        }
        assert!(codes(&client.findings(&buffers, 1)).contains(&"expectation-fails"));
        client.leave();
    }
}

#[test]
fn a_configuration_that_cannot_be_read_is_told_of_at_its_line() {
    let library = Library::new("configuration");
    fs::write(library.folder.join("scruple.toml"), "language = 1\ncolour = \"blue\"\n").unwrap();
    let mut client = library.client(json!({ "workspace": { "didChangeWatchedFiles": { "dynamicRegistration": true } } }));
    let uri = library.uri("scruple.toml");
    let told = client.wait(|message| message["params"]["uri"] == uri.as_str());
    assert_eq!(told["params"]["diagnostics"][0]["range"]["start"]["line"], 1);
    fs::write(library.folder.join("scruple.toml"), "language = 1\n").unwrap();
    client.tell("workspace/didChangeWatchedFiles", json!({ "changes": [{ "uri": uri, "type": 2 }] }));
    let told = client.wait(|message| message["params"]["uri"] == uri.as_str());
    assert_eq!(told["params"]["diagnostics"], json!([]));
    client.leave();
}

#[test]
fn a_file_outside_every_library_is_read_with_what_it_uses() {
    let library = Library::new("alone");
    fs::remove_file(library.folder.join("scruple.toml")).unwrap();
    let mut client = Client::initialized(json!({}));
    let uri = library.open(&mut client, "buffers.prep");
    let findings = client.findings(&uri, 1);
    assert!(!codes(&findings).contains(&"file-not-found") && !codes(&findings).contains(&"unknown-name"), "{findings:?}");
    client.leave();
}

#[test]
fn values_beside_the_text_can_be_switched_off_by_kind() {
    let library = Library::new("hints");
    let whole = json!({ "start": { "line": 0, "character": 0 }, "end": { "line": 99, "character": 0 } });
    let labels = |client: &mut Client, uri: &str| -> Vec<String> {
        let hints = client.ask("textDocument/inlayHint", json!({ "textDocument": { "uri": uri }, "range": whole }));
        let hints = hints["result"].as_array().unwrap().clone();
        hints.iter().map(|hint| hint["label"].as_str().unwrap().to_owned()).collect()
    };
    let mut client = library.client(json!({}));
    let uri = library.open(&mut client, "buffers.prep");
    // 0.05 mol of sodium chloride, 58.44 g/mol, in a litre.
    let shown = labels(&mut client, &uri);
    assert!(shown.iter().any(|label| label.contains("2.922 g")), "{shown:?}");
    let settings = json!({ "settings": { "scruple": { "inlayHints": { "measure": false } } } });
    client.tell("workspace/didChangeConfiguration", settings);
    let fewer = labels(&mut client, &uri);
    assert!(!fewer.is_empty() && fewer.len() < shown.len() && !fewer.iter().any(|label| label.contains("2.922 g")), "{fewer:?}");
    client.tell("workspace/didChangeConfiguration", json!({ "settings": { "scruple": { "inlayHints": false } } }));
    assert!(labels(&mut client, &uri).is_empty());
    client.leave();

    // A client that can be asked is asked, at the beginning and after each change.
    let mut client = library.client(json!({ "workspace": { "configuration": true } }));
    for hints in [json!({ "enabled": false }), json!({ "enabled": true })] {
        let asked = client.told("workspace/configuration");
        assert_eq!(asked["params"]["items"][0]["section"], "scruple");
        let enabled = hints["enabled"].as_bool().unwrap();
        client.send(&json!({ "jsonrpc": "2.0", "id": asked["id"], "result": [{ "inlayHints": hints }] }));
        // The answer takes its own way to the world, so the hints follow soon, not at once.
        let uri = library.open(&mut client, "buffers.prep");
        let mut tries = 0;
        while labels(&mut client, &uri).is_empty() == enabled {
            tries += 1;
            assert!(tries < 1_000, "the settings had no effect");
        }
        client.tell("workspace/didChangeConfiguration", json!({ "settings": null }));
    }
    client.told("workspace/configuration");
    client.leave();
}

#[test]
fn a_name_is_changed_in_every_file_or_not_at_all() {
    let library = Library::new("rename");
    let capabilities = json!({
        "textDocument": { "rename": { "prepareSupport": true } },
        "workspace": { "workspaceEdit": { "documentChanges": true } },
    });
    let mut client = library.client(capabilities);
    let buffers = library.open(&mut client, "buffers.prep");
    let place = at(&buffers, 4, 17);
    let prepared = client.ask("textDocument/prepareRename", place.clone())["result"].clone();
    assert_eq!(prepared["placeholder"], "Salt stock");
    assert_eq!(text_of(BUFFERS, &prepared["range"]), "Salt stock");
    let renamed = |new: &str| {
        let mut params = place.clone();
        params["newName"] = json!(new);
        params
    };
    let edit = client.ask("textDocument/rename", renamed("Brine"))["result"].clone();
    let changes = edit["documentChanges"].as_array().unwrap();
    assert_eq!(changes.len(), 2);
    for change in changes {
        let open = change["textDocument"]["uri"] == buffers.as_str();
        assert_eq!(change["textDocument"]["version"], if open { json!(1) } else { Value::Null });
        assert_eq!(change["edits"][0]["newText"], "Brine");
    }
    let refused = client.ask("textDocument/rename", renamed("Fraction"));
    assert_eq!(refused["error"]["code"], -32803);
    assert!(!refused["error"]["message"].as_str().unwrap().is_empty());
    client.leave();
}

#[test]
fn an_outline_is_nested_only_for_clients_that_show_that() {
    let library = Library::new("outline");
    let document = |uri: &str| json!({ "textDocument": { "uri": uri } });
    let nests = json!({ "textDocument": { "documentSymbol": { "hierarchicalDocumentSymbolSupport": true } } });
    let mut client = library.client(nests);
    let uri = library.open(&mut client, "buffers.prep");
    let symbols = client.ask("textDocument/documentSymbol", document(&uri))["result"].clone();
    assert_eq!((&symbols[0]["name"], &symbols[0]["children"][0]["name"]), (&json!("Saline µ"), &json!("Salt stock")));
    assert_eq!(text_of(BUFFERS, &symbols[0]["selectionRange"]), "Saline µ");
    client.leave();
    let mut client = library.client(json!({}));
    let uri = library.open(&mut client, "buffers.prep");
    let symbols = client.ask("textDocument/documentSymbol", document(&uri))["result"].clone();
    assert_eq!(symbols[0]["location"]["uri"], uri.as_str());
    assert_eq!(symbols[1]["containerName"], "Saline µ");
    let found = client.ask("workspace/symbol", json!({ "query": "stock" }))["result"].clone();
    assert_eq!(found[0]["location"]["uri"], library.uri("stocks.prep"));
    client.leave();
}

#[test]
fn places_to_go_to_fold_and_select() {
    let library = Library::new("places");
    let mut client = library.client(json!({}));
    let uri = library.open(&mut client, "buffers.prep");
    let document = json!({ "textDocument": { "uri": uri } });
    let link = client.ask("textDocument/documentLink", document.clone())["result"][0].clone();
    assert_eq!(link["target"], library.uri("stocks.prep"));
    assert_eq!(text_of(BUFFERS, &link["range"]), "stocks.prep");
    let folds = client.ask("textDocument/foldingRange", document)["result"].clone();
    assert!(folds.as_array().unwrap().iter().any(|fold| fold["startLine"] == 2 && fold["endLine"] == 6), "{folds}");
    let mut ask = at(&uri, 4, 17);
    let highlights = client.ask("textDocument/documentHighlight", ask.clone())["result"].clone();
    assert_eq!(text_of(BUFFERS, &highlights[0]["range"]), "Salt stock");
    ask["context"] = json!({ "includeDeclaration": true });
    let references = client.ask("textDocument/references", ask)["result"].clone();
    let files: Vec<&str> = references.as_array().unwrap().iter().filter_map(|place| place["uri"].as_str()).collect();
    assert!(files.contains(&uri.as_str()) && files.contains(&library.uri("stocks.prep").as_str()), "{files:?}");
    let positions = json!({ "textDocument": { "uri": uri }, "positions": [{ "line": 4, "character": 17 }, { "line": 99, "character": 0 }] });
    let grown = client.ask("textDocument/selectionRange", positions)["result"].clone();
    assert_eq!(grown.as_array().unwrap().len(), 2, "one for each position");
    assert!(grown[0]["parent"]["parent"].is_object(), "{grown}");
    client.leave();
}

#[test]
fn a_half_written_name_is_completed_in_place() {
    let library = Library::new("completion");
    let mut client = library.client(json!({}));
    let uri = library.open(&mut client, "stocks.prep");
    client.edit(&uri, 2, [3, 0, 3, 0], "    2 µg       sodium chlor\n");
    let offered = client.ask("textDocument/completion", at(&uri, 3, 27))["result"].clone();
    let item = offered["items"].as_array().unwrap().iter().find(|item| item["label"] == "sodium chloride").unwrap();
    let edit = &item["textEdit"];
    assert_eq!((&edit["newText"], &edit["range"]["start"]["character"]), (&json!("sodium chloride"), &json!(15)));
    assert_eq!(edit["range"]["end"], json!({ "line": 3, "character": 27 }));
    client.leave();
}
