//! However the draws are split into blocks, segments and rounds, each has the bits that its number gives it.

use super::{constraint, ready, settings};
use crate::plan::Plan;
use crate::run::{FIRST_ROUND, Outcome, run};

const QUANTITIES: &str = "
size: { of: organism, unit: '', bounds: [none, none], about: any }
other: { of: organism, unit: '', bounds: [none, none], about: any }
spread:
  { of: organism, unit: '', bounds: [none, none], about: any, default: { value: 1 ×/÷ 2, role: unknown, basis: physical, source: invented } }
";

fn outcome(draws: usize) -> (Plan, Outcome) {
    let more = "  parameters: { own: { min: 0, max: 3 }, another: 1 ± 0.5 }
  correlations: [{ between: [own, another], coefficient: 0.6 }]
";
    let constraints = constraint("one", "size * own^another", "spread * other", more)
        + &constraint("two", "exp(size) - spread", "other", "");
    let ready = ready(QUANTITIES, &constraints, "size: 2 ± 0.5, other: 1.5 ×/÷ 1.4");
    let outcome = run(&ready.plan, &[ready.case], settings(Some(draws))).remove(0);
    (ready.plan, outcome)
}

#[test]
fn fewer_draws_are_the_first_of_more() {
    let (plan, most) = outcome(300_000);
    // Within a word, at its end, within a block, at its end and beyond; one round; one segment and beyond.
    for draws in [1, 63, 64, 65, 4095, 4096, 4097, 65_536, 70_001, 262_144, 262_145] {
        let (_, fewer) = outcome(draws);
        assert_eq!(fewer.record.draws, draws);
        for constraint in 0..2 {
            let (some, all) = (fewer.record.holds(constraint), most.record.holds(constraint));
            assert_eq!(some.len(), draws.div_ceil(64));
            assert_eq!(some[..draws / 64], all[..draws / 64]);
            if draws % 64 > 0 {
                let mask = (1 << (draws % 64)) - 1;
                assert_eq!(some[draws / 64], all[draws / 64] & mask, "no bit beyond the last draw");
            }
        }
        let mut columns = 0;
        for node in plan.outputs() {
            let (Some(some), Some(all)) = (fewer.values(node), most.values(node)) else { continue };
            columns += 1;
            assert_eq!(some.len(), draws.min(FIRST_ROUND));
            assert!(some.iter().zip(all).all(|(some, all)| some.to_bits() == all.to_bits()), "{draws}");
        }
        assert!(columns >= 3, "only {columns} columns were kept");
    }
}
