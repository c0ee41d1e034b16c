//! A whole session in a real Neovim: open a file, see findings and hints, fix, edit, hover.
//! What is done and looked for stands in `editors/session.lua`; the plug-in is the one that
//! users get.

use std::io::Write;
use std::path::Path;
use std::process::{Command, Stdio};
use std::time::{Duration, Instant};

/// Neovim and the script have limits of their own; this one is for when both hang.
const LIMIT: Duration = Duration::from_secs(300);

fn project(path: &str) -> std::path::PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join(path)
}

/// The path of a Neovim that starts, installed where it is not yet.
fn neovim() -> String {
    let install = Command::new(project("tests/editors/install-neovim"))
        .output()
        .expect("the script that installs Neovim runs");
    assert!(
        install.status.success(),
        "Neovim could not be installed (it needs python3 with venv, and the package index):\n{}",
        String::from_utf8_lossy(&install.stderr)
    );
    String::from_utf8_lossy(&install.stdout).trim().to_owned()
}

#[test]
fn a_file_is_opened_fixed_and_edited_in_neovim() {
    let neovim = neovim();

    // The plant's file, with one sum written without its spaces.
    let folder = tempfile::tempdir().expect("a folder");
    let scrubber = project("tests/problems/plant/offgas_scrubber.lyate");
    let text = std::fs::read_to_string(&scrubber).expect("the file of the scrubber");
    let mistaken = text.replace("<=> NH3 + H+", "<=> NH3+H+");
    assert_ne!(text, mistaken, "the file of the scrubber has no such sum any more");
    std::fs::write(folder.path().join("sump.lyate"), mistaken).expect("a file");

    // The built binary first on the path, as a user has an installed one.
    let binary = Path::new(env!("CARGO_BIN_EXE_lyate"));
    let mut path = binary.parent().expect("a folder").as_os_str().to_owned();
    path.push(":");
    path.push(std::env::var_os("PATH").unwrap_or_default());

    let printed = folder.path().join("printed");
    let file = std::fs::File::create(&printed).expect("a file for what is printed");
    let mut command = Command::new(&neovim);
    command
        .args(["--clean", "--headless", "-i", "NONE", "-n", "--cmd"])
        .arg(format!("set runtimepath^={}", project("editors/neovim").display()))
        .arg("-c")
        .arg(format!("luafile {}", project("tests/editors/session.lua").display()))
        .current_dir(folder.path())
        .env("PATH", path)
        // Nothing of the user's own, and nothing left behind.
        .env("NVIM_LOG_FILE", folder.path().join("log"))
        .stdin(Stdio::null())
        .stdout(file.try_clone().expect("the same file"))
        .stderr(file);
    for kind in ["CONFIG", "DATA", "STATE", "CACHE"] {
        command.env(format!("XDG_{kind}_HOME"), folder.path().join("xdg"));
    }
    let mut running = command.spawn().expect("Neovim starts");
    let start = Instant::now();
    let status = loop {
        if let Some(status) = running.try_wait().expect("Neovim runs") {
            break Some(status);
        }
        if start.elapsed() > LIMIT {
            running.kill().expect("Neovim ends");
            running.wait().expect("Neovim ends");
            break None;
        }
        std::thread::sleep(Duration::from_millis(20));
    };

    let printed = std::fs::read(&printed).expect("what was printed");
    let printed = String::from_utf8_lossy(&printed);
    println!("{printed}");
    // Past the test's own capture, so that every run says which editor it ran in.
    let version = printed.lines().next().unwrap_or_default();
    let _ = writeln!(std::io::stderr(), "the session ran in {version}");
    assert!(
        status.is_some_and(|status| status.success()) && printed.lines().any(|l| l == "DONE"),
        "the session in Neovim ({neovim}) failed, {}:\n{printed}",
        status.map_or("out of time".into(), |status| status.to_string()),
    );
}
