#include "runner/world/stimulus_sha256.hpp"

#include <algorithm>
#include <vector>

#include "runner/world/sha256.hpp"

namespace halflsb {

namespace {

constexpr std::int64_t block_samples = 4096;

}  // namespace

std::string stimulus_sha256(const Plan& plan, const Case& the_case, std::int64_t samples) {
    const auto digest = make_code_digest();
    std::vector<Code> codes;
    for (std::int64_t first = 0; first < samples; first += block_samples) {
        codes.resize(static_cast<std::size_t>(std::min(block_samples, samples - first) * plan.signal.channels));
        fill_case_codes(plan, the_case, first, codes);
        digest->add(plan.signal.input, codes);
    }
    return digest->value();
}

}  // namespace halflsb
