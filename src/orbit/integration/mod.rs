//! TODO
mod attraction;
mod constants;
mod drift;
mod eight;
mod planets;
pub use constants::Constants;

#[cfg(test)]
mod speed {
    #[test]
    fn speed() {
        use super::planets::*;
        let c: super::Constants = toml::from_str(include_str!("../../../configs/orbit_constants.toml")).unwrap();
        c.check().unwrap();
        let mut p = Planets::new(&c, Direction::Past);
        let e0 = p.energy();
        println!("{:?}", c);
        println!("kd deg/Myr {}", c.obliquity_drift_rad_yr().to_degrees()*1e6);
        println!("aS {} aM {}", c.solar_precession_rad_yr()*206264.806, c.lunar_precession_rad_yr()*206264.806);
        let t = std::time::Instant::now();
        for i in 0..1000 {
            let b = p.next_block();
            if i % 100 == 0 { println!("{i} e {:.9} {:?} dE {:e}", b[0].hypot(b[1]), b, p.energy()/e0 - 1.0); }
        }
        println!("{:?}", t.elapsed());
    }
}
