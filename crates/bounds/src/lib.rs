//! How far the numbers move inside the credible surface moisture
