//! Open texts: in step with the editor, whatever it calls them and however fast it types.

use serde_json::json;

use crate::client::Client;

const URI: &str = "file:///lab/a.prep";

#[test]
fn every_version_is_answered_for_and_none_goes_back() {
    let mut client = Client::initialized(json!({}));
    client.open(URI, "");
    for version in 2..=300 {
        client.edit(URI, version, [0, 0, 0, 0], "#");
    }
    client.findings(URI, 300);
    let versions: Vec<i64> = client
        .settle()
        .iter()
        .filter(|message| message["method"] == "textDocument/publishDiagnostics")
        .filter_map(|message| message["params"]["version"].as_i64())
        .collect();
    assert!(versions.is_sorted(), "{versions:?}");
    client.leave();
}

#[test]
fn a_clean_text_has_no_findings_and_a_closed_one_none_either() {
    let mut client = Client::initialized(json!({}));
    client.open(URI, "# nothing\n");
    assert!(client.findings(URI, 1).is_empty());
    client.close(URI);
    let closed = client.told("textDocument/publishDiagnostics");
    assert_eq!(closed["params"]["uri"], URI);
    assert_eq!(closed["params"]["diagnostics"], json!([]));
    client.edit(URI, 2, [0, 0, 0, 0], "a change to what is closed");
    client.close(URI);
    client.leave();
}

#[test]
fn the_client_hears_its_own_spelling_of_an_address() {
    let mut client = Client::initialized(json!({}));
    for uri in ["file:///c%3A/Lab%20one/%C2%B5.prep", "untitled:Untitled-1", "file:///lab/a+b.prep"] {
        client.open(uri, "# µ\n");
        assert!(client.findings(uri, 1).is_empty());
    }
    client.edit("file:///C:/Lab%20one/µ.prep", 2, [0, 0, 0, 0], "# ");
    client.findings("file:///c%3A/Lab%20one/%C2%B5.prep", 2);
    client.leave();
}

#[test]
fn places_outside_the_text_are_moved_into_it() {
    let mut client = Client::initialized(json!({}));
    client.open(URI, "# 𝛂\r\n# µ");
    for (version, range) in [[0, 99, 0, 99], [99, 0, 99, 0], [0, 3, 0, 3], [1, 0, 0, 0], [0, 0, u32::MAX, u32::MAX]].into_iter().enumerate() {
        client.edit(URI, version as i32 + 2, range, "# x");
    }
    client.findings(URI, 6);
    client.leave();
}
