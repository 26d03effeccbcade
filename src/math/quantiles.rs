//! Order statistics.
