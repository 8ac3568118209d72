//! D. Veneziano, M. Grigoriu and C. A. Cornell 1977, "Vector-process models for system reliability", Journal of the
//! Engineering Mechanics Division 103, 441-460. From memory.

use crate::support::{close, results};

/// Out of the square |x| < 3, |y| < 3, two independent unit processes of frequency 1 rad/s: 0.00705311 per second. Through
/// each pair of faces go the outcrossings of one process while the other is inside.
#[test]
fn out_of_a_square() {
    let results = results(
        "process x = gaussian(standard_deviation: 1, correlation: squared_exponential(length: 1 s))
         process y = gaussian(standard_deviation: 1, correlation: matern(smoothness: 2, length: sqrt(2) * 1 s))
         limit state x_faces { failure when abs(x) > 3 reference period 1 s }
         limit state y_faces { failure when y outside -3 to 3 reference period 1 s }",
    );
    let (x, y) = (results.limit_state("x_faces"), results.limit_state("y_faces"));
    let rate = x.number("upcrossing_rate") * (1.0 - y.number("initial_failure_probability"))
        + y.number("upcrossing_rate") * (1.0 - x.number("initial_failure_probability"));
    close(rate, 0.00705311, 1e-6, "rate");
}
