use dewbound_thermo::*;
#[test]
fn wk() {
    for qv in [11.0, 12.0, 13.0, 14.0, 15.0, 16.0] {
        let (mut p, mut t, mut td) = (vec![], vec![], vec![]);
        let mut pi: f64 = 1.0;
        let cp = GAS_CONSTANT_DRY / KAPPA;
        let dz = 50.0;
        let mut z: f64 = 0.0;
        while z < 18000.0 {
            let th = if z <= 12000.0 {
                300.0 + 43.0 * (z / 12000.0).powf(1.25)
            } else {
                343.0 * (GRAVITY / (cp * 213.0) * (z - 12000.0)).exp()
            };
            let rh = if z <= 12000.0 {
                1.0 - 0.75 * (z / 12000.0).powf(1.25)
            } else {
                0.25
            };
            let pp = 1e5 * pi.powf(1.0 / KAPPA);
            let tt = th * pi;
            let w = (rh * saturation_mixing_ratio(Pressure::from_pa(pp), Temperature::from_k(tt)))
                .min(qv / 1000.0);
            p.push(pp);
            t.push(tt);
            td.push(Some(
                dewpoint_from_mixing_ratio(Pressure::from_pa(pp), w).k(),
            ));
            pi -= GRAVITY * dz / (cp * th * (1.0 + 0.61 * w));
            z += dz;
        }
        let env = Environment::new(&p, &t, &td).unwrap();
        let a = lift(&env, env.bottom(), Method::default()).unwrap();
        println!(
            "{qv} cape {} cin {:?} lcl {} lfc {:?} el {:?} n {}",
            a.cape,
            a.cin,
            a.lcl.pressure.hpa(),
            a.lfc.map(|p| p.hpa()),
            a.el.map(|p| p.hpa()),
            a.buoyant.len()
        );
        let m = lift(
            &env,
            mixed_start(&env, MIXED_DEPTH).unwrap(),
            Method::default(),
        )
        .unwrap();
        println!("   mixed {} {:?} {:?}", m.cape, m.cin, m.start);
        // naive
        let s = env.bottom();
        let l = s.lcl();
        let th_e = s.theta_e();
        let (mut pos, mut neg) = (0.0, 0.0);
        let (z0, z1) = (-p[0].ln(), -p[p.len() - 1].ln());
        let n = 20000;
        let h = (z1 - z0) / n as f64;
        for k in 0..n {
            let pr = Pressure::from_pa((-(z0 + (k as f64 + 0.5) * h)).exp());
            let tv = if pr.pa() > l.pressure.pa() {
                let t = s.temperature.k()
                    * (pr.pa() / s.pressure.pa()).powf(KAPPA * (1.0 - 0.28 * s.mixing_ratio()));
                t * (1.0 + s.mixing_ratio() / EPSILON) / (1.0 + s.mixing_ratio())
            } else {
                let t = temperature_on_pseudoadiabat(th_e, pr);
                Air {
                    pressure: pr,
                    temperature: t,
                    dewpoint: t,
                }
                .virtual_temperature()
                .k()
            };
            let b = GAS_CONSTANT_DRY * h * (tv - env.virtual_at(pr).unwrap().1);
            if b > 0.0 && pr < l.pressure {
                pos += b
            } else if b < 0.0 && pr.pa() > a.lfc.unwrap().pa() {
                neg += b
            }
        }
        println!("   naive {pos} {neg}");
        assert!((pos - a.cape).abs() < 1e-3 * pos);
    }
}
