//! The evidence about one footprint: every test, also those that could not speak, and the sum.

use serde::{Serialize, Serializer};

use super::health::Examined;
use super::rulebook::{Test, Way};
use super::run_tests::TestResult;
use super::screened::{Councils, Screened, Seat};
use super::threshold::Threshold;
use super::verdict::Verdict;

/// Everything that is known about one footprint.
#[derive(Debug, Clone, Serialize)]
pub struct Evidence {
    /// Its number.
    pub footprint: usize,
    /// Its surface in the rulebook's words.
    pub surface: Option<String>,
    /// Whether anything can be said.
    pub assessed: bool,
    /// 0 plain, 1 a coin toss or hardly assessed.
    pub doubt: f64,
    /// Flag by flag.
    pub flags: Vec<FlagEvidence>,
    /// Test by test, in the order of the rulebook.
    pub tests: Vec<TestEvidence>,
    /// What is wrong with the spectrum, its detector or its band.
    pub health: Vec<HealthEvidence>,
    /// How well the granule's components rebuild it, band by band.
    pub reconstruction: Vec<Reconstruction>,
}

/// Something that is wrong with the instrument here.
#[derive(Debug, Clone, Serialize)]
pub struct HealthEvidence {
    /// What was looked for.
    pub check: &'static str,
    /// The flag that it suggests.
    pub flag: Option<&'static str>,
    /// The band that it is limited to; `None` for the whole spectrum.
    pub band: Option<String>,
    /// What was found.
    pub value: f64,
    /// The limit that it passes.
    pub limit: f64,
    /// Unit of both.
    pub unit: &'static str,
    /// Where the limit comes from.
    pub source: &'static str,
    /// All of it in one line.
    pub words: String,
}

/// How well a band's spectrum is rebuilt from principal components (T20).
#[derive(Debug, Clone, Serialize)]
pub struct Reconstruction {
    /// The band.
    pub band: String,
    /// Root of the mean square of what is not explained, noise units; `None` where too much is
    /// missing.
    pub score: Option<f64>,
    /// The score from which on a spectrum is unusual.
    pub limit: f64,
    /// Whether it is.
    pub unusual: bool,
    /// How many components there are.
    pub components: usize,
    /// Where they come from: `own` or a file.
    pub basis: String,
    /// How many spectra they were found in.
    pub training_spectra: usize,
    /// Mean score of those, noise units.
    pub training_mean: f64,
    /// Standard deviation of their scores, noise units.
    pub training_deviation: f64,
    /// How many of these deviations the score lies above the mean; `None` without a score.
    pub deviations: Option<f64>,
    /// Where it is unusual, the channels that make it so: wavenumber (cm-1) and what is not explained
    /// in noise units.
    pub channels: Vec<(f64, f64)>,
}

/// What is concluded about a flag.
#[derive(Debug, Clone, Serialize)]
pub struct FlagEvidence {
    /// The flag.
    pub flag: String,
    /// Whether the tests set it.
    pub set: bool,
    /// Probability that it holds; `None` where no test speaks.
    pub probability: Option<f64>,
    /// Share of the tests' weight that could speak.
    pub coverage: f64,
    /// 0 plain, 1 a coin toss or not tested.
    pub doubt: f64,
    /// Log-odds before any test has spoken, in proportion to the coverage.
    pub start: f64,
    /// What each family says.
    pub families: Vec<FamilyVoice>,
}

/// What a family says about a flag.
#[derive(Debug, Clone, Serialize)]
pub struct FamilyVoice {
    /// The family.
    pub family: String,
    /// Its weight.
    pub weight: f64,
    /// Log-odds, positive for the flag; `None` where it can't speak.
    pub log_odds: Option<f64>,
}

/// What a test says.
#[derive(Debug, Clone, Serialize)]
pub struct TestEvidence {
    /// Its name.
    pub name: String,
    /// Its family.
    pub family: String,
    /// Its flag.
    pub flag: String,
    /// What is looked at.
    pub expression: String,
    /// `above` or `below`.
    pub sense: &'static str,
    /// The value, if there is one, also where a guard keeps the test away.
    pub value: Option<f64>,
    /// The threshold, if there is one.
    pub threshold: Option<f64>,
    /// Distance from the threshold in units of the softness, positive for the flag; `None` where
    /// the test does not speak.
    pub margin: Option<f64>,
    /// Whether it speaks with half its voice.
    pub halved: bool,
    /// What it says.
    #[serde(serialize_with = "name")]
    pub verdict: Verdict,
    /// Why it does not speak, or why another way than the first was taken; may be empty.
    pub reason: String,
    /// Where it is published.
    pub source: String,
    /// What a user should know.
    pub note: String,
}

fn name<S: Serializer>(verdict: &Verdict, serializer: S) -> Result<S::Ok, S::Error> {
    serializer.serialize_str(verdict.name())
}

fn present(value: f64) -> Option<f64> {
    value.is_finite().then_some(value)
}

impl Screened {
    /// The evidence about a footprint; `None` where there is no such footprint.
    pub fn evidence(&self, footprint: usize) -> Option<Evidence> {
        let surface = *self.surfaces.get(footprint)?;
        let councils = Councils::of(&self.rulebook);
        let tests = self.rulebook.tests.iter().zip(&self.tests);
        let flags = (0..self.flags.len()).map(|flag| self.flag(&councils, flag, footprint));
        Some(Evidence {
            footprint,
            surface: surface.map(|surface| self.rulebook.surfaces[surface].name.clone()),
            assessed: self.assessed[footprint],
            doubt: self.doubt[footprint],
            flags: flags.collect(),
            tests: tests.map(|(test, result)| evidence(test, result, footprint)).collect(),
            health: self.examined.iter().flat_map(|one| health(one, footprint)).collect(),
            reconstruction: self.examined.iter().flat_map(|one| rebuilt(one, footprint)).collect(),
        })
    }

    fn flag(&self, councils: &Councils<'_>, flag: usize, footprint: usize) -> FlagEvidence {
        let flag = &self.flags[flag];
        let conclusion = flag.conclusions[footprint];
        let surface = self.surfaces[footprint];
        let seats = surface.map_or(&[][..], |at| councils.seats(&flag.flag, at));
        let voice = |seat: &Seat<'_>| FamilyVoice {
            family: seat.family.to_owned(),
            weight: seat.weight,
            log_odds: councils.voice(&seat.tests, footprint, &self.tests),
        };
        FlagEvidence {
            flag: flag.flag.clone(),
            set: flag.is_set(footprint),
            probability: present(conclusion.probability),
            coverage: conclusion.coverage,
            doubt: conclusion.doubt,
            start: surface.map_or(0.0, |at| {
                conclusion.coverage * self.rulebook.surfaces[at].start_of(&flag.flag)
            }),
            families: seats.iter().map(voice).collect(),
        }
    }
}

fn health(examined: &Examined, footprint: usize) -> Vec<HealthEvidence> {
    let findings = examined.of_footprint(footprint);
    let evidence = findings.map(|finding| HealthEvidence {
        check: finding.check.name(),
        flag: finding.check.flag(),
        band: finding.band.map(|band| examined.band_name(band).to_owned()),
        value: finding.value,
        limit: finding.limit,
        unit: finding.unit,
        source: finding.source,
        words: finding.words(),
    });
    evidence.collect()
}

fn rebuilt(examined: &Examined, footprint: usize) -> Vec<Reconstruction> {
    let bands = examined.bands.iter().filter_map(|band| {
        let unusual = examined.unusual_of(footprint).find(|one| one.band == band.band);
        let basis = band.basis.as_ref()?;
        let (scores, score) = (basis.scores, band.scores[footprint]);
        Some(Reconstruction {
            band: examined.band_name(band.band).to_owned(),
            score: present(score),
            limit: band.limit,
            unusual: unusual.is_some(),
            components: basis.components(),
            basis: band.origin.name().to_owned(),
            training_spectra: scores.spectra,
            training_mean: scores.mean,
            training_deviation: scores.deviation,
            deviations: present((score - scores.mean) / scores.deviation),
            channels: unusual.map(|one| one.channels.clone()).unwrap_or_default(),
        })
    });
    bands.collect()
}

fn evidence(test: &Test, result: &TestResult, footprint: usize) -> TestEvidence {
    let way = &test.ways[result.way.unwrap_or(0)];
    let verdict = result.verdicts[footprint];
    TestEvidence {
        name: test.name.clone(),
        family: test.family.clone(),
        flag: test.flag.clone(),
        expression: way.expression.text().to_owned(),
        sense: way.sense.word(),
        value: present(result.values[footprint]),
        threshold: present(result.thresholds[footprint]),
        margin: present(result.margins[footprint]),
        halved: result.halved[footprint] && verdict.is_result(),
        verdict,
        reason: reason(test, way, result, footprint),
        source: way.source.clone(),
        note: way.note.clone(),
    }
}

/// Why a test does not speak, in words.
fn reason(test: &Test, way: &Way, result: &TestResult, footprint: usize) -> String {
    let guard = test.when.as_ref().map_or("", |when| when.text());
    match result.verdicts[footprint] {
        Verdict::For | Verdict::Against if result.lacks.is_empty() => String::new(),
        Verdict::For | Verdict::Against => format!("in place of another: {}", result.lacks),
        Verdict::OtherSurface => "not used on this surface".to_owned(),
        Verdict::Guarded => format!("applies only where {guard}"),
        Verdict::GuardUnknown if result.guard_lacks.is_empty() => {
            format!("it can't be told whether {guard}: a value is missing")
        }
        Verdict::GuardUnknown => {
            format!("it can't be told whether {guard}: {}", result.guard_lacks)
        }
        Verdict::NotInFile => result.lacks.clone(),
        Verdict::NotPositive => {
            "a radiance is zero or less and has no brightness temperature".to_owned()
        }
        Verdict::Missing if result.values[footprint].is_nan() => {
            let notes = if result.notes.is_empty() { "" } else { "; " };
            format!("{} is missing here{notes}{}", way.expression.text(), result.notes.join("; "))
        }
        Verdict::Missing => format!("the threshold {} is missing here", threshold_words(way)),
    }
}

fn threshold_words(way: &Way) -> String {
    match &way.threshold {
        Threshold::Number(number) => number.to_string(),
        Threshold::Expression(expression) => expression.text().to_owned(),
        Threshold::Table(table) => {
            let over: Vec<&str> = table.over.iter().map(|over| over.text()).collect();
            format!("over {}", over.join(" and "))
        }
    }
}
