//! ISO 2394:1998, General principles on reliability for structures, Table E.2: life-time target indices. From memory;
//! the probabilities are the tail of the normal distribution at the indices, to three digits.

use crate::support::{close, results};

#[test]
fn table_e2() {
    for (index, probability) in [(3.1, 9.68e-4), (3.8, 7.23e-5), (4.3, 8.54e-6)] {
        let results = results(&format!(
            "process resistance : kN = gaussian(
                 mean: {} kN, standard_deviation: 10 kN, correlation: squared_exponential(length: 1 day)
             )
             limit state fracture {{ failure when resistance < 0 reference period 1 s }}",
            10.0 * index
        ));
        let found = results.limit_state("fracture").number("initial_failure_probability");
        close(found, probability, 1e-3, &format!("index {index}"));
    }
}
