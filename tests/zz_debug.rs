mod equilibrium_support;
use std::sync::atomic::AtomicBool;
use equilibrium_support::solids::{add_candidates, hold_phase};
use equilibrium_support::{DAVIES, Random, chemistry_like, hold_ph};
use lyate::equilibrium::phases::equilibrate;
use lyate::equilibrium::system::*;
fn make(random: &mut Random) -> System {
        let components = 2 + random.below(9);
        let species = 5 + random.below(46);
        let mut system = chemistry_like(random, components, species);
        let count = if random.chance(1.0 / 6.0) { components + 1 + random.below(6) } else { 1 + random.below(components) };
        add_candidates(random, &mut system, count);
    system
}
#[test]
fn debug() {
    for seed in [2954u64, 4486, 3732, 6254, 1576] {
        let random = &mut Random::new(seed);
        let mut system = make(random);
        if [2954, 4486].contains(&seed) {
        if random.chance(0.4) { hold_ph(&mut system, random.uniform(-1.0, 15.0)); }
        for _ in 0..random.below(3) { hold_phase(random, &mut system); }
        if random.chance(0.5) { system.activity = DAVIES; }
        } else {system.activity = DAVIES;}
        let c = AtomicBool::new(false);
        match equilibrate(system.clone(), None, &c) { Ok(a) => println!("{seed} ok {:?} I {:e} pH {} it {}", a.formed, a.answer.ionic_strength, a.answer.ph(), a.answer.iterations), Err(e) => println!("{seed} eq {e:?}") }
        let mut ideal = system.clone(); ideal.activity = equilibrium_support::IDEAL;
        match equilibrate(ideal.clone(), None, &c) { Ok(a) => println!("  ideal ok {:?} I {:e} pH {}", a.formed, a.answer.ionic_strength, a.answer.ph()), Err(e) => println!("  ideal eq {e:?}") }
    }
}
