//! Small theories by hand; the larger checks against outside values read theories as text and lie
//! in the folder of tests.

use super::*;
use crate::order::{Order, OrderKind, OrderSetting};
use crate::rewrite::Limits;
use crate::term::{Sort, Symbol, SymbolInfo, TermId, Variable};

const ONE: Sort = Sort(0);

fn symbols(arities: &[usize]) -> Vec<SymbolInfo> {
    let info = |&arity: &usize| SymbolInfo {
        arguments: vec![ONE; arity].into(),
        result: ONE,
        weight: 1,
    };
    arities.iter().map(info).collect()
}

fn lpo(precedence: &[u32], symbols: &[SymbolInfo]) -> Order {
    let setting = OrderSetting {
        kind: OrderKind::Lpo,
        precedence: precedence.iter().map(|s| Symbol(*s)).collect(),
        weights: Vec::new(),
        variable_weight: 1,
    };
    Order::new(&setting, symbols).expect("an admissible order")
}

fn variable(engine: &mut Engine, index: u32) -> TermId {
    engine.system.bank.variable(Variable { index, sort: ONE })
}

/// e, i, *: left unit, left inverse, associativity.
fn group() -> Engine {
    let symbols = symbols(&[0, 1, 2]);
    let mut engine = Engine::new(lpo(&[1, 2, 0], &symbols), &symbols);
    let (e, i, times) = (Symbol(0), Symbol(1), Symbol(2));
    let [x, y, z] = [0, 1, 2].map(|index| variable(&mut engine, index));
    let bank = &mut engine.system.bank;
    let unit = bank.apply(e, &[]);
    let left = bank.apply(times, &[unit, x]);
    let ix = bank.apply(i, &[x]);
    let ixx = bank.apply(times, &[ix, x]);
    let xy = bank.apply(times, &[x, y]);
    let xy_z = bank.apply(times, &[xy, z]);
    let yz = bank.apply(times, &[y, z]);
    let x_yz = bank.apply(times, &[x, yz]);
    engine.add_law(left, x);
    engine.add_law(ixx, unit);
    engine.add_law(xy_z, x_yz);
    engine
}

#[test]
fn a_group_has_ten_rules() {
    let mut engine = group();
    assert_eq!(
        engine.run(&mut Limits::none(), None, |_| ()),
        Outcome::Complete
    );
    // Knuth & Bendix 1970, example 1.
    assert_eq!(engine.active_rules().count(), 10);
    for rule in engine.active_rules() {
        assert!(engine.system.rule(rule).oriented);
    }
}

#[test]
fn every_record_derives_its_rule() {
    let mut engine = group();
    engine.run(&mut Limits::none(), None, |_| ());
    for id in 0..engine.system.rules().len() {
        let id = crate::rewrite::RuleId(id as u32);
        let record = engine.record(id).clone();
        let (left, right) = engine.derive(&record).expect("it derives");
        let rule = engine.system.rule(id);
        let (wanted_left, wanted_right) = (rule.left, rule.right);
        let ([left, right], _) = crate::term::renumber(&mut engine.system.bank, [left, right]);
        assert_eq!(
            (left, right),
            (wanted_left, wanted_right),
            "{id:?} {record:?}"
        );
    }
}

/// A semilattice: associative, commutative, idempotent.
#[test]
fn a_semilattice_is_ground_complete_and_sums_have_one_normal_form() {
    let symbols = symbols(&[2, 0, 0, 0]);
    let mut engine = Engine::new(lpo(&[0, 1, 2, 3], &symbols), &symbols);
    let join = Symbol(0);
    let [x, y, z] = [0, 1, 2].map(|index| variable(&mut engine, index));
    let bank = &mut engine.system.bank;
    let xy = bank.apply(join, &[x, y]);
    let yx = bank.apply(join, &[y, x]);
    let xx = bank.apply(join, &[x, x]);
    let xy_z = bank.apply(join, &[xy, z]);
    let yz = bank.apply(join, &[y, z]);
    let x_yz = bank.apply(join, &[x, yz]);
    engine.add_law(xy, yx);
    engine.add_law(xx, x);
    engine.add_law(xy_z, x_yz);
    assert_eq!(
        engine.run(&mut Limits::none(), None, |_| ()),
        Outcome::Complete
    );
    assert_eq!(engine.ac_symbols(), [join]);
    let bank = &mut engine.system.bank;
    let [a, b, c] = [1, 2, 3].map(|s| bank.apply(Symbol(s), &[]));
    let ab = bank.apply(join, &[a, b]);
    let ca = bank.apply(join, &[c, a]);
    let one = bank.apply(join, &[ab, ca]);
    let bc = bank.apply(join, &[b, c]);
    let two = bank.apply(join, &[bc, a]);
    let limits = &mut Limits::none();
    let question = |left, right| Question {
        left,
        right,
        constants: Vec::new(),
    };
    assert!(engine.meets(&question(one, two), limits).unwrap());
    assert!(!engine.meets(&question(ab, two), limits).unwrap());
}

/// The laws of a semilattice, not yet looked at.
fn semilattice() -> Engine {
    let symbols = symbols(&[2, 0, 0, 0]);
    let mut engine = Engine::new(lpo(&[0, 1, 2, 3], &symbols), &symbols);
    let join = Symbol(0);
    let [x, y, z] = [0, 1, 2].map(|index| variable(&mut engine, index));
    let bank = &mut engine.system.bank;
    let xy = bank.apply(join, &[x, y]);
    let yx = bank.apply(join, &[y, x]);
    let xx = bank.apply(join, &[x, x]);
    let xy_z = bank.apply(join, &[xy, z]);
    let yz = bank.apply(join, &[y, z]);
    let x_yz = bank.apply(join, &[x, yz]);
    engine.add_law(xy, yx);
    engine.add_law(xx, x);
    engine.add_law(xy_z, x_yz);
    engine
}

/// Runs until so many pairs are chosen.
fn run_for(engine: &mut Engine, most: u64) -> Outcome {
    let mut limits = Limits::none();
    let stop = limits.stop.clone();
    engine.run(&mut limits, None, |engine| {
        let is_enough = engine.counts().chosen > most;
        stop.store(is_enough, std::sync::atomic::Ordering::Relaxed);
    })
}

/// Presets, and the usual table with one cell the other way round.
fn tables() -> Vec<Arrows> {
    let mut tables: Vec<Arrows> = Arrows::PRESETS.iter().map(|(_, table)| *table).collect();
    for arrow in Arrow::ALL {
        for technique in Technique::ALL {
            let usual = Arrows::USUAL;
            tables.push(if usual.has(arrow, technique) {
                usual.without(arrow, technique)
            } else {
                usual.with(arrow, technique)
            });
        }
    }
    tables
}

#[test]
fn whatever_the_table_a_group_has_the_same_normal_forms() {
    for table in tables() {
        let mut engine = group();
        engine.set_arrows(table);
        let outcome = engine.run(&mut Limits::none(), None, |_| ());
        assert_eq!(outcome, Outcome::Complete, "{table:?}");
        assert!(engine.is_complete());
        if table.has(Arrow::Active, Technique::Rewriting) {
            assert_eq!(engine.active_rules().count(), 10, "{table:?}");
        }
        // i(x * y) = i(y) * i(x), by normal forms.
        let [x, y] = [0, 1].map(|index| variable(&mut engine, index));
        let bank = &mut engine.system.bank;
        let (i, times) = (Symbol(1), Symbol(2));
        let xy = bank.apply(times, &[x, y]);
        let left = bank.apply(i, &[xy]);
        let [ix, iy] = [x, y].map(|term| bank.apply(i, &[term]));
        let right = bank.apply(times, &[iy, ix]);
        let limits = &mut Limits::none();
        let left = engine.system.normal_form(left, limits).unwrap();
        let right = engine.system.normal_form(right, limits).unwrap();
        assert_eq!(left, right, "{table:?}");
    }
}

#[test]
fn whatever_the_table_a_semilattice_is_completed() {
    for table in tables() {
        // Without these, pairs of the commutative law have no end.
        let pairs = [Technique::Instance, Technique::Ac, Technique::Ground];
        if !pairs.iter().all(|t| table.has(Arrow::Chosen, *t)) {
            continue;
        }
        let mut engine = semilattice();
        engine.set_arrows(table);
        assert_eq!(run_for(&mut engine, 5_000), Outcome::Complete, "{table:?}");
        // Every pair of the rules joins by itself.
        engine.set_arrows(Arrows::USUAL);
        let rules: Vec<_> = engine.active_rules().collect();
        let before = engine.counts();
        for rule in &rules {
            engine.start_forming_again(*rule);
            engine.continue_forming(&mut Limits::none()).unwrap();
        }
        assert!(engine.counts().formed > before.formed);
        engine.run(&mut Limits::none(), None, |_| ());
        assert_eq!(
            engine.active_rules().collect::<Vec<_>>(),
            rules,
            "{table:?}"
        );
    }
}

#[test]
fn the_criteria_of_the_strong_table_delete_something() {
    let mut engine = group();
    engine.set_arrows(Arrows::STRONG);
    engine.run(&mut Limits::none(), None, |_| ());
    let prime = engine.tallies().of(Arrow::Chosen, Technique::Prime);
    assert!(prime.deleted > 0 && prime.asked > prime.deleted);
    assert_eq!(engine.counts().composite, prime.deleted);
    let siblings = engine.tallies().of(Arrow::Siblings, Technique::Instance);
    assert!(siblings.deleted > 0 && siblings.asked > siblings.deleted);
}

#[test]
fn an_engine_that_gave_up_a_waiting_pair_is_never_complete() {
    let mut engine = group();
    engine.set_most_waiting(4);
    let outcome = engine.run(&mut Limits::none(), None, |_| ());
    assert_eq!(outcome, Outcome::Exhausted);
    assert!(engine.counts().trimmed > 0);
    assert!(!engine.counts().is_whole());
    assert!(!engine.is_complete());
}
