//! What is read as what: each statement beside its canonical form, tokens where they
//! are easy to get wrong, and what is kept between edits.

use std::sync::Arc;

use lyate::text::token::{Token, lex};
use lyate::text::tree::{Document, Statement, TermKind};

/// The canonical form of a statement that reads without a problem.
fn canonical(text: &str) -> String {
    let document = Document::parse(text);
    let mut statements = document.statements();
    let placed = statements.next().unwrap_or_else(|| panic!("no statement in {text:?}"));
    assert_eq!(placed.parsed.problems, [], "{text}");
    assert!(statements.next().is_none(), "{text}");
    placed.parsed.statement.to_string()
}

#[test]
fn every_statement_has_a_canonical_form() {
    for (written, expected) in [
        ("problem  \"Sump\" # note", "problem \"Sump\""),
        ("use aqueous  1", "use aqueous 1"),
        ("use \"../shared/amines.lyate\"", "use \"../shared/amines.lyate\""),
        ("temperature 25°C", "temperature 25 °C"),
        ("temperature −5 degC", "temperature -5 degC"),
        ("activity extended-debye-huckel", "activity extended-debye-huckel"),
        ("ionic\n  strength 0.1 mol/L", "ionic strength 0.1 mol/L"),
        ("group Cit=C6H5O7", "group Cit = C6H5O7"),
        ("group Hum", "group Hum"),
        ("component NH3 \"x\" ,Cl-,e-", "component NH3 \"x\", Cl-, e-"),
        (
            "reaction 2 Fe^3+ + 2e- ⇌ 2Fe^2+, log K=26.1",
            "reaction 2 Fe^3+ + 2 e- <=> 2 Fe^2+, log K = 26.1",
        ),
        (
            "reaction 1/2 O2 <=> O, pK = 1, at 20 °C, valid 0 to 50 °C",
            "reaction 1/2 O2 <=> O, pK = 1, at 20 °C, valid 0 to 50 °C",
        ),
        (
            "reaction A <=> B, source \"s\", enthalpy = -3 ± 1 kJ/mol,\n  pKa = 9.25 +/- 2%,\n  # why\n  heat capacity = 5 J/(mol·K)",
            "reaction A <=> B, pKa = 9.25 ± 2 %, enthalpy = -3 ± 1 kJ/mol, heat capacity = 5 J/(mol·K), source \"s\"",
        ),
        (
            "reaction A <=> B, log K (T)=-2^2^-T*(1/T-1/298.15)-(3-(4-5)) + ln(T)",
            "reaction A <=> B, log K(T) = -2^2^-T * (1 / T - 1 / 298.15) - (3 - (4 - 5)) + ln(T)",
        ),
        ("reaction A <=> B, log beta = 3, K = 10^-2", "reaction A <=> B, log beta = 3, K = 10^-2"),
        (
            "reaction CaCO3(s, calcite) <=> Ca^2+ + CO3^2-, pKsp = 8.48",
            "reaction CaCO3(s, calcite) <=> Ca^2+ + CO3^2-, pKsp = 8.48",
        ),
        ("total Ca^2+=120 mg/L as CaCO3", "total Ca^2+ = 120 mg/L as CaCO3"),
        ("add (NH4)2SO4 12mmol/L", "add (NH4)2SO4 12 mmol/L"),
        ("add X 1 mmol/L, giving 2 A^3+ + 3 B^2-", "add X 1 mmol/L, giving 2 A^3+ + 3 B^2-"),
        ("add NaOH 5 % w/w ± 1%", "add NaOH 5 % w/w ± 1 %"),
        ("add NaOH 5 ± 0.1 % w/w", "add NaOH 5 % w/w ± 0.1"),
        ("add NaOH 5 ± 1 % mmol/L", "add NaOH 5 mmol/L ± 1 %"),
        ("add NaOH 5 mmol/L ± 0.1 mmol/L", "add NaOH 5 ± 0.1 mmol/L"),
        ("add NaOH 2eq/L", "add NaOH 2 eq/L"),
        ("add HCl 3 x 10^-4 mol/L", "add HCl 3 x 10^-4 mol/L"),
        ("add HCl 3×10⁻⁴ mol·L^-1", "add HCl 3×10⁻⁴ mol·L^-1"),
        ("add CaSO4.2H2O 1 mmol/L", "add CaSO4.2H2O 1 mmol/L"),
        ("hold pH = 11.0 by NaOH", "hold pH = 11.0 by NaOH"),
        ("hold pH = 8 by total CO3^2-", "hold pH = 8 by total CO3^2-"),
        ("hold CO2(g) = 420 µatm", "hold CO2(g) = 420 µatm"),
        ("hold {Fe^2+} = 1e-5", "hold {Fe^2+} = 1e-5"),
        ("precipitate CaCO3(s)", "precipitate CaCO3(s)"),
        ("saturate with CaCO3(s)", "saturate with CaCO3(s)"),
        (
            "balance charge - [A] + 2[B]-3 total C=added NaOH + 9 mmol/L+[D]+0",
            "balance charge -[A] + 2 [B] - 3 total C = added NaOH + 9 mmol/L + [D] + 0",
        ),
        ("balance NH3 [NH4+]=total NH3", "balance NH3 [NH4+] = total NH3"),
        ("expect pH≤9 , source \"s\"", "expect pH <= 9, source \"s\""),
        ("expect alkalinity between 1 and 2 meq/L", "expect alkalinity between 1 and 2 meq/L"),
        ("expect saturation index CaCO3(s) >= 0", "expect saturation index CaCO3(s) >= 0"),
        ("expect SO₄²⁻(g) > 1 atm", "expect SO₄²⁻(g) > 1 atm"),
        ("curve over NaOH from 0 to 10 mmol/L", "curve over dose NaOH from 0 to 10 mmol/L"),
        ("curve over pH from 2 to 12", "curve over pH from 2 to 12"),
        (
            "curve over total NH3 from 0 to 5 mg/L as N ,200 points",
            "curve over total NH3 from 0 to 5 mg/L as N, 200 points",
        ),
        ("case \"winter\"", "case \"winter\""),
        ("without hold pH", "without hold pH"),
        ("without expect [NH3]", "without expect [NH3]"),
        ("without balance protons", "without balance protons"),
        ("without ionic strength", "without ionic strength"),
    ] {
        assert_eq!(canonical(written), expected, "{written}");
        assert_eq!(canonical(expected), expected);
    }
}

fn tokens(text: &str) -> Vec<(Token, &str)> {
    let (mut tokens, mut problems) = (Vec::new(), Vec::new());
    lex(text, &mut tokens, &mut problems);
    tokens
        .into_iter()
        .filter(|(token, _)| !token.is_trivia())
        .map(|(token, span)| (token, &text[span.range()]))
        .collect()
}

#[test]
fn a_formula_is_one_token_right_or_wrong() {
    for name in [
        "NH4+",
        "SO4^2-",
        "SO₄²⁻",
        "Fe(CN)6^3-",
        "(NH4)2SO4",
        "CaSO4·2H2O",
        "CaSO4.2H2O",
        "H2CO3*",
        "CaCO3(s)",
        "CaCO3(s, calcite)",
        "CO2(g)",
        "NaCl(aq)",
        "SO4--",
        "SO4-2",
        "SO42-",
        "Ca+2",
        "Ca2+",
        "NH3+H+",
        "Fe(CN6",
        "NH4)2",
        "Ag(NH3)2+",
        "((A)2B)3",
        "OH−",
        "NH3-N",
    ] {
        assert_eq!(tokens(name), [(Token::Name, name)]);
        for (before, after) in [("[", "]"), ("{", "}"), (" ", ","), ("=", "<=>"), (" ", "#")] {
            let text = format!("{before}{name}{after}");
            let found = tokens(&text);
            assert!(found.contains(&(Token::Name, name)), "{found:?}");
        }
    }
}

#[test]
fn numbers_words_and_signs_part_where_they_should() {
    use Token::*;
    assert_eq!(
        tokens("2NH3 2e- 1e-2 2eq/L"),
        [
            (Number, "2"),
            (Name, "NH3"),
            (Number, "2"),
            (Electron, "e-"),
            (Number, "1e-2"),
            (Number, "2"),
            (Word, "eq"),
            (Slash, "/"),
            (Name, "L"),
        ]
    );
    assert_eq!(
        tokens("OH-->A<=>B=>C"),
        [
            (Name, "OH-"),
            (WrongArrow, "->"),
            (Name, "A"),
            (Arrow, "<=>"),
            (Name, "B"),
            (WrongArrow, "=>"),
            (Name, "C")
        ]
    );
    assert_eq!(
        tokens("9 mmol/L+/-0.5"),
        [
            (Number, "9"),
            (Word, "mmol"),
            (Slash, "/"),
            (Name, "L"),
            (PlusMinus, "+/-"),
            (Number, "0.5")
        ]
    );
    assert_eq!(tokens("debye-huckel e−"), [(Word, "debye-huckel"), (Electron, "e−")]);
    assert_eq!(tokens("\"a # b\"#c"), [(String, "\"a # b\"")]);
    assert_eq!(
        tokens("log K(T) = T*0.5, at T*"),
        [
            (Word, "log"),
            (Name, "K(T)"),
            (Equals, "="),
            (Temperature, "T"),
            (Times, "*"),
            (Number, "0.5"),
            (Comma, ","),
            (Word, "at"),
            (Name, "T*"),
        ]
    );
}

#[test]
fn a_sum_without_spaces_is_taken_apart() {
    let document = Document::parse("reaction 2NH3+H+ <=> Fe^3++2OH-");
    let parsed = &document.sections[0].statements[0].parsed;
    assert_eq!(parsed.statement.to_string(), "reaction 2 NH3 + H+ <=> Fe^3+ + 2 OH-");
    let Statement::Reaction(reaction) = &parsed.statement else { panic!("{parsed:?}") };
    for member in reaction.left.iter().chain(&reaction.right) {
        assert_eq!(&parsed.text[member.name.span.range()], member.name.value);
    }
}

#[test]
fn ranges_hold_what_they_name() {
    let text = "balance charge\n    [H+] - 2 [SO4^2-] = 9 ± 1 mmol/L as N\n";
    let document = Document::parse(text);
    let parsed = &document.sections[0].statements[0].parsed;
    let Statement::Balance { kind, left, right, equals } = &parsed.statement else { panic!() };
    assert_eq!(&parsed.text[kind.span.range()], "charge");
    assert_eq!(&parsed.text[left[0].span.range()], "[H+]");
    assert_eq!(&parsed.text[left[1].span.range()], "2 [SO4^2-]");
    assert_eq!(&parsed.text[equals.range()], "=");
    let TermKind::Amount(amount) = &right[0].what else { panic!() };
    assert_eq!(&parsed.text[amount.span.range()], "9 ± 1 mmol/L as N");
    let unit = amount.unit.as_ref().map(|unit| &parsed.text[unit.span.range()]);
    assert_eq!(unit, Some("mmol/L"));
}

#[test]
fn an_edit_keeps_the_trees_of_all_other_statements() {
    let text = include_str!("text/scrubber.lyate");
    let before = Document::parse(text);
    let edited = text.replace("NaOH       9 mmol/L", "NaOH 8 mmol/L\nadd HCl 1 mmol/L");
    let moved = format!("# moved\n{}", edited.replace("use aqueous\n", ""));
    let after = Document::parse_with(format!("{moved}\nuse aqueous\n"), &before);
    let old: Vec<_> = before.statements().map(|placed| &placed.parsed).collect();
    let fresh: Vec<_> = after
        .statements()
        .filter(|placed| !old.iter().any(|old| Arc::ptr_eq(old, &placed.parsed)))
        .map(|placed| placed.parsed.text.to_string())
        .collect();
    assert_eq!(fresh, ["add NaOH 8 mmol/L", "add HCl 1 mmol/L"]);
}
