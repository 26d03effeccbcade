//! Numbers as people read them: units people use, significant digits that the uncertainty supports.
