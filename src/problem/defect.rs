//! What can be wrong with the meaning of a problem, typed and with its figures. The
//! words for it, and what to do about it, are the rules' to find.

use std::path::PathBuf;

use num_rational::Rational64;

use super::reaction::TemperatureIssue;
use crate::chemistry::formula::FormulaProblemKind;
use crate::chemistry::quantity::ConversionProblem;
use crate::chemistry::unit::{Dimension, UnitProblem};
use crate::text::span::Place;

#[derive(Clone, Debug, PartialEq)]
pub struct Defect {
    pub at: Place,
    pub kind: DefectKind,
}

#[derive(Clone, Debug, PartialEq)]
pub enum DefectKind {
    // Quantities.
    /// A unit that is none.
    UnknownUnit {
        text: String,
        problem: UnitProblem,
    },
    /// A number that needs a unit and has none; `expected` names suitable ones.
    MissingUnit {
        expected: Expected,
    },
    /// A unit of another dimension than this place takes.
    WrongDimension {
        unit: String,
        found: Dimension,
        expected: Expected,
    },
    /// A unit that this formula cannot carry: no molar mass, no such element, no charge.
    UnitNotApplicable {
        unit: String,
        formula: String,
        problem: ConversionProblem,
    },
    /// Per litre in one place and per kilogram in another; the first of each.
    MixedScales {
        other: Place,
    },
    /// A temperature below absolute zero, a pressure or an equilibrium constant not above
    /// zero, an uncertainty below zero, …; `why` says which, as the end of a sentence.
    ImpossibleValue {
        why: &'static str,
    },
    /// `± 0`.
    UncertaintyOfZero,
    /// A `±` of more than half of what cannot lie below zero; `share` is that of the value,
    /// none where the value is zero.
    UncertaintyTooLarge {
        share: Option<f64>,
    },
    /// A percentage of a logarithm, or of a temperature in °C; `size` is what it comes to.
    UncertaintyOfLogarithm {
        temperature: bool,
        size: f64,
    },
    /// A `±` on a quantity that answers do not depend on.
    UncertaintyNotUsed,
    /// A confidence that is not above 50 % and below 100 %.
    ConfidenceOutOfRange,

    // Formulas.
    Formula {
        text: String,
        problem: FormulaProblemKind,
    },
    /// `Ca2+` where `Ca^2+` was surely meant.
    AmbiguousCharge {
        text: String,
        suggestion: String,
    },
    /// Two names for one composition, charge and phase.
    TwoNames {
        name: String,
        other: String,
        other_at: Option<Place>,
    },
    GroupRepeated {
        symbol: String,
        other: Place,
    },
    /// A symbol is an upper-case letter and then letters.
    GroupSymbol {
        symbol: String,
    },
    /// The composition holds the group itself, perhaps by way of others.
    GroupCircular {
        symbol: String,
    },

    // Reactions.
    NotConserved {
        what: Conserved,
        left: Rational64,
        right: Rational64,
    },
    NoConstant,
    TwoConstants {
        other: Place,
    },
    /// `pKa` on a reaction that gives off no proton, `pKsp` without a solid on the left, …
    ConstantKindMismatch {
        kind: &'static str,
        needs: &'static str,
    },
    /// The constant is for `given` kelvin, the problem is at `wanted`, and no enthalpy leads
    /// from one to the other. `own` says whether the reaction is the file's own.
    ConstantAtOtherTemperature {
        reaction: String,
        given: f64,
        wanted: f64,
        own: bool,
    },
    /// The problem's temperature lies outside the reaction's valid range, in kelvin.
    OutsideValidRange {
        reaction: String,
        low: f64,
        high: f64,
        wanted: f64,
        own: bool,
    },
    NoSource,
    /// A file's own constant against the one of a used set, as log10 K of this reaction.
    DiffersFromSet {
        own: f64,
        set: f64,
        origin: String,
    },
    ReactionRepeated {
        other: Place,
    },
    /// The reaction follows from others; its constant disagrees with theirs by `by` in
    /// log10 K.
    Follows {
        by: f64,
    },
    /// `log K(T)` gives no finite number at this temperature, in kelvin.
    ConstantHasNoValue {
        reaction: String,
        wanted: f64,
        own: bool,
    },
    /// A weak acid written as the base reaction; `acid` is its acid reaction.
    BaseReaction {
        acid: String,
    },

    // Components.
    /// A component that the reactions make out of the others, or that is listed twice.
    NotIndependent {
        name: String,
        from: Vec<String>,
        reaction: Option<Place>,
    },
    /// Neither given an amount nor part of anything spoken of.
    ComponentUnused {
        name: String,
    },
    /// A species that the reactions do not lead to; `missing` would bring it in.
    DoesNotBelong {
        name: String,
        missing: Vec<String>,
        nearest: Option<String>,
    },
    TotalMissing {
        name: String,
    },
    TotalTwice {
        name: String,
        other: Place,
    },
    TotalAndReagent {
        name: String,
        reagent: Place,
    },
    NegativeTotal {
        name: String,
        value: f64,
    },
    /// `total X` of a species that is no component; `components` is what it is made of.
    NotAComponent {
        name: String,
        components: Vec<String>,
    },
    /// A species of the wrong phase for this place.
    WrongPhase {
        name: String,
        needs: &'static str,
    },
    /// A share of a component is asked of a species that holds none, such as `OH-`.
    HasNoShare {
        name: String,
    },
    /// `added X` of a reagent that is not put in.
    NotAdded {
        name: String,
    },

    // Reagents.
    ReagentNotNeutral {
        name: String,
        charge: i64,
    },
    ReagentNotUnique {
        name: String,
    },
    ReagentHoldsForeign {
        name: String,
        element: String,
    },
    /// Each element of it is held, yet no sum of the components is this reagent.
    ReagentNotMade {
        name: String,
    },
    /// What `giving` names does not add up to the reagent.
    GivingNotConserved {
        what: Conserved,
        left: Rational64,
        right: Rational64,
    },

    /// An amount counts a stock whose density is not known; `known` is between which
    /// percentages that substance's is.
    DensityMissing {
        stock: String,
        known: Option<(f64, f64)>,
    },

    // Closure.
    /// A held value that leaves nothing free to meet it.
    NothingFree {
        subject: String,
        given: Option<Place>,
    },
    HeldTwice {
        subject: String,
        other: Place,
    },
    /// Two statements of one solid: that it may form, or is in excess.
    SolidTwice {
        name: String,
        other: Place,
    },
    /// `precipitated X` of a solid that is neither to form nor in excess.
    SolidNotStated {
        name: String,
    },
    /// A reagent or total that two targets are to find.
    FoundTwice {
        name: String,
        other: Place,
    },
    /// A target that what is to meet it has no part in.
    NotMoved {
        subject: String,
        by: String,
    },
    /// A quantity that is an outcome and can only be expected.
    CannotBeHeld {
        subject: String,
    },

    // Curves.
    /// A curve that ends where it starts.
    CurveWithoutLength,
    /// A number of points that is no curve, or that nobody looks through.
    CurvePoints {
        points: usize,
    },
    /// A curve over something that the file leaves to the answer: the total of a component
    /// that reagents or a held value bring, or a reagent of one that has a total.
    CurveNotFree {
        name: String,
        by: Option<Place>,
    },

    // Statements.
    /// A single-valued statement stands twice in one section.
    StatementRepeated {
        other: Place,
    },
    /// `without` takes away something that is not there.
    NothingToRemove,
    UnknownModel {
        word: String,
        nearest: Option<&'static str>,
    },

    // Blends.
    /// A curve over the share of a file that is no part of the blend, or its only one.
    CurveOverNoPart {
        file: String,
        parts: Vec<String>,
    },
    /// Shares in percent that do not come to 100.
    BlendSharesSum {
        percent: f64,
    },
    /// Some shares in percent, others in parts.
    BlendSharesMixed,
    /// All shares are zero.
    BlendOfNothing,
    /// The file, or this case of it, has no answer; `why` is its first error.
    BlendedWaterNotSolved {
        path: PathBuf,
        case: Option<String>,
        why: Option<String>,
    },
    BlendedCaseMissing {
        path: PathBuf,
        case: String,
        cases: Vec<String>,
    },
    /// What a blended water holds and no component here does.
    BlendedComponentMissing {
        file: String,
        names: Vec<String>,
    },
    /// A `total` of a component that the blend gives.
    TotalAndBlend {
        name: String,
        blend: Place,
    },

    // Files.
    UnknownSet {
        name: String,
        known: Vec<&'static str>,
    },
    UnknownEdition {
        name: String,
        edition: u32,
        newest: u32,
    },
    FileMissing {
        path: PathBuf,
        why: String,
    },
    FileNotText {
        path: PathBuf,
        at_byte: usize,
    },
    ImportCycle {
        chain: Vec<PathBuf>,
    },
    ImportOutsideRoot {
        path: PathBuf,
        root: PathBuf,
    },
    /// An imported file that has errors of its own.
    ImportBroken {
        path: PathBuf,
        count: usize,
    },
}

/// What a reaction must conserve.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Conserved {
    Element(String),
    Group(String),
    Charge,
}

/// What kind of value a place takes.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Expected {
    Concentration,
    /// An amount to be put in; of a stock, a volume or a mass of it.
    Dose,
    /// How strong a stock is.
    Strength,
    /// Mass of a stock per volume.
    Density,
    /// Charge equivalents count too, as for alkalinity.
    Equivalents,
    /// Degrees of hardness count too.
    Hardness,
    Temperature,
    Pressure,
    /// Of an electrode.
    Potential,
    MolarEnergy,
    MolarEntropy,
    /// A plain number.
    Plain,
    /// A plain number or percent.
    Share,
    /// Percent or charge per volume.
    Imbalance,
}

impl DefectKind {
    /// What is doubtful about a constant at a temperature, in kelvin. `own` says whether the
    /// reaction is the file's own and told of there.
    pub fn at_temperature(
        issue: TemperatureIssue,
        reaction: String,
        wanted: f64,
        own: bool,
    ) -> DefectKind {
        match issue {
            TemperatureIssue::NoEnthalpy { given } => {
                Self::ConstantAtOtherTemperature { reaction, given, wanted, own }
            }
            TemperatureIssue::OutsideValid { low, high } => {
                Self::OutsideValidRange { reaction, low, high, wanted, own }
            }
            TemperatureIssue::NoValue => Self::ConstantHasNoValue { reaction, wanted, own },
        }
    }

    /// Whether, in a statement that states conditions, matter or amounts, it makes the
    /// answer one to another question.
    pub fn blocks_solving(&self) -> bool {
        match self {
            Self::NoSource
            | Self::MixedScales { .. }
            | Self::AmbiguousCharge { .. }
            | Self::TwoNames { .. }
            | Self::ConstantAtOtherTemperature { .. }
            | Self::OutsideValidRange { .. }
            | Self::DiffersFromSet { .. }
            | Self::BaseReaction { .. }
            | Self::ComponentUnused { .. }
            | Self::UncertaintyOfZero
            | Self::UncertaintyTooLarge { .. }
            | Self::UncertaintyOfLogarithm { .. }
            | Self::UncertaintyNotUsed
            | Self::ConfidenceOutOfRange
            | Self::NothingToRemove => false,
            Self::Follows { by } => by.abs() > 0.02,
            Self::NotIndependent { from, .. } => !from.is_empty(),
            _ => true,
        }
    }
}
