//! The engine: numbers to hold, consistency, injection, events.
#![allow(clippy::unwrap_used)]

mod common;

use common::fields::one_well;
use wane::forecast::run;

#[test]
fn smoke() {
    let t = std::time::Instant::now();
    let f = run(&one_well()).unwrap();
    println!("{:?}", t.elapsed());
    println!("{:?} {} {:e}", f.work, f.end_days, f.balance_residual);
    for e in &f.events {
        println!("{} {:.2} {} {:?} {}", e.date, e.days, e.name, e.kind, e.note);
    }
    for (i, p) in f.periods.iter().enumerate().step_by(6) {
        let r = &f.wells[0].rows[i];
        println!(
            "{} p {:.0} q {:?} pwf {:?} gor {:?} margin {:?} sg {:.3}",
            p.start,
            f.tank[i].pressure_psia,
            r.liquid_rate_stb_d,
            r.flowing_pressure_psia,
            r.gor_scf_stb,
            r.flow_margin_psi,
            f.tank[i].gas_saturation
        );
    }
    println!("{:#?}", f.wells[0].natural_flow_end);
    for d in &f.doubts {
        println!("{d:?}");
    }
}
