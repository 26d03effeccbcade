//! What is done with plans, draws and verdicts: screening many candidates, drafting a new one.

mod draft;
mod screening;

pub use draft::{draft, opens};
pub use screening::{Screened, screen};
