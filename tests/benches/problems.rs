//! How many problems of a collection are settled, by their published difficulty.
//!
//! `cargo bench --bench problems -- FOLDER SECONDS [--every N] [--only equal|different] [--out FILE]`
//! reads `FOLDER/index.tsv` (columns problem, path, truth `equal` or `not equal`, rating from 0 to
//! 1), which is not part of this project, and checks each problem in a process of its own with a
//! memory cap of 4 GiB. `--every N` takes every N-th problem of each band of difficulty, `--only`
//! those that follow or those that do not. With `--out` each answer is a line of JSON in that file,
//! and problems that are in it with the same time are not run again.

use serde_json::{Value, json};
use std::collections::BTreeMap;
use std::io::{Read, Write};
use std::path::PathBuf;
use std::process::{Child, Command, Stdio};
use std::time::{Duration, Instant};

/// The cap, in KiB.
const MEMORY: u64 = 4 << 20;

/// A process that does not end by itself is ended after so much more time.
const GRACE: Duration = Duration::from_secs(20);

const BANDS: [&str; 6] = [
    "below 0.25",
    "0.25 to 0.49",
    "0.50 to 0.74",
    "0.75 to 0.99",
    "1.00",
    "does not follow",
];

fn main() {
    let arguments: Vec<String> = std::env::args()
        .skip(1)
        .filter(|a| a != "--bench")
        .collect();
    if arguments.is_empty() {
        println!("problems: no folder named, nothing measured");
        return;
    }
    let plan = Plan::read(&arguments).unwrap_or_else(|message| {
        eprintln!("problems: {message}");
        std::process::exit(3);
    });
    let mut known = plan.known();
    let problems = plan.problems();
    for (number, problem) in problems.iter().enumerate() {
        if known.contains_key(&problem.name) {
            continue;
        }
        let answer = problem.run(&plan);
        eprintln!(
            "{}/{} {} {} {} s",
            number + 1,
            problems.len(),
            problem.name,
            answer["verdict"].as_str().unwrap_or("failed"),
            answer["wall"]
        );
        plan.keep(&answer);
        known.insert(problem.name.clone(), answer);
    }
    let wrong = summary(&problems, &known);
    std::process::exit(i32::from(wrong > 0));
}

/// What the command line asks for.
struct Plan {
    folder: PathBuf,
    seconds: f64,
    every: usize,
    only: Option<bool>,
    out: Option<PathBuf>,
}

impl Plan {
    fn read(arguments: &[String]) -> Result<Plan, String> {
        let [folder, seconds, options @ ..] = arguments else {
            return Err("write FOLDER SECONDS and the options behind them".to_owned());
        };
        let mut plan = Plan {
            folder: folder.into(),
            seconds: seconds
                .parse()
                .map_err(|_| "the time is a number of seconds")?,
            every: 1,
            only: None,
            out: None,
        };
        for pair in options.chunks(2) {
            match pair {
                [name, value] if name == "--every" => {
                    let every = value.parse().ok().filter(|every| *every > 0);
                    plan.every = every.ok_or("--every takes a number from 1")?;
                }
                [name, value] if name == "--only" && value == "equal" => plan.only = Some(true),
                [name, value] if name == "--only" && value == "different" => {
                    plan.only = Some(false);
                }
                [name, value] if name == "--out" => plan.out = Some(value.into()),
                _ => return Err(format!("{} is not understood", pair.join(" "))),
            }
        }
        Ok(plan)
    }

    /// The problems of the index that are asked for.
    fn problems(&self) -> Vec<Problem> {
        let path = self.folder.join("index.tsv");
        let index = std::fs::read_to_string(&path).unwrap_or_else(|e| panic!("{path:?}: {e}"));
        let mut met = [0; BANDS.len()];
        let mut problems: Vec<Problem> = index.lines().skip(1).filter_map(Problem::new).collect();
        problems.retain(|problem| {
            let number = met[problem.band];
            met[problem.band] += 1;
            number % self.every == 0 && self.only.is_none_or(|only| only == problem.follows)
        });
        problems
    }

    /// The answers that are in the file already.
    fn known(&self) -> BTreeMap<String, Value> {
        let text = self.out.as_ref().map(std::fs::read_to_string);
        let text = text.and_then(Result::ok).unwrap_or_default();
        let answers = text
            .lines()
            .filter_map(|line| serde_json::from_str(line).ok());
        answers
            .filter(|answer: &Value| answer["limit"].as_f64() == Some(self.seconds))
            .filter_map(|answer| Some((answer["problem"].as_str()?.to_owned(), answer)))
            .collect()
    }

    fn keep(&self, answer: &Value) {
        if let Some(path) = &self.out {
            let mut options = std::fs::OpenOptions::new();
            let file = options.create(true).append(true).open(path);
            let kept = file.and_then(|mut file| writeln!(file, "{answer}"));
            kept.unwrap_or_else(|error| panic!("{path:?}: {error}"));
        }
    }
}

/// A row of the index.
struct Problem {
    name: String,
    path: String,
    follows: bool,
    rating: f64,
    band: usize,
}

impl Problem {
    fn new(line: &str) -> Option<Problem> {
        let fields: Vec<&str> = line.split('\t').collect();
        let [name, path, truth, rating] = fields[..] else {
            return None;
        };
        let rating: f64 = rating.trim().parse().ok()?;
        let follows = truth == "equal";
        let band = match rating {
            _ if !follows => 5,
            r if r < 0.25 => 0,
            r if r < 0.5 => 1,
            r if r < 0.75 => 2,
            r if r < 1.0 => 3,
            _ => 4,
        };
        Some(Problem {
            name: name.to_owned(),
            path: path.to_owned(),
            follows,
            rating,
            band,
        })
    }

    /// Checks it in a process of its own.
    fn run(&self, plan: &Plan) -> Value {
        let begun = Instant::now();
        // The shell sets the cap before it becomes the program.
        let mut child = Command::new("sh")
            .arg("-c")
            .arg(format!("ulimit -v {MEMORY}; exec \"$0\" \"$@\""))
            .arg(env!("CARGO_BIN_EXE_equable"))
            .arg("check")
            .arg(plan.folder.join(&self.path))
            .args([
                "--json",
                "--within",
                &format!("{}ms", (plan.seconds * 1e3) as u64),
            ])
            .arg("--library")
            .arg(&plan.folder)
            .stdin(Stdio::null())
            .stdout(Stdio::piped())
            .stderr(Stdio::piped())
            .spawn()
            .expect("the program can be started");
        let out = gather(child.stdout.take());
        let err = gather(child.stderr.take());
        let limit = Duration::from_secs_f64(plan.seconds) + GRACE;
        let status = wait(&mut child, begun + limit);
        let wall = (begun.elapsed().as_secs_f64() * 1e3).round() / 1e3;
        let out = out.join().unwrap_or_default();
        let err = err.join().unwrap_or_default();
        let mut lines = out.lines();
        let mut answer = lines
            .next()
            .and_then(|line| serde_json::from_str(line).ok())
            .filter(Value::is_object)
            .unwrap_or_else(|| json!({}));
        let first = err.lines().find(|line| !line.trim().is_empty());
        answer["problem"] = json!(self.name);
        answer["truth"] = json!(if self.follows { "equal" } else { "not equal" });
        answer["rating"] = json!(self.rating);
        answer["limit"] = json!(plan.seconds);
        answer["wall"] = json!(wall);
        answer["status"] = json!(status);
        answer["message"] = json!(first);
        if let Some(object) = answer.as_object_mut() {
            object.remove("file");
        }
        answer
    }

    /// Right, wrong, or nothing.
    fn judge(&self, answer: &Value) -> Option<bool> {
        match answer["verdict"].as_str() {
            Some("equal") => Some(self.follows),
            Some("not equal") => Some(!self.follows),
            _ => None,
        }
    }
}

/// Reads all of a pipe on a thread, so that the other one cannot fill up meanwhile.
fn gather(pipe: Option<impl Read + Send + 'static>) -> std::thread::JoinHandle<String> {
    std::thread::spawn(move || {
        let mut bytes = Vec::new();
        if let Some(mut pipe) = pipe {
            // What was read before an error is what there is.
            let _ = pipe.read_to_end(&mut bytes);
        }
        String::from_utf8_lossy(&bytes).into_owned()
    })
}

/// Waits for a process, at most until then; gives its exit status, if it ended by itself.
fn wait(child: &mut Child, until: Instant) -> Option<i32> {
    loop {
        match child.try_wait() {
            Ok(Some(status)) => return status.code(),
            Ok(None) if Instant::now() < until => std::thread::sleep(Duration::from_millis(2)),
            _ => {
                // It may have ended just now.
                let _ = child.kill();
                let _ = child.wait();
                return None;
            }
        }
    }
}

/// Prints a row for each band and what was wrong or failed; gives how many answers were wrong.
fn summary(problems: &[Problem], known: &BTreeMap<String, Value>) -> usize {
    println!(
        "{:<16} {:>8} {:>6} {:>6} {:>10} {:>7} {:>9}",
        "rating", "problems", "right", "wrong", "undecided", "failed", "seconds"
    );
    let mut all_wrong = 0;
    for (band, title) in BANDS.iter().enumerate() {
        let of_band: Vec<(&Problem, &Value)> = problems
            .iter()
            .filter(|problem| problem.band == band)
            .filter_map(|problem| Some((problem, known.get(&problem.name)?)))
            .collect();
        let count = |wanted: &dyn Fn(&Problem, &Value) -> bool| {
            of_band.iter().filter(|(p, a)| wanted(p, a)).count()
        };
        let right = count(&|problem, answer| problem.judge(answer) == Some(true));
        let wrong = count(&|problem, answer| problem.judge(answer) == Some(false));
        let undecided = count(&|_, answer| answer["verdict"] == "undecided");
        let failed = of_band.len() - right - wrong - undecided;
        let seconds: f64 = of_band.iter().filter_map(|(_, a)| a["wall"].as_f64()).sum();
        println!(
            "{title:<16} {:>8} {right:>6} {wrong:>6} {undecided:>10} {failed:>7} {seconds:>9.1}",
            of_band.len()
        );
        all_wrong += wrong;
    }
    for problem in problems {
        let Some(answer) = known.get(&problem.name) else {
            continue;
        };
        if problem.judge(answer) == Some(false) {
            println!("WRONG: {}", problem.name);
        }
        if answer["verdict"].as_str().is_none() {
            let message = answer["message"].as_str().unwrap_or("no answer");
            println!("failed: {}: {message}", problem.name);
        }
    }
    all_wrong
}
