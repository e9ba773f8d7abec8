//! scratch
use couplet::*;
fn main() {
    let doc = match config::Document::load(std::path::Path::new("configs/heron.yaml"), &[] as &[&str], &[] as &[&str]) { Ok(d)=>d, Err(e)=>{ eprintln!("{}", config::render_all(&e, None, false)); return; } };
    let spec = match config::read(&doc) { Ok(d)=>d, Err(e)=>{ eprintln!("{}", config::render_all(&e, Some(&doc), false)); return; } };
    let sc = match mission::Scenario::new(&spec) { Ok(d)=>d, Err(e)=>{ eprintln!("{}", config::render_all(&e, Some(&doc), false)); return; } };
    let t=std::time::Instant::now();
    let res = if std::env::args().nth(1).is_some() { momentum::Resolution::Full } else { momentum::Resolution::Default };
    let plan = lifetime::Plan::new(sc, res, 1.0).unwrap();
    eprintln!("plan {:?} strata {} features {} rows {}", t.elapsed(), plan.strata().len(), plan.basis().features.len(), plan.basis().matrix.nrows());
    let o = plan.fly(plan.nominal());
    eprintln!("{:?} {:?} {:?}", o.rows_kg, o.unloads, o.life_s.map(|s| s/31557600.0));
    for p in plan.phase_momentum() { for (n,(a,b)) in plan.sources().iter().zip(p.peak_torque_n_m.iter().zip(&p.secular_n_m_s_per_day)) { eprintln!("{n} {a:.3e} {:.4} {:.4} {:.4}", b.x,b.y,b.z); } eprintln!("cyclic {}", p.cyclic_n_m_s); }
    let names = plan.scenario().parameters.as_slice().to_vec();
    eprintln!("params {}", names.len());
    let t=std::time::Instant::now();
    let draws: Vec<_> = (0..64).map(|i| plan.scenario().parameters.at_quantiles(&names.iter().map(|p| { let mut u=[0.0]; montecarlo::uniforms(1,&p.name,i,&mut u); u[0] }).collect::<Vec<_>>())).collect();
    eprintln!("draws {:?}", t.elapsed());
    let t=std::time::Instant::now();
    let os = plan.fly_block(&draws);
    eprintln!("64 lifetimes {:?}", t.elapsed());
    for o in os.iter().take(5) { eprintln!("{:?}", o.rows_kg); }
    let mut t: Vec<f64> = os.iter().map(|o| o.attitude_total_kg()).collect(); t.sort_by(f64::total_cmp); eprintln!("{} {} {}", t[0], t[32], t[63]);
    let pr = plan.pricer(0); eprintln!("guaranteed {} dearest {:?} vertices {}", pr.authority().guaranteed(), pr.price_map().dearest(), pr.price_map().vertices.len());
}
