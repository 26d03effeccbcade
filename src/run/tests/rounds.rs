//! Rounds of draws: they double until the answers are settled, and say when they are not.

use super::{constraint, ready, settings};
use crate::run::{CAP, FIRST_ROUND, Outcome, run};

const QUANTITIES: &str = "size: { of: organism, unit: '', bounds: [none, none], about: any }\n";

/// The outcome of constraints that each hold one formula of `size`, which is 1, and of a parameter of their own.
fn outcome(entries: &[(&str, &str)], draws: Option<usize>) -> Outcome {
    let constraints: String = entries
        .iter()
        .enumerate()
        .map(|(number, (available, own))| {
            constraint(&format!("c-{number}"), available, "1", &format!("  parameters: {{ own: {own} }}\n"))
        })
        .collect();
    let ready = ready(QUANTITIES, &constraints, "size: 1");
    run(&ready.plan, &[ready.case], settings(draws)).remove(0)
}

/// A margin of one dex short, but for this share of draws of three dex short.
fn rare(share: f64) -> String {
    format!("{{ values: [1e-3, 0.1], weights: [{share}, {}] }}", 1.0 - share)
}

#[test]
fn a_plain_spread_is_settled_after_one_round() {
    let outcome = outcome(&[("size * own", "10 ×/÷ 2")], None);
    assert_eq!((outcome.record.draws, outcome.settled), (FIRST_ROUND, Some(true)));
}

#[test]
fn a_chance_near_a_threshold_is_settled_by_its_own_error() {
    // Holds in 95 %: no number of draws would put it three standard errors off, but 0.002 is reached at once.
    let outcome = outcome(&[("size * own", "{ min: 0.95, max: 1.95 }")], None);
    let chance = outcome.statistics[0].holding as f64 / outcome.record.draws as f64;
    assert!((chance - 0.95).abs() < 0.002, "{chance}");
    assert_eq!((outcome.record.draws, outcome.settled), (FIRST_ROUND, Some(true)));
}

#[test]
fn an_end_that_may_still_jump_is_drawn_further_until_it_may_not() {
    // 5.1 % lie two dex below the rest: whether the 5 % quantile does takes more than one round to tell.
    let share = rare(0.051);
    let settled = outcome(&[("size * own", &share)], None);
    assert_eq!(settled.settled, Some(true));
    let draws = settled.record.draws;
    assert!(draws > FIRST_ROUND && draws <= CAP && (draws / FIRST_ROUND).is_power_of_two(), "{draws}");
    assert_eq!((settled.statistics[0].low, settled.statistics[0].median), (-3.0, -1.0));
    assert_eq!(settled.statistics[0].twice_error, 0.0);
    // One round before the end it was not: the two sides of the quantile were two dex apart.
    let before = outcome(&[("size * own", &share)], Some(draws / 2));
    assert!((before.statistics[0].twice_error - 2.0).abs() < 1e-6, "{:?}", before.statistics[0]);
    assert_eq!(before.settled, None);
}

#[test]
fn an_end_that_stays_between_two_values_reaches_the_cap_unsettled() {
    // Exactly 5 %: about two in three of such limits are undecided after any number of draws, so of eight some are.
    let entries = vec![("size * own", rare(0.05)); 8];
    let entries: Vec<(&str, &str)> = entries.iter().map(|(formula, own)| (*formula, own.as_str())).collect();
    let outcome = outcome(&entries, None);
    assert_eq!((outcome.record.draws, outcome.settled), (CAP, Some(false)));
    assert!(outcome.statistics.iter().any(|statistics| (statistics.twice_error - 2.0).abs() < 1e-6));
}

#[test]
fn an_end_that_may_be_infinite_or_not_is_drawn_further() {
    // 5.1 % of the draws have nothing available: -infinity.
    let available = "size * choose(own < 0.051, 0, own)";
    let found = outcome(&[(available, "{ min: 0, max: 1 }")], None);
    assert_eq!(found.settled, Some(true));
    assert!(found.record.draws > FIRST_ROUND, "{}", found.record.draws);
    assert_eq!(found.statistics[0].low, f64::NEG_INFINITY);
    let before = outcome(&[(available, "{ min: 0, max: 1 }")], Some(found.record.draws / 2));
    assert_eq!(before.statistics[0].twice_error, f64::INFINITY);
}

#[test]
fn ends_that_are_surely_infinite_are_settled() {
    // A third has nothing available, a third needs nothing; only the median is a finite number.
    let outcome = outcome(
        &[
            ("size * choose(own < 0.33, 0, choose(own < 0.66, 2, infinity))", "{ min: 0, max: 1 }"),
            ("size * choose(own < 0.33, -1, 1)", "{ min: 0, max: 1 }"),
        ],
        None,
    );
    let [statistics, _] = outcome.statistics[..] else { panic!("two limits") };
    assert_eq!((statistics.low, statistics.high), (f64::NEG_INFINITY, f64::INFINITY));
    assert_eq!((outcome.record.draws, outcome.settled), (FIRST_ROUND, Some(true)));
}

#[test]
fn a_few_draws_that_are_no_number_do_not_unsettle() {
    let outcome = outcome(&[("size * sqrt(own)", "{ min: -0.004, max: 1 }")], None);
    let share = outcome.statistics[0].not_a_number as f64 / outcome.record.draws as f64;
    assert!((share - 0.004 / 1.004).abs() < 0.001, "{share}");
    assert_eq!(outcome.settled, Some(true));
}

#[test]
fn cases_that_settle_early_leave_the_others_to_go_on() {
    let constraints =
        constraint("c-0", "size * own", "1", &format!("  parameters: {{ own: {} }}\n", rare(0.051)));
    let slow = ready(QUANTITIES, &constraints, "size: 1");
    // Of nothing, nothing is available: the same -infinity in every draw.
    let quick = super::candidate(&slow.catalog, "size: 0");
    let quick = crate::run::Case::new(&slow.catalog, &slow.plan, &quick);
    let outcomes = run(&slow.plan, &[quick, slow.case], settings(None));
    assert_eq!((outcomes[0].record.draws, outcomes[0].settled), (FIRST_ROUND, Some(true)));
    assert!(outcomes[1].record.draws > FIRST_ROUND);
    assert_eq!(outcomes[1].settled, Some(true));
}
