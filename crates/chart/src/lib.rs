//! Skew-T geometry and isopleths as a display list
