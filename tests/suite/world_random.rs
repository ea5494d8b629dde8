//! Random numbers against the published generators: xoshiro256++ (Blackman & Vigna 2021) and
//! `SplitMix64` (Steele, Lea & Flood 2014), the latter as the mixer of seeds.

use rand::{Rng, RngExt, SeedableRng};
use rand_xoshiro::{SplitMix64, Xoshiro256PlusPlus};
use somadawn::evolution::seeding::{generator, replicate_seed};

fn outputs<R: Rng>(rng: &mut R, count: usize) -> Vec<u64> {
    (0..count).map(|_| rng.next_u64()).collect()
}

/// The generator with that state.
fn with_state(state: [u64; 4]) -> Xoshiro256PlusPlus {
    let mut bytes = [0; 32];
    for (word, slot) in state.into_iter().zip(bytes.as_chunks_mut::<8>().0) {
        *slot = word.to_le_bytes();
    }
    Xoshiro256PlusPlus::from_seed(bytes)
}

fn split_mix(state: u64) -> SplitMix64 {
    SplitMix64::from_seed(state.to_le_bytes())
}

/// Published reference outputs of state {1, 2, 3, 4}.
#[test]
fn the_generator_is_xoshiro256_plus_plus() {
    let known = [
        41_943_041,
        58_720_359,
        3_588_806_011_781_223,
        3_591_011_842_654_386,
        9_228_616_714_210_784_205,
        9_973_669_472_204_895_162,
        14_011_001_112_246_962_877,
        12_406_186_145_184_390_807,
        15_849_039_046_786_891_736,
        10_450_023_813_501_588_000,
    ];
    assert_eq!(outputs(&mut with_state([1, 2, 3, 4]), 10), known);
}

/// The published jump polynomial from state {1, 2, 3, 4} (resulting state by one route).
#[test]
fn a_jump_leads_where_it_should() {
    let mut jumped = with_state([1, 2, 3, 4]);
    jumped.jump();
    let state = [
        10_122_426_448_480_695_249,
        8_079_205_330_032_121_950,
        7_289_065_458_748_526_725,
        9_477_464_255_293_849_680,
    ];
    assert_eq!(jumped, with_state(state));
    assert_eq!(outputs(&mut jumped, 2), [17_043_750_140_134_683_703, 2_364_973_248_208_838_314]);
}

/// Unit doubles are the upper 53 bits: outputs 3 to 6 of state {1, 2, 3, 4}.
#[test]
#[expect(clippy::float_cmp, reason = "exact by construction")]
fn unit_doubles_are_the_upper_53_bits() {
    let mut rng = with_state([1, 2, 3, 4]);
    outputs(&mut rng, 2);
    let known = [
        0.000_194_549_563_730_106_46,
        0.000_194_669_142_061_343_34,
        0.500_284_314_529_168_4,
        0.540_673_705_470_845,
    ];
    for value in known {
        assert_eq!(rng.random::<f64>(), value);
    }
}

/// Published reference outputs (seed 42 by one route).
#[test]
fn the_mixer_is_split_mix_64() {
    let known: [(u64, &[u64]); 3] = [
        (
            1_234_567,
            &[
                6_457_827_717_110_365_317,
                3_203_168_211_198_807_973,
                9_817_491_932_198_370_423,
                4_593_380_528_125_082_431,
                16_408_922_859_458_223_821,
            ],
        ),
        (
            0,
            &[
                0xe220_a839_7b1d_cdaf,
                7_960_286_522_194_355_700,
                487_617_019_471_545_679,
                17_909_611_376_780_542_444,
            ],
        ),
        (
            42,
            &[
                13_679_457_532_755_275_413,
                2_949_826_092_126_892_291,
                5_139_283_748_462_763_858,
                6_349_198_060_258_255_764,
            ],
        ),
    ];
    for (seed, values) in known {
        assert_eq!(outputs(&mut split_mix(seed), values.len()), values);
    }
}

/// A replicate's generator is xoshiro256++ with four outputs of `SplitMix64` for its state.
#[test]
fn a_seed_is_spread_over_the_state_by_split_mix_64() {
    let known: [(u64, [u64; 4]); 2] = [
        (
            0,
            [
                5_987_356_902_031_041_503,
                7_051_070_477_665_621_255,
                6_633_766_593_972_829_180,
                211_316_841_551_650_330,
            ],
        ),
        (
            42,
            [
                15_021_278_609_987_233_951,
                5_881_210_131_331_364_753,
                18_149_643_915_985_481_100,
                12_933_668_939_759_105_464,
            ],
        ),
    ];
    for (seed, values) in known {
        assert_eq!(outputs(&mut generator(seed), 4), values);
    }
}

/// `mix(mix(mix(seed) ^ point) ^ replicate)`, mix being the first output of `SplitMix64`.
#[test]
fn replicates_are_seeded_by_the_documented_mix() {
    let mix = |state: u64| split_mix(state).next_u64();
    for (seed, point, replicate) in [(0, 0, 0), (1, 0, 7), (59, 3, 2), (u64::MAX, 1 << 40, 11)] {
        assert_eq!(replicate_seed(seed, point, replicate), mix(mix(mix(seed) ^ point) ^ replicate));
    }
    // mix(0) is known: SplitMix64's first output from state 0.
    assert_eq!(replicate_seed(0, 0xe220_a839_7b1d_cdaf, 0), mix(0xe220_a839_7b1d_cdaf));
}
