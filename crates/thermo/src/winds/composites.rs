//! Composite indices of the literature, each with its terms.

/// A composite index and what it is made of.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Composite {
    /// The index: the product of its terms.
    pub value: f64,
    /// Its terms.
    pub terms: Vec<Term>,
}

/// One factor of a composite index.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Term {
    /// What it is made of.
    pub name: &'static str,
    /// That input's value.
    pub input: f64,
    /// That input's unit.
    pub unit: &'static str,
    /// The factor, limits applied.
    pub factor: f64,
}

/// The composite indices. Absent where an input is.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Composites {
    /// Supercell composite parameter (Thompson et al. 2007).
    pub supercell: Option<Composite>,
    /// Significant tornado parameter of fixed layers (Thompson et al. 2003).
    pub significant_tornado_fixed: Option<Composite>,
    /// Significant tornado parameter of the effective layer with CIN (Thompson et al. 2012).
    pub significant_tornado_effective: Option<Composite>,
}
