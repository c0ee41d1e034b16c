//! How long reading takes: layout, lexing and parsing of whole files, and a file read
//! again after an edit of one statement.

use std::fmt::Write;
use std::hint::black_box;
use std::sync::Arc;

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

fn cpu() -> u64 { std::fs::read_to_string("/proc/self/schedstat").unwrap().split(' ').next().unwrap().parse().unwrap() }
fn main() {
    let text: Arc<str> = file(10_000).into();
    let document = Document::parse(Arc::clone(&text));
    println!("statements {}", document.statements().count());
    let amount = text[text.len() / 2..].find(" mmol/L").map_or(0, |at| at + text.len() / 2);
    let edited: Arc<str> = format!("{}7{}", &text[..amount], &text[amount..]).into();
    for name in ["cold", "edit", "lines", "cold", "edit"] {
        let start = cpu();
        let n = 100;
        for _ in 0..n {
            match name {
                "cold" => { black_box(Document::parse(Arc::clone(&text))); }
                "edit" => { black_box(Document::parse_with(Arc::clone(&edited), &document)); }
                _ => { black_box(Lines::new(Arc::clone(&text))); }
            }
        }
        println!("{name} {} us", (cpu() - start) / n / 1000);
    }
}
