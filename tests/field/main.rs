//! Measured water against this program. The measurements do not travel with the code: the environment
//! variable `GATEMIX_FIELD` names the folder that holds them, and without it these tests say so and stop.
//!
//! `release_pairs.csv`, `forebay_casts.csv`: Andrews and Deemer 2022, U.S. Geological Survey data release,
//! doi:10.5066/P9ZIKVYW (U.S. public domain). `area_capacity_2017.csv`: Bradley and Collins 2022, U.S. Bureau of
//! Reclamation, doi:10.5066/P9O3IPG3 (U.S. public domain). `sonde_casts.csv`: Jones and others 2023,
//! Environmental Data Initiative edi.1544.1 (CC BY 4.0).

mod binary;
mod folder;
mod learn;
mod pairs;
mod sonde;
