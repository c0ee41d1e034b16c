//! How long reading takes: layout, lexing and parsing of whole files, and a file read
//! again after an edit of one statement.

use std::fmt::Write;
use std::hint::black_box;
use std::sync::Arc;

use criterion::{BenchmarkId, Criterion, Throughput, criterion_group, criterion_main};
use lyate::text::lines::Lines;
use lyate::text::tree::Document;

/// A file of `lines` lines or a few more: a plant's sumps, one case after another, no
/// two statements alike.
fn file(lines: usize) -> String {
    let mut text = String::from(
        "problem \"Sumps of the scrubber hall\"\n\nuse aqueous\n\ntemperature 18 °C\nactivity davies\n\n\
         component NH3 \"ammonia nitrogen\", SO4^2-, Na+\n\n",
    );
    let mut written = text.lines().count();
    let mut i = 0;
    while written < lines {
        i += 1;
        let before = text.len();
        let _ = write!(
            text,
            "# sump {i}\n\
             reaction NH4+ <=> NH3 + H+, pKa = {i}.25 ± 0.02, enthalpy = 52.1 kJ/mol, source \"sheet {i}\"\n\
             reaction HSO4- <=> SO4^2- + H+, log K(T) = -{i}.5 + 298.15 * (1/T - 1/{i}),\n    valid 0 to 60 °C\n\
             case \"sump {i}\"\n    temperature {i} °C\n\n    add (NH4)2SO4 {i} mmol/L\n    add NaOH {i}.5 mmol/L, giving Na+ + OH-\n    \
             balance charge\n        [H+] + [NH4+] + [Na+] = [OH-] + [HSO4-] + {i} [SO4^2-]\n    \
             expect pH = 9.{i} ± 0.03\n    expect [NH3] < {i} mg/L as N\n\n"
        );
        written += text[before..].lines().count();
    }
    text
}

fn parse(criterion: &mut Criterion) {
    for lines in [100, 1_000, 10_000] {
        let text: Arc<str> = file(lines).into();
        let document = Document::parse(Arc::clone(&text));
        assert!(document.statements().all(|placed| placed.parsed.problems.is_empty()));
        // The edit: another amount in the middle of the file.
        let amount = text[text.len() / 2..].find(" mmol/L").map_or(0, |at| at + text.len() / 2);
        let edited: Arc<str> = format!("{}7{}", &text[..amount], &text[amount..]).into();

        let mut group = criterion.benchmark_group("parse");
        group.throughput(Throughput::Bytes(text.len() as u64));
        group.bench_function(BenchmarkId::new("cold", lines), |bencher| {
            bencher.iter(|| Document::parse(black_box(Arc::clone(&text))));
        });
        group.bench_function(BenchmarkId::new("after an edit", lines), |bencher| {
            bencher.iter(|| Document::parse_with(black_box(Arc::clone(&edited)), &document));
        });
        group.bench_function(BenchmarkId::new("line index", lines), |bencher| {
            bencher.iter(|| Lines::new(black_box(Arc::clone(&text))));
        });
        group.finish();
    }
}

criterion_group!(benches, parse);
criterion_main!(benches);
