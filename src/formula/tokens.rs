//! Characters to tokens.
