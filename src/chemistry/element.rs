//! The elements: symbols, names and standard atomic weights.
//!
//! Weights are the IUPAC (CIAAW 2021) abridged standard atomic weights, five
//! significant figures at most (T. Prohaska et al., Pure Appl. Chem. 94, 573, 2022).
//! The published table itself was not read here: the values were made by rounding to
//! five figures the ones in `periodictable` 2.1.0 (a general-purpose Python library,
//! which names the same publication), and agree with the ones recalled from memory.
//! Differences above 0.001 from that library are this rounding and nothing else
//! (0.005 at most, ytterbium, whose 173.045 is printed as 173.05). Elements that have no stable isotope and no
//! characteristic terrestrial composition have no standard weight.

/// A chemical element. Ordered by atomic number.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Element(u8);

impl Element {
    pub const HYDROGEN: Element = Element(1);
    pub const CARBON: Element = Element(6);
    pub const NITROGEN: Element = Element(7);
    pub const OXYGEN: Element = Element(8);

    /// By its symbol, in the usual upper and lower case.
    pub fn from_symbol(symbol: &str) -> Option<Element> {
        let slot = slot(symbol.as_bytes())?;
        match BY_SYMBOL[slot] {
            0 => None,
            number => Some(Element(number)),
        }
    }

    /// All elements by rising atomic number.
    pub fn all() -> impl Iterator<Item = Element> {
        (1..=ELEMENTS.len() as u8).map(Element)
    }

    pub fn atomic_number(self) -> u8 {
        self.0
    }

    pub fn symbol(self) -> &'static str {
        self.record().0
    }

    /// The English name, in IUPAC's spelling.
    pub fn name(self) -> &'static str {
        self.record().1
    }

    /// The abridged standard atomic weight, g/mol; none where the element has none.
    pub fn atomic_weight(self) -> Option<f64> {
        self.record().2
    }

    /// Whether the element forms simple cations in water, as metals do.
    pub fn is_metal(self) -> bool {
        !matches!(
            self.symbol(),
            "H" | "He"
                | "B"
                | "C"
                | "N"
                | "O"
                | "F"
                | "Ne"
                | "Si"
                | "P"
                | "S"
                | "Cl"
                | "Ar"
                | "Ge"
                | "As"
                | "Se"
                | "Br"
                | "Kr"
                | "Te"
                | "I"
                | "Xe"
                | "At"
                | "Rn"
                | "Ts"
                | "Og"
        )
    }

    fn record(self) -> &'static Record {
        &ELEMENTS[usize::from(self.0) - 1]
    }
}

type Record = (&'static str, &'static str, Option<f64>);

/// The place of a symbol in `BY_SYMBOL`: first letter, then none or the second.
const fn slot(symbol: &[u8]) -> Option<usize> {
    if symbol.is_empty() || symbol.len() > 2 || !symbol[0].is_ascii_uppercase() {
        return None;
    }
    let first = (symbol[0] - b'A') as usize * 27;
    if symbol.len() == 1 {
        return Some(first);
    }
    if !symbol[1].is_ascii_lowercase() {
        return None;
    }
    Some(first + 1 + (symbol[1] - b'a') as usize)
}

static BY_SYMBOL: [u8; 26 * 27] = {
    let mut table = [0; 26 * 27];
    let mut index = 0;
    while index < ELEMENTS.len() {
        if let Some(slot) = slot(ELEMENTS[index].0.as_bytes()) {
            table[slot] = index as u8 + 1;
        }
        index += 1;
    }
    table
};

const ELEMENTS: [Record; 118] = [
    ("H", "hydrogen", Some(1.008)),
    ("He", "helium", Some(4.0026)),
    ("Li", "lithium", Some(6.94)),
    ("Be", "beryllium", Some(9.0122)),
    ("B", "boron", Some(10.81)),
    ("C", "carbon", Some(12.011)),
    ("N", "nitrogen", Some(14.007)),
    ("O", "oxygen", Some(15.999)),
    ("F", "fluorine", Some(18.998)),
    ("Ne", "neon", Some(20.18)),
    ("Na", "sodium", Some(22.99)),
    ("Mg", "magnesium", Some(24.305)),
    ("Al", "aluminium", Some(26.982)),
    ("Si", "silicon", Some(28.085)),
    ("P", "phosphorus", Some(30.974)),
    ("S", "sulfur", Some(32.06)),
    ("Cl", "chlorine", Some(35.45)),
    ("Ar", "argon", Some(39.95)),
    ("K", "potassium", Some(39.098)),
    ("Ca", "calcium", Some(40.078)),
    ("Sc", "scandium", Some(44.956)),
    ("Ti", "titanium", Some(47.867)),
    ("V", "vanadium", Some(50.942)),
    ("Cr", "chromium", Some(51.996)),
    ("Mn", "manganese", Some(54.938)),
    ("Fe", "iron", Some(55.845)),
    ("Co", "cobalt", Some(58.933)),
    ("Ni", "nickel", Some(58.693)),
    ("Cu", "copper", Some(63.546)),
    ("Zn", "zinc", Some(65.38)),
    ("Ga", "gallium", Some(69.723)),
    ("Ge", "germanium", Some(72.63)),
    ("As", "arsenic", Some(74.922)),
    ("Se", "selenium", Some(78.971)),
    ("Br", "bromine", Some(79.904)),
    ("Kr", "krypton", Some(83.798)),
    ("Rb", "rubidium", Some(85.468)),
    ("Sr", "strontium", Some(87.62)),
    ("Y", "yttrium", Some(88.906)),
    ("Zr", "zirconium", Some(91.224)),
    ("Nb", "niobium", Some(92.906)),
    ("Mo", "molybdenum", Some(95.95)),
    ("Tc", "technetium", None),
    ("Ru", "ruthenium", Some(101.07)),
    ("Rh", "rhodium", Some(102.91)),
    ("Pd", "palladium", Some(106.42)),
    ("Ag", "silver", Some(107.87)),
    ("Cd", "cadmium", Some(112.41)),
    ("In", "indium", Some(114.82)),
    ("Sn", "tin", Some(118.71)),
    ("Sb", "antimony", Some(121.76)),
    ("Te", "tellurium", Some(127.6)),
    ("I", "iodine", Some(126.9)),
    ("Xe", "xenon", Some(131.29)),
    ("Cs", "caesium", Some(132.91)),
    ("Ba", "barium", Some(137.33)),
    ("La", "lanthanum", Some(138.91)),
    ("Ce", "cerium", Some(140.12)),
    ("Pr", "praseodymium", Some(140.91)),
    ("Nd", "neodymium", Some(144.24)),
    ("Pm", "promethium", None),
    ("Sm", "samarium", Some(150.36)),
    ("Eu", "europium", Some(151.96)),
    ("Gd", "gadolinium", Some(157.25)),
    ("Tb", "terbium", Some(158.93)),
    ("Dy", "dysprosium", Some(162.5)),
    ("Ho", "holmium", Some(164.93)),
    ("Er", "erbium", Some(167.26)),
    ("Tm", "thulium", Some(168.93)),
    ("Yb", "ytterbium", Some(173.05)),
    ("Lu", "lutetium", Some(174.97)),
    ("Hf", "hafnium", Some(178.49)),
    ("Ta", "tantalum", Some(180.95)),
    ("W", "tungsten", Some(183.84)),
    ("Re", "rhenium", Some(186.21)),
    ("Os", "osmium", Some(190.23)),
    ("Ir", "iridium", Some(192.22)),
    ("Pt", "platinum", Some(195.08)),
    ("Au", "gold", Some(196.97)),
    ("Hg", "mercury", Some(200.59)),
    ("Tl", "thallium", Some(204.38)),
    ("Pb", "lead", Some(207.2)),
    ("Bi", "bismuth", Some(208.98)),
    ("Po", "polonium", None),
    ("At", "astatine", None),
    ("Rn", "radon", None),
    ("Fr", "francium", None),
    ("Ra", "radium", None),
    ("Ac", "actinium", None),
    ("Th", "thorium", Some(232.04)),
    ("Pa", "protactinium", Some(231.04)),
    ("U", "uranium", Some(238.03)),
    ("Np", "neptunium", None),
    ("Pu", "plutonium", None),
    ("Am", "americium", None),
    ("Cm", "curium", None),
    ("Bk", "berkelium", None),
    ("Cf", "californium", None),
    ("Es", "einsteinium", None),
    ("Fm", "fermium", None),
    ("Md", "mendelevium", None),
    ("No", "nobelium", None),
    ("Lr", "lawrencium", None),
    ("Rf", "rutherfordium", None),
    ("Db", "dubnium", None),
    ("Sg", "seaborgium", None),
    ("Bh", "bohrium", None),
    ("Hs", "hassium", None),
    ("Mt", "meitnerium", None),
    ("Ds", "darmstadtium", None),
    ("Rg", "roentgenium", None),
    ("Cn", "copernicium", None),
    ("Nh", "nihonium", None),
    ("Fl", "flerovium", None),
    ("Mc", "moscovium", None),
    ("Lv", "livermorium", None),
    ("Ts", "tennessine", None),
    ("Og", "oganesson", None),
];

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_symbol_finds_its_own_element() {
        assert_eq!(Element::all().count(), 118);
        for element in Element::all() {
            assert_eq!(Element::from_symbol(element.symbol()), Some(element));
        }
        for wrong in ["", "c", "CA", "ca", "Xx", "Cax", "é", "1"] {
            assert_eq!(Element::from_symbol(wrong), None, "{wrong}");
        }
    }

    /// Abridged 2021 values, recalled from memory (Pure Appl. Chem. 94, 573).
    #[test]
    fn weights_are_the_abridged_ones() {
        for (symbol, weight) in [
            ("H", 1.008),
            ("C", 12.011),
            ("N", 14.007),
            ("O", 15.999),
            ("Na", 22.990),
            ("Mg", 24.305),
            ("P", 30.974),
            ("S", 32.06),
            ("Cl", 35.45),
            ("Ar", 39.95),
            ("K", 39.098),
            ("Ca", 40.078),
            ("Fe", 55.845),
            ("Zn", 65.38),
            ("Ag", 107.87),
            ("Ir", 192.22),
            ("Pb", 207.2),
            ("U", 238.03),
        ] {
            assert_eq!(Element::from_symbol(symbol).unwrap().atomic_weight(), Some(weight));
        }
    }

    #[test]
    fn elements_without_a_standard_weight_have_none() {
        for symbol in ["Tc", "Pm", "Po", "Ra", "Pu", "Og"] {
            assert_eq!(Element::from_symbol(symbol).unwrap().atomic_weight(), None);
        }
        let with = Element::all().filter(|e| e.atomic_weight().is_some()).count();
        assert_eq!(with, 84);
    }
}
