//! Running the engines of a session by turns, on one core or on all.
//!
//! Each engine gets slices of time that become longer; whichever has had the fewest slices comes
//! next, so that every core has something to do while any engine waits. The thread that was called
//! takes part, since only it may tell about progress.

use super::control::Work;
use super::goal::Aim;
use super::runner::Runner;
use super::workers::{Ended, NoOrder, Plan, Workers};
use crate::engine::{Arrows, Engine, Outcome};
use crate::rewrite::{Limits, Stopped};
use crate::term::TermId;
use crate::theory::Theory;
use std::sync::atomic::{AtomicBool, Ordering};
use std::sync::{Arc, Mutex, MutexGuard, PoisonError};
use std::time::{Duration, Instant};

/// The length of the first slice; each further one is twice as long.
const FIRST_SLICE: Duration = Duration::from_millis(40);
/// No more threads than this take part.
const MOST_THREADS: usize = 8;

/// The engines of a session while they run.
pub(super) struct Course {
    slots: Vec<Slot>,
    planned: Vec<Plan>,
    /// Plans that take no part.
    later: Vec<Plan>,
    question: Option<(TermId, TermId)>,
    aim: Option<Aim>,
    /// The table of techniques that new engines get, if it was stated.
    arrows: Option<Arrows>,
    /// Does nothing but the one engine that completed take part?
    settled: bool,
    tried: usize,
    ended: Option<Result<Ended, NoOrder>>,
}

struct Slot {
    /// Absent while a thread runs it, or if the thread was lost.
    runner: Option<Runner>,
    rounds: u32,
    formed: u64,
    /// There is nothing more to be had from it.
    exhausted: bool,
    busy: bool,
}

impl Course {
    pub(super) fn new(
        workers: &mut Workers,
        theory: &Theory,
        question: Option<(TermId, TermId)>,
    ) -> Self {
        let slot = |runner: Runner| Slot {
            rounds: runner.rounds,
            formed: runner.engine.counts().formed,
            exhausted: question.is_none() && !runner.own,
            busy: false,
            runner: Some(runner),
        };
        let planned = std::mem::take(&mut workers.planned);
        let (planned, later) = planned
            .into_iter()
            .partition(|plan| question.is_some() || plan.own);
        let aim = question.and_then(|question| Aim::new(theory, question));
        Course {
            slots: workers.runners.drain(..).map(slot).collect(),
            planned,
            later,
            question,
            aim,
            arrows: workers.arrows(),
            settled: workers.settled,
            tried: workers.tried,
            ended: None,
        }
    }

    /// The engines go back.
    pub(super) fn give_back(self, workers: &mut Workers) {
        workers.runners = self.slots.into_iter().filter_map(|s| s.runner).collect();
        workers.planned = self.later;
        workers.planned.extend(self.planned);
        workers.tried = self.tried;
    }

    /// The next engine, and how long its slice is; `None` in place of it if one may come later.
    fn take(&mut self, theory: &Theory) -> Option<Option<(usize, Runner, Option<Duration>)>> {
        if self.ended.is_some() {
            return None;
        }
        let free = |slot: &(usize, &Slot)| slot.1.runner.is_some() && !slot.1.exhausted;
        let places = self.slots.iter().enumerate().filter(free);
        let next = places
            .map(|(place, slot)| (slot.rounds, place))
            .min()
            .filter(|(rounds, _)| *rounds == 0 || self.planned.is_empty() || self.settled);
        let place = match next {
            Some((_, place)) => place,
            None if self.settled || self.planned.is_empty() => {
                if !self.slots.iter().any(|slot| slot.busy) {
                    self.ended = Some(Ok(Ended::Exhausted));
                    return None;
                }
                return Some(None);
            }
            None => {
                let plan = self.planned.pop().expect("it is not empty");
                self.tried += usize::from(plan.own);
                let made = match &self.aim {
                    Some(aim) if plan.aimed => Runner::aimed(theory, plan, aim),
                    _ => Runner::planned(theory, plan),
                };
                match made {
                    Ok(mut runner) => {
                        if let Some(arrows) = self.arrows {
                            runner.engine.set_arrows(arrows);
                        }
                        self.slots.push(Slot {
                            runner: Some(runner),
                            rounds: 0,
                            formed: 0,
                            exhausted: false,
                            busy: false,
                        });
                    }
                    Err(problem) => {
                        self.ended = Some(Err(problem));
                        return None;
                    }
                }
                self.slots.len() - 1
            }
        };
        let alone = self.slots.len() == 1 && (self.settled || self.planned.is_empty());
        let slot = &mut self.slots[place];
        slot.busy = true;
        let runner = slot.runner.take().expect("it is free");
        let slice = FIRST_SLICE * 2u32.saturating_pow(slot.rounds.min(20));
        // Those that are aimed at the question settle most of what is settled.
        let slice = if runner.goal.is_some() {
            2 * slice
        } else {
            slice
        };
        Some(Some((place, runner, (!alone).then_some(slice))))
    }

    /// What an engine did with its slice; `used` says whether it used it up.
    fn put(&mut self, place: usize, mut runner: Runner, outcome: Outcome, used: bool) {
        let ended = match outcome {
            Outcome::Met => Some(Ended::Met(place)),
            Outcome::Complete if runner.goal.is_none() => Some(Ended::Complete(place)),
            _ => None,
        };
        let slot = &mut self.slots[place];
        slot.exhausted = matches!(
            outcome,
            Outcome::Exhausted | Outcome::Complete | Outcome::Stopped(Stopped::Memory)
        );
        runner.rounds += u32::from(used);
        slot.rounds = runner.rounds;
        slot.formed = runner.engine.counts().formed;
        slot.busy = false;
        slot.runner = Some(runner);
        if let (None, Some(ended)) = (&self.ended, ended) {
            self.ended = Some(Ok(ended));
        }
    }

    /// Drops the engines that are missing because their thread was lost.
    fn forget_lost(&mut self) {
        let present = |slots: &[Slot]| slots.iter().filter(|s| s.runner.is_some()).count();
        if let Some(Ok(Ended::Met(place) | Ended::Complete(place))) = &mut self.ended {
            *place = present(&self.slots[..*place]);
        }
        self.slots.retain(|slot| slot.runner.is_some());
    }

    fn formed(&self) -> u64 {
        self.slots.iter().map(|slot| slot.formed).sum()
    }
}

/// A course that several threads run.
struct Shared<'a> {
    course: Mutex<Course>,
    theory: &'a Theory,
    question: Option<(TermId, TermId)>,
    /// Set when there is an answer.
    found: Arc<AtomicBool>,
}

impl Shared<'_> {
    fn course(&self) -> MutexGuard<'_, Course> {
        self.course.lock().unwrap_or_else(PoisonError::into_inner)
    }

    /// Runs slices until there is an answer, the limits are reached, or nothing is left.
    fn run(&self, limits: &Limits, mut progress: impl FnMut(&Engine, u64)) {
        loop {
            let (taken, formed) = {
                let mut course = self.course();
                (course.take(self.theory), course.formed())
            };
            let Some(taken) = taken else {
                return;
            };
            if limits.check(0).is_err() {
                if let Some((place, runner, _)) = taken {
                    let outcome = Outcome::Stopped(Stopped::Time);
                    self.course().put(place, runner, outcome, false);
                }
                return;
            }
            let Some((place, mut runner, slice)) = taken else {
                std::thread::sleep(Duration::from_millis(1));
                continue;
            };
            let mut bounds = limits.clone();
            if let Some(slice) = slice {
                bounds = bounds.until(Instant::now() + slice);
            }
            let asked = self.question.map(|(s, t)| runner.ask(self.theory, s, t));
            let question = asked.as_ref().map(|asked| &asked.question);
            let others = formed - runner.engine.counts().formed;
            let run = |engine: &Engine| progress(engine, others);
            let outcome = runner.engine.run(&mut bounds, question, run);
            let over = limits.check(0).is_err();
            let mut course = self.course();
            course.put(place, runner, outcome, !over);
            if course.ended.is_some() {
                self.found.store(true, Ordering::Relaxed);
                return;
            }
        }
    }
}

/// Runs the engines until there is an answer or the work is over.
pub(super) fn race(
    course: Course,
    theory: &Theory,
    work: &mut Work,
) -> (Result<Ended, NoOrder>, Course) {
    let found = work.elsewhere().unwrap_or_default();
    let mut limits = work.limits(None);
    limits.elsewhere = Some(found.clone());
    let cores = std::thread::available_parallelism().map_or(1, usize::from);
    let question = course.question;
    let alone = course.settled || course.slots.len() + course.planned.len() == 1;
    let others = match question {
        Some(_) if !alone && !work.pauses() => cores.min(MOST_THREADS) - 1,
        _ => 0,
    };
    let shared = Shared {
        course: Mutex::new(course),
        theory,
        question,
        found,
    };
    std::thread::scope(|scope| {
        let threads: Vec<_> = (0..others)
            .map(|_| scope.spawn(|| shared.run(&limits, |_, _| ())))
            .collect();
        shared.run(&limits, |engine, others| work.tell(engine, others));
        for thread in threads {
            // What a lost thread had is missing from the course; the others have gone on.
            drop(thread.join());
        }
    });
    let mut course = shared
        .course
        .into_inner()
        .unwrap_or_else(PoisonError::into_inner);
    course.forget_lost();
    let ended = course.ended.take().unwrap_or_else(|| {
        let stopped = match work.is_stopped() {
            true => Stopped::Interrupted,
            false => Stopped::Time,
        };
        Ok(Ended::Stopped(stopped))
    });
    (ended, course)
}
