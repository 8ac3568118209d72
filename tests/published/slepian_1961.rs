//! D. Slepian 1961, "First passage time for a particular Gaussian process", Annals of Mathematical Statistics 32,
//! 610-612: the process with a triangular correlation. Its passage probabilities are known in closed form because its
//! paths are as rough as Brownian motion; crossing rates do not exist, and must be refused. From memory.

use crate::support::run;

#[test]
fn triangular_correlation_is_refused_with_the_source_at_fault() {
    let outcome = run(
        "process steady = gaussian(standard_deviation: 1, correlation: squared_exponential(length: 1 s))
         process slepian = gaussian(standard_deviation: 1, correlation: triangular(length: 1 s))
         margin m = 3 - slepian - steady
         limit state passage { failure when m < 0 reference period 1 s }",
    );
    assert_eq!(outcome.errors(), ["process/not-differentiable"]);
    assert!(
        outcome.findings[0].message.contains("slepian"),
        "{}",
        outcome.findings[0].message
    );
    assert!(outcome.results.is_none());
}
