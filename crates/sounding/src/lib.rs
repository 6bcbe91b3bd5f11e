//! A sounding as received, its amendments, and the working profile
