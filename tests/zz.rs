mod common;
use common::fields::*;
use wane::forecast::run;
#[test]
fn zz() {
    for (lp, tgt) in [(120.0, 800.0), (150.0, 800.0), (200.0, 800.0)] {
        let mut spec = one_well();
        spec.wells[0].line_pressure_psia = lp;
        spec.wells[0].target_rate_stb_d = Some(tgt);
        let f = run(&spec).unwrap();
        println!("--- {lp} {:?} {}", f.work, f.end_days);
        for e in &f.events {
            println!("{} {:.2} {} {:?} {}", e.date, e.days, e.name, e.kind, e.note);
        }
        for (i, p) in f.periods.iter().enumerate().step_by(12) {
            let r = &f.wells[0].rows[i];
            println!(
                "{} p {:.0} q {:.1?} pwf {:.0?} gor {:.0?} margin {:.1?} sg {:.3}",
                p.start,
                f.tank[i].pressure_psia,
                r.liquid_rate_stb_d.unwrap_or(0.0),
                r.flowing_pressure_psia.unwrap_or(0.0),
                r.gor_scf_stb.unwrap_or(0.0),
                r.flow_margin_psi.unwrap_or(0.0),
                f.tank[i].gas_saturation
            );
        }
    }
    let mut spec = one_well();
    spec.wells[0].line_pressure_psia = 120.0;
    spec.wells[0].target_rate_stb_d = Some(800.0);
    spec.wells[0].minimum_rate_stb_d = Some(600.0);
    let f = run(&spec).unwrap();
    println!("{:?}", f.wells[0].natural_flow_end);
    for e in &f.events {
        println!("{} {:.2} {} {:?} {}", e.date, e.days, e.name, e.kind, e.note);
    }
}
