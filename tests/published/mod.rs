//! Checks against published values, one file per source.

mod abramowitz_stegun_1964;
mod cartwright_longuet_higgins_1956;
mod davenport_1964;
mod der_kiureghian_1980;
mod en_1990_2002;
mod hand_calculations;
mod iso_2394_1998;
mod jcss_pmc_2001;
mod kernels_rasmussen_williams;
mod kernels_rice_low_pass;
mod kernels_vanmarcke_moments;
mod kernels_vanmarcke_random_fields;
mod larrabee_cornell_1981;
mod leadbetter_lindgren_rootzen_1983;
mod oeis;
mod rasmussen_williams_2006;
mod rice_1944;
mod slepian_1961;
mod units_nist_sp811;
mod vanmarcke_1972;
mod vanmarcke_1975;
mod vanmarcke_1983;
mod veneziano_grigoriu_cornell_1977;
mod wong_1966;
