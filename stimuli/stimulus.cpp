#include "stimuli/stimulus.hpp"

#include <algorithm>
#include <array>

namespace halflsb {

void fill_codes(const Stimulus& stimulus, const SampleFormat& format, Rounding rounding, std::int64_t first_index,
                std::span<Code> codes) {
    constexpr std::size_t chunk_samples = 256;
    std::array<double, chunk_samples> ratios{};
    const double full_scale = full_scale_value(format);
    for (std::size_t done = 0; done < codes.size();) {
        const std::size_t count = std::min(chunk_samples, codes.size() - done);
        stimulus.fill(first_index + static_cast<std::int64_t>(done), std::span(ratios).first(count));
        for (std::size_t i = 0; i < count; ++i) codes[done + i] = code_of(format, ratios[i] * full_scale, rounding);
        done += count;
    }
}

}  // namespace halflsb
