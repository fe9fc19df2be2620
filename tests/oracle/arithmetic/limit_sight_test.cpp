#include "oracle/arithmetic/limit_sight.hpp"

#include "tests/oracle/support.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

DescribedChain q15_biquad(const BiquadSection& section, int bits, const StageArithmetic& said) {
    FilterStage stage{BiquadCascade{{section}}, bits, said, "biquad-cascade", {}};
    return *describe({stage}, *sample_format("q15"), *sample_format("q15"), 1.0).described;
}

StageArithmetic rounding(Rounding how) {
    StageArithmetic said;
    said.rounding = how;
    return said;
}

std::vector<Code> noise_codes(std::size_t length, std::int64_t top, std::uint64_t seed) {
    Random random(seed);
    std::vector<Code> codes(length);
    for (Code& code : codes) code = static_cast<Code>(random.whole(-top, top));
    return codes;
}

BoundUse noise_use(std::int64_t top) {
    BoundUse use;
    use.noise_like = true;
    use.input_rms = static_cast<double>(top) * 0x1p-15 / std::sqrt(3.0);
    return use;
}

}  // namespace

// faults.md A01: a floor shifts the mean by half the gain from the rounding to the output, whatever Q and corner; the
// largest error alone misses it where the poles are sharp.
TEST_CASE("limit sight: truncation instead of rounding is seen at nine corners and Qs", "[arithmetic]") {
    const std::int64_t top = 4000;
    const auto codes = noise_codes(16384, top, 601);
    INFO("seed 601");
    for (const double q : {0.7, 3.0, 10.0}) {
        for (const double corner : {0.1, 0.02, 0.004}) {
            for (const int bits : {14, 30}) {
                INFO("Q " << q << ", corner " << corner << ", " << bits << " bits");
                const BiquadSection section = cookbook(Shape::low_pass, corner, q);
                const DescribedChain promised = q15_biquad(section, bits, rounding(Rounding::half_up));
                const DescribedChain truncating = q15_biquad(section, bits, rounding(Rounding::floor));
                const LimitSight sight = sight_of(promised, truncating, codes, noise_use(top));
                INFO("largest " << sight.largest * 32768 << " of " << sight.limits.largest() * 32768 << ", rms "
                                << sight.rms * 32768 << " of " << sight.limits.rms * 32768 << ", bias "
                                << sight.bias * 32768 << " of " << sight.limits.bias() * 32768 << ", judged "
                                << sight.judged);
                CHECK(sight.is_seen);
                CHECK_FALSE(sees(promised, promised, codes, noise_use(top)));
            }
        }
    }
}
