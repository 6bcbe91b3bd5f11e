//! Deterministic random numbers: the same seed gives the same files on every machine.

/// SplitMix64 (Steele, Lea, Flood 2014): small, seedable, the same everywhere.
#[derive(Debug, Clone)]
pub struct Random(u64);

impl Random {
    /// A generator for this seed.
    pub fn new(seed: u64) -> Self {
        Self(seed)
    }

    fn next(&mut self) -> u64 {
        self.0 = self.0.wrapping_add(0x9E37_79B9_7F4A_7C15);
        let mut mixed = self.0;
        mixed = (mixed ^ (mixed >> 30)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
        mixed = (mixed ^ (mixed >> 27)).wrapping_mul(0x94D0_49BB_1331_11EB);
        mixed ^ (mixed >> 31)
    }

    /// Uniform in 0..1.
    fn uniform(&mut self) -> f64 {
        // 53 bits fit a double exactly.
        (self.next() >> 11) as f64 / (1_u64 << 53) as f64
    }

    /// Nearly normal, mean 0, standard deviation 1: the sum of twelve uniforms. No transcendental functions, whose
    /// last digit differs between machines.
    pub fn normal(&mut self) -> f64 {
        (0..12).map(|_| self.uniform()).sum::<f64>() - 6.0
    }
}

/// A first-order autoregressive series along height.
#[derive(Debug, Clone)]
pub struct Correlated {
    /// Standard deviation.
    deviation: f64,
    /// Correlation length, m.
    length: f64,
    state: f64,
}

impl Correlated {
    /// Stationary from the start.
    pub fn new(deviation: f64, length: f64, random: &mut Random) -> Self {
        Self {
            deviation,
            length,
            state: random.normal(),
        }
    }

    /// The value `step` metres further on.
    pub fn step(&mut self, step: f64, random: &mut Random) -> f64 {
        let kept = (1.0 - step / self.length).max(0.0);
        self.state = kept * self.state + (1.0 - kept * kept).sqrt() * random.normal();
        self.deviation * self.state
    }
}
