//! Places of neighbouring water cuts joined to curves.

use super::Edge;

/// Which places of the longer list have no partner in the shorter one, which it continues otherwise: the first one where a place leaves
/// through the top of the map, or two neighbours where they meet.
pub(super) fn lost(longer: &[f64], shorter: &[f64]) -> Option<(usize, usize)> {
    let gone = longer.len().checked_sub(shorter.len()).filter(|n| (1..=2).contains(n))?;
    if gone == 1 {
        return Some((0, 1));
    }
    let miss = |i: usize| -> f64 {
        let left = longer[..i].iter().chain(&longer[i + gone..]);
        // Neighbours that lie close together are the ones that meet.
        left.zip(shorter).map(|(a, b)| (a - b).abs()).sum::<f64>() + (longer[i] - longer[i + 1]).abs()
    };
    let first = (0..=longer.len() - gone).min_by(|a, b| miss(*a).total_cmp(&miss(*b)))?;
    Some((first, gone))
}

pub(super) fn pressures(edge: &Edge) -> Vec<f64> {
    edge.places.iter().map(|p| p.pressure_psia).collect()
}

/// Curves through the places: a curve ends where its place leaves the map or meets a neighbour.
pub(super) fn branches(points: &[Edge]) -> Vec<Vec<(f64, f64)>> {
    let mut done: Vec<Vec<(f64, f64)>> = Vec::new();
    let mut open: Vec<Vec<(f64, f64)>> = Vec::new();
    for edge in points {
        let (cut, here) = (edge.water_cut, pressures(edge));
        let before: Vec<(f64, f64)> = open.iter().filter_map(|c| c.last().copied()).collect();
        let old: Vec<f64> = before.iter().map(|p| p.1).collect();
        match here.len() {
            n if n < old.len() => match lost(&old, &here) {
                Some((first, gone)) => {
                    let mut closed: Vec<_> = open.drain(first..first + gone).collect();
                    if gone == 2 {
                        let meeting = (before[first].0, 0.5 * (before[first].1 + before[first + 1].1));
                        closed.iter_mut().for_each(|curve| curve.push(meeting));
                    }
                    done.extend(closed);
                }
                None => done.append(&mut open),
            },
            n if n > old.len() => match lost(&here, &old) {
                Some((first, come)) => {
                    let meeting = (cut, here[first..first + come].iter().sum::<f64>() / come as f64);
                    let fresh = vec![if come == 2 && !old.is_empty() { vec![meeting] } else { Vec::new() }; come];
                    open.splice(first..first, fresh);
                }
                None => done.append(&mut open),
            },
            _ => {}
        }
        if open.len() != here.len() {
            open = vec![Vec::new(); here.len()];
        }
        for (curve, pressure) in open.iter_mut().zip(here) {
            curve.push((cut, pressure));
        }
    }
    done.extend(open);
    done.retain(|curve| curve.len() > 1);
    done
}
