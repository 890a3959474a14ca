//! A small laboratory of its own for these tests, with exact numbers, and the program run in it.

use std::fs;
use std::path::{Path, PathBuf};
use std::process::{Command, Output, Stdio};

/// A stock that other recipes take.
pub const STOCKS: &str = "# Stocks of the bench.
solution Salt stock
    document   T-S-01, revision 1
    made at    25 °C
    116.9 g    sodium chloride
    q.s.       water to 1 L

solution Phosphate stock
    document   T-S-02, revision 1
    made at    25 °C
    31.20 g    sodium dihydrogen phosphate dihydrate
    35.60 g    disodium hydrogen phosphate dihydrate
    q.s.       water to 1 L
";

/// Recipes that use the stocks.
pub const BUFFERS: &str = "# Buffers of the bench.
use \"stocks.prep\"

solution Wash buffer
    document   T-B-01, revision 1
    made at    25 °C
    30 mL      Salt stock
    50 mL      Phosphate stock
    q.s.       water to 1 L
    expect     pH 6.6 to 7.0

solution Loading buffer
    document   T-B-02, revision 1
    made at    25 °C
    800 mL     water
    2.423 g    Tris
    q.s.       1 mol/L hydrochloric acid to pH 8.10
    q.s.       water to 1 L
    step       Filter through a 0.22 µm membrane.
    expect     buffer capacity at least 5 mmol/L

solution Formate eluent
    document   T-B-03, revision 1
    made at    25 °C
    1 kg       water
    6.801 g    sodium formate
    4.603 g    formic acid
";

/// Where the folders of these tests stand. Git looks for repositories below it only, for it may itself lie in one.
fn laboratories() -> PathBuf {
    Path::new(env!("CARGO_TARGET_TMPDIR")).join("review")
}

/// A folder that holds a repository with these files and one commit.
pub fn repository(name: &str) -> Repository {
    let folder = laboratories().join(name);
    let _ = fs::remove_dir_all(&folder);
    fs::create_dir_all(&folder).unwrap();
    let repository = Repository { folder };
    repository.git(&["init", "--quiet", "--initial-branch=main"]);
    repository.write("scruple.toml", "language = 1\n");
    repository.write("stocks.prep", STOCKS);
    repository.write("buffers.prep", BUFFERS);
    repository.commit("The first recipes");
    repository
}

/// A repository in a folder of the test.
pub struct Repository {
    pub folder: PathBuf,
}

impl Repository {
    pub fn path(&self, name: &str) -> PathBuf {
        self.folder.join(name)
    }

    pub fn write(&self, name: &str, text: &str) {
        let path = self.path(name);
        fs::create_dir_all(path.parent().unwrap()).unwrap();
        fs::write(path, text).unwrap();
    }

    pub fn read(&self, name: &str) -> String {
        fs::read_to_string(self.path(name)).unwrap()
    }

    /// Replaces words that stand exactly once in a file.
    pub fn edit(&self, name: &str, from: &str, to: &str) {
        let text = self.read(name);
        assert_eq!(text.matches(from).count(), 1, "{from} in {name}");
        self.write(name, &text.replace(from, to));
    }

    /// Runs git without the settings of whoever runs the test.
    pub fn git(&self, arguments: &[&str]) -> String {
        let output = self.git_output(arguments);
        assert!(output.status.success(), "git {arguments:?}: {}", String::from_utf8_lossy(&output.stderr));
        String::from_utf8(output.stdout).unwrap()
    }

    pub fn git_output(&self, arguments: &[&str]) -> Output {
        let mut command = Command::new("git");
        let program = Path::new(env!("CARGO_BIN_EXE_scruple")).parent().unwrap().to_owned();
        let path = std::env::join_paths(
            std::iter::once(program).chain(std::env::split_paths(&std::env::var_os("PATH").unwrap_or_default())),
        );
        command
            .current_dir(&self.folder)
            .args(["-c", "user.name=Mirela Tanase", "-c", "user.email=bench@example.org", "-c", "core.pager=cat"])
            .args(arguments)
            .env("PATH", path.unwrap())
            .env("GIT_CEILING_DIRECTORIES", laboratories())
            .env("GIT_CONFIG_GLOBAL", "/dev/null")
            .env("GIT_CONFIG_SYSTEM", "/dev/null")
            .env("GIT_AUTHOR_DATE", "2026-03-02T09:00:00Z")
            .env("GIT_COMMITTER_DATE", "2026-03-02T09:00:00Z")
            .stdin(Stdio::null());
        for variable in ["GIT_DIR", "GIT_INDEX_FILE", "GIT_WORK_TREE", "GIT_EXTERNAL_DIFF"] {
            command.env_remove(variable);
        }
        command.output().unwrap()
    }

    pub fn commit(&self, message: &str) {
        self.git(&["add", "--all"]);
        self.git(&["commit", "--quiet", "--message", message]);
    }

    pub fn run(&self, arguments: &[&str]) -> Output {
        self.run_in("", arguments)
    }

    /// Runs the program in a folder below.
    pub fn run_in(&self, below: &str, arguments: &[&str]) -> Output {
        let mut command = Command::new(env!("CARGO_BIN_EXE_scruple"));
        command.current_dir(self.folder.join(below)).args(arguments).stdin(Stdio::null());
        for variable in ["NO_COLOR", "CLICOLOR", "CLICOLOR_FORCE", "GIT_DIR", "GIT_INDEX_FILE", "GIT_WORK_TREE"] {
            command.env_remove(variable);
        }
        command
            .env("GIT_CEILING_DIRECTORIES", laboratories())
            .env("GIT_CONFIG_GLOBAL", "/dev/null")
            .env("GIT_CONFIG_SYSTEM", "/dev/null")
            .output()
            .unwrap()
    }

    /// What the program prints, where it ends with this code.
    pub fn prints(&self, code: i32, arguments: &[&str]) -> String {
        let output = self.run(arguments);
        let (out, err) = (text(&output.stdout), text(&output.stderr));
        assert_eq!(output.status.code(), Some(code), "{arguments:?}\n{out}\n{err}");
        out
    }

    pub fn json(&self, code: i32, arguments: &[&str]) -> serde_json::Value {
        serde_json::from_str(&self.prints(code, arguments)).unwrap()
    }
}

pub fn text(bytes: &[u8]) -> String {
    String::from_utf8(bytes.to_vec()).unwrap()
}
