//! Derivatives of every quantity by every input, held against central differences of whole
//! solves: ideal and with activities, with the pH, a gas or an ion held, and with doses
//! that follow a target.

mod uncertainty_support;

use lyate::equilibrium::derivative::Derivatives;
use lyate::problem::input::Input;
use lyate::problem::model::{Problem, Sought};
use uncertainty_support::{Case, moved, quantities, solve_again};

/// Problems of our own.
const WATERS: [(&str, &str); 8] = [
    (
        "closed buffer",
        "use aqueous\ntemperature 18 °C\ncomponent NH3, SO4^2-, Na+, CO3^2-\n\
         add (NH4)2SO4 12 mmol/L\nadd NaOH 9 mmol/L\nadd NaHCO3 3 mmol/L\n",
    ),
    (
        "open to the air",
        "use aqueous\ntemperature 12 °C\ncomponent CO3^2-, Na+, Cl-\n\
         add NaHCO3 2 mmol/L\nadd NaCl 5 mmol/L\nhold CO2(g) = 420 µatm\n",
    ),
    (
        "measured pH",
        "use aqueous\ntemperature 12 °C\ncomponent CO3^2-, Ca^2+, Na+, Cl-\n\
         reaction CaCO3(s) <=> Ca^2+ + CO3^2-, pKsp = 8.48, enthalpy = -10 kJ/mol, source \"ours\"\n\
         total CO3^2- = 3 mmol/L\ntotal Ca^2+ = 2 mmol/L\ntotal Na+ = 3 mmol/L\n\
         total Cl- = 1 mmol/L\nhold pH = 7.4\n",
    ),
    (
        "measured pOH, by its own water",
        "use aqueous\ntemperature 30 °C\ncomponent NH3, Cl-\n\
         reaction H2O <=> H+ + OH-, pK = 14.0, enthalpy = 55.8 kJ/mol, source \"ours\"\n\
         total NH3 = 3 mmol/L\ntotal Cl- = 2 mmol/L\nhold pOH = 5\n",
    ),
    (
        "an ion by its concentration",
        "use aqueous\ntemperature 20 °C\ncomponent F-, Na+, Cl-\n\
         reaction HF <=> F- + H+, pK = 3.17, enthalpy = -13 kJ/mol, heat capacity = -150 J/(mol·K), \
         source \"ours\"\nadd NaCl 20 mmol/L\nadd HCl 2 mmol/L\nhold [F-] = 1 mmol/L\n",
    ),
    (
        "an ion by its activity",
        "use aqueous\ncomponent NH3, Cl-, Na+\nadd NaCl 20 mmol/L\nhold {NH4+} = 1e-3\n",
    ),
    (
        "a given ionic strength",
        "use aqueous\ntemperature 35 °C\nionic strength 0.1 mol/L\ncomponent PO4^3-, Na+\n\
         add H3PO4 20 mmol/L\nadd NaOH 30 mmol/L\n",
    ),
    (
        "electrons",
        "use aqueous\ncomponent Fe^3+, Cl-, e-\n\
         reaction Fe^3+ + e- <=> Fe^2+, log K = 13.0, source \"ours\"\n\
         reaction FeOH^2+ + H+ <=> Fe^3+ + H2O, log K = 2.19, source \"ours\"\n\
         add FeCl3 1 mmol/L\nadd HCl 10 mmol/L\nhold pe = 12.5\n",
    ),
];

const MODELS: [&str; 5] =
    ["ideal", "davies", "extended-debye-huckel", "debye-huckel", "guntelberg"];

/// Every input that a problem has.
fn inputs(problem: &Problem) -> Vec<(Input, f64)> {
    // The step of each: small against the value, large against the solver's last digits.
    let mut inputs = vec![(Input::Temperature, 0.02)];
    for (j, amount) in problem.amounts.iter().enumerate().skip(1) {
        if let Some(total) = amount.total.filter(|&total| total > 0.0) {
            inputs.push((Input::Total(j), 1e-4 * total));
        }
    }
    for (i, reagent) in problem.reagents.iter().enumerate() {
        inputs.push((Input::Reagent(i), 1e-4 * reagent.amount));
    }
    for (k, held) in problem.held.iter().enumerate() {
        use lyate::problem::model::HeldWhat;
        let step = match held.what {
            HeldWhat::Ph(_) | HeldWhat::Pe(_) => 1e-4,
            HeldWhat::Pressure { atm: value, .. }
            | HeldWhat::Activity { value, .. }
            | HeldWhat::Concentration { value, .. } => 1e-4 * value,
        };
        inputs.push((Input::Held(k), step));
    }
    for (r, reaction) in problem.scope.reactions_in_use() {
        inputs.push((Input::LogK(r), 1e-4));
        inputs.extend(reaction.enthalpy.map(|_| (Input::Enthalpy(r), 10.0)));
        inputs.extend(reaction.heat_capacity.map(|_| (Input::HeatCapacity(r), 1.0)));
    }
    if let Some(value) = problem.ionic_strength {
        inputs.push((Input::IonicStrength, 1e-4 * value));
    }
    inputs
}

#[test]
fn derivatives_are_the_differences_of_solves() {
    let mut compared = 0;
    for (name, text) in WATERS {
        // The last two differ from others in nothing but their formula.
        let models = if name == WATERS[0].0 { &MODELS[..] } else { &MODELS[..3] };
        for model in models {
            let case = Case::new(&format!("activity {model}\n{text}"));
            let (problem, solved) = (&case.problem, &case.solved);
            let derivatives = Derivatives::new(problem, solved).unwrap();
            for (input, step) in inputs(problem) {
                let up = moved(problem, input, step);
                let down = moved(problem, input, -step);
                let (up_solved, down_solved) = (solve_again(&up), solve_again(&down));
                for sought in quantities(problem) {
                    let Some(value) = solved.value(problem, sought) else { continue };
                    let what = format!("{name}, {model}: {sought:?} by {input:?}");
                    let found = derivatives.of(sought, input).unwrap_or_else(|| panic!("{what}"));
                    let up = up_solved.value(&up, sought).unwrap();
                    let down = down_solved.value(&down, sought).unwrap();
                    let difference = (up - down) / (2.0 * step);
                    // The solver's digits over the step, and the step's square.
                    let noise = 1e-11 * value.abs().max(scale(sought)) / step;
                    let apart = (found - difference).abs();
                    assert!(
                        apart <= 2e-5 * difference.abs() + noise,
                        "{what}: {found} against {difference}"
                    );
                    compared += usize::from(difference.abs() > 10.0 * noise);
                }
            }
        }
    }
    assert!(compared > 2000, "{compared}");
}

/// The size below which a quantity of this kind is the rounding of others.
fn scale(sought: Sought) -> f64 {
    match sought {
        Sought::Alkalinity | Sought::ChargeImbalance { equivalents: true } => 1e-2,
        Sought::ChargeImbalance { equivalents: false } => 1.0,
        Sought::Ph | Sought::Poh | Sought::Pe | Sought::SaturationIndex(_) => 1.0,
        _ => 0.0,
    }
}

/// Van Slyke's sum for one acid (D. D. Van Slyke, J. Biol. Chem. 52, 525, 1922; from
/// memory), β = ln 10 (\[H\] + \[OH\] + C K \[H\] / (K + \[H\])²): at a held pH its derivative by
/// the acid's total is the last term over C.
#[test]
fn the_buffer_capacity_moves_as_van_slykes_sum_does() {
    let case = Case::new(
        "activity ideal\ncomponent HAc\ngroup Ac = CH3COO\n\
         reaction HAc <=> Ac- + H+, pKa = 4.756, source \"ours\"\n\
         total HAc = 20 mmol/L\nhold pH = 4.3\n",
    );
    let derivatives = Derivatives::new(&case.problem, &case.solved).unwrap();
    let found = derivatives.of(Sought::BufferCapacity, Input::Total(1)).unwrap();
    let (h, k) = (10f64.powf(-4.3), 10f64.powf(-4.756));
    let wanted = std::f64::consts::LN_10 * k * h / (k + h).powi(2);
    assert!((found / wanted - 1.0).abs() < 1e-7, "{found} against {wanted}");
}

/// Doses that follow: found by bisection over whole solves, moved inputs and all.
#[test]
fn a_dose_that_follows_its_target_keeps_it() {
    let text = "use aqueous\ntemperature 18 °C\ncomponent NH3, SO4^2-, Na+, CO3^2-\n\
                add (NH4)2SO4 12 mmol/L\nadd NaOH 9 mmol/L\nadd NaHCO3 3 mmol/L\n";
    let case = Case::new(text);
    let (problem, solved) = (&case.problem, &case.solved);
    let (sodium_hydroxide, target) = (Input::Reagent(1), Sought::Ph);
    let kept = solved.ph();
    // The amount of NaOH, over that of the file, at which the pH is so much.
    let dose = |problem: &Problem, ph: f64| {
        let (mut low, mut high) = (-1e-3, 1e-3);
        for _ in 0..60 {
            let middle = 0.5 * (low + high);
            let at = solve_again(&moved(problem, sodium_hydroxide, middle)).ph();
            if at < ph { low = middle } else { high = middle }
        }
        0.5 * (low + high)
    };
    let derivatives = Derivatives::new(problem, solved).unwrap();
    let derivatives = derivatives.with_targets(&[(target, sodium_hydroxide)]).unwrap();
    let ammonia = Sought::Concentration(problem.scope.find("NH3").unwrap());
    for (input, step) in inputs(problem) {
        if input == sodium_hydroxide {
            continue;
        }
        let movement = derivatives.movement(input).unwrap();
        let at = |by: f64| {
            let problem = moved(problem, input, by);
            let dose = dose(&problem, kept);
            let found = moved_value(&moved(&problem, sodium_hydroxide, dose), ammonia);
            (dose, found)
        };
        let (up, down) = (at(step), at(-step));
        let near = |found: f64, up: f64, down: f64, size: f64| {
            let difference = (up - down) / (2.0 * step);
            let apart = (found - difference).abs();
            let fine = apart <= 1e-4 * difference.abs() + 1e-9 * size / step;
            assert!(fine, "{input:?}: {found} against {difference}");
        };
        near(movement.doses[0], up.0, down.0, 9e-3);
        near(derivatives.along(ammonia, &movement).unwrap(), up.1, down.1, 1e-2);
        let ph = derivatives.of(target, input).unwrap();
        assert!(ph.abs() < 1e-9, "{input:?} moves the target by {ph}");
    }
    // The target's own value: the dose moves by the buffer capacity.
    let movement = derivatives.movement(Input::Target(0)).unwrap();
    assert!((derivatives.along(target, &movement).unwrap() - 1.0).abs() < 1e-12);
    let difference = (dose(problem, kept + 1e-4) - dose(problem, kept - 1e-4)) / 2e-4;
    assert!((movement.doses[0] / difference - 1.0).abs() < 1e-5);
    let twice = Derivatives::new(problem, solved)
        .unwrap()
        .with_targets(&[(target, sodium_hydroxide), (target, Input::Reagent(2))]);
    assert!(twice.is_none(), "one target cannot decide two doses");
}

fn moved_value(problem: &Problem, sought: Sought) -> f64 {
    solve_again(problem).value(problem, sought).unwrap()
}

/// Where a file mixes its scales, the density of water converts amounts, and moves with the
/// temperature: files of three temperatures, read whole.
#[test]
fn amounts_converted_by_density_move_with_the_temperature() {
    let at = |celsius: f64| {
        Case::new(&format!(
            "use aqueous\ntemperature {celsius} °C\ncomponent NH3, Na+, Cl-\n\
             add NaCl 20 mmol/L\nadd NH4Cl 300 mmol/kg\nadd NaOH 40 mmol/kg\nhold pH = 9\n"
        ))
    };
    let (low, case, high) = (at(59.9), at(60.0), at(60.1));
    let derivatives = Derivatives::new(&case.problem, &case.solved).unwrap();
    let value = |case: &Case, sought| case.solved.value(&case.problem, sought).unwrap();
    for sought in quantities(&case.problem) {
        let difference = (value(&high, sought) - value(&low, sought)) / 0.2;
        let found = derivatives.of(sought, Input::Temperature).unwrap();
        let size = value(&case, sought).abs().max(scale(sought));
        let apart = (found - difference).abs();
        assert!(
            apart <= 1e-5 * difference.abs() + 1e-10 * size,
            "{sought:?}: {found}, {difference}"
        );
    }
    let chloride = Sought::Total(case.problem.scope.component("Cl-").unwrap());
    let by = derivatives.of(chloride, Input::Temperature).unwrap();
    // Water thins by 5.2e-4 of itself per kelvin at 60 °C (common tables, recalled).
    assert!((by / (0.3 * 0.983) + 5.2e-4).abs() < 0.1e-4, "{by}");
}
