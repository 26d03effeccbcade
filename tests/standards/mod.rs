//! Published standards and tables, computed by the same engine that screens organisms.

mod constants;
mod distributions;
mod jcgm_101;
mod units;
