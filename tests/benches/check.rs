//! How long a full check takes: lexing, parsing, resolving, solving and every rule, of
//! files of a hundred, a thousand and ten thousand lines, cold and after an edit.

use std::hint::black_box;
use std::path::Path;
use std::process::Command;
use std::sync::atomic::AtomicBool;

use criterion::{BenchmarkId, Criterion, Throughput, criterion_group, criterion_main};
use lyate::problem::files::Disk;
use lyate::problem::import::Imports;
use lyate::rules::check::{Checked, Surroundings, check};
use lyate::text::tree::Document;

/// The files that `tests/benches/files.py` writes.
fn file(lines: usize) -> String {
    let here = Path::new(env!("CARGO_MANIFEST_DIR"));
    let folder = here.join("target/bench-files");
    let script = here.join("tests/benches/files.py");
    let made = Command::new("python3").arg(script).arg(&folder).status();
    assert!(made.is_ok_and(|status| status.success()), "python3 writes the files");
    std::fs::read_to_string(folder.join(format!("points_{lines}.lyate"))).expect("a file")
}

fn checked(text: &str, imports: &Imports, previous: Option<&Checked>) -> Checked {
    let document = match previous {
        Some(previous) => Document::parse_with(text, &previous.document),
        None => Document::parse(text),
    };
    let around = Surroundings {
        path: None,
        roots: &[],
        files: &Disk,
        imports,
        cancel: &AtomicBool::new(false),
    };
    check(document, &around, previous).expect("nothing cancels it")
}

fn benches(criterion: &mut Criterion) {
    let mut group = criterion.benchmark_group("check");
    group.sample_size(20);
    for lines in [100, 1_000, 10_000] {
        let text = file(lines);
        let imports = Imports::default();
        let first = checked(&text, &imports, None);
        let solved = first.outcomes.iter().filter(|outcome| outcome.solved().is_some()).count();
        assert_eq!(solved, first.outcomes.len(), "every case is solved");
        group.throughput(Throughput::Elements(lines as u64));
        group.bench_function(BenchmarkId::new("cold", lines), |bench| {
            bench.iter(|| black_box(checked(&text, &imports, None)));
        });
        // The last dose in the file changes: one case is new.
        let at = text.rfind("add NaOH ").expect("a dose") + "add NaOH ".len();
        let edited = format!("{}1{}", &text[..at], &text[at..]);
        group.bench_function(BenchmarkId::new("after an edit", lines), |bench| {
            bench.iter(|| black_box(checked(&edited, &imports, Some(&first))));
        });
        // The temperature of the base changes: every case that has none of its own is new,
        // and every case is looked at again.
        let warmer = text.replacen("temperature 18 °C", "temperature 18.5 °C", 1);
        group.bench_function(BenchmarkId::new("after an edit of the base", lines), |bench| {
            bench.iter(|| black_box(checked(&warmer, &imports, Some(&first))));
        });
    }
    group.finish();
}

criterion_group!(all, benches);
criterion_main!(all);
