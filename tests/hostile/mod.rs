//! Hostile texts: what the fuzz targets ask of any bytes, asked here of a few seeds and of their mutilations.

mod bodies;

use std::path::Path;
use std::time::{Duration, Instant};

/// Far more than any text takes, far less than a hang.
const QUICK: Duration = Duration::from_secs(10);

#[track_caller]
fn replay(kind: &str, body: fn(&[u8])) {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/hostile/seeds").join(kind);
    let mut seeds: Vec<_> = std::fs::read_dir(&folder).unwrap().map(|entry| entry.unwrap().path()).collect();
    seeds.sort();
    assert!(seeds.len() >= 8, "{seeds:?}");
    for seed in seeds {
        let bytes = std::fs::read(&seed).unwrap();
        for bytes in mutilated(&bytes) {
            let started = Instant::now();
            body(&bytes);
            assert!(started.elapsed() < QUICK, "{}: {:?}", seed.display(), started.elapsed());
        }
    }
}

/// A seed as it is; cut off at some places; without a stretch, with a stretch twice, and with a byte changed there.
fn mutilated(seed: &[u8]) -> Vec<Vec<u8>> {
    let mut made = vec![seed.to_vec()];
    for part in 1..12 {
        let at = seed.len() * part / 12;
        let end = (at + 1 + 7 * part).min(seed.len());
        made.push(seed[..at].to_vec());
        made.push([&seed[..at], &seed[end..]].concat());
        made.push([&seed[..end], &seed[at..]].concat());
        let mut changed = seed.to_vec();
        if let Some(byte) = changed.get_mut(at) {
            *byte = b"0-{[:*'\n\x80^e"[part % 11];
            made.push(changed);
        }
    }
    made
}

#[test]
fn any_candidate_is_screened_or_refused() {
    replay("candidate", bodies::candidate);
}

#[test]
fn any_overlay_is_read_or_refused() {
    replay("catalogue", bodies::catalogue_file);
}

#[test]
fn any_formula_is_read_or_refused() {
    replay("formula", bodies::formula);
}

#[test]
fn any_quantity_is_read_or_refused() {
    replay("quantity", bodies::quantity);
}
