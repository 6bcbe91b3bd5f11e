//! Findings on a received profile, their repairs and what each costs
