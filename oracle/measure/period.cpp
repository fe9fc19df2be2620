#include "oracle/measure/period.hpp"

#include <algorithm>

namespace halflsb {

std::optional<std::int64_t> smallest_period(std::span<const Code> codes) {
    if (codes.empty()) return std::nullopt;
    // border[n]: the longest proper prefix of the first n + 1 that is also their end.
    std::vector<std::size_t> border(codes.size(), 0);
    for (std::size_t n = 1; n < codes.size(); ++n) {
        std::size_t length = border[n - 1];
        while (length > 0 && codes[n] != codes[length]) length = border[length - 1];
        border[n] = codes[n] == codes[length] ? length + 1 : 0;
    }
    const std::size_t period = codes.size() - border.back();
    if (2 * period > codes.size()) return std::nullopt;
    return static_cast<std::int64_t>(period);
}

void PeriodWatch::add(std::span<const Code> codes) {
    for (const Code code : codes) {
        if (recent_.size() < most_samples) {
            recent_.push_back(code);
        } else {
            recent_[static_cast<std::size_t>(samples_) % most_samples] = code;
        }
        ++samples_;
    }
}

std::vector<Code> PeriodWatch::last_stretch() const {
    const auto count =
        static_cast<std::size_t>(std::min<std::int64_t>((samples_ + 1) / 2, static_cast<std::int64_t>(most_samples)));
    std::vector<Code> stretch = recent_;
    if (recent_.size() == most_samples) {
        const auto oldest = static_cast<std::ptrdiff_t>(static_cast<std::size_t>(samples_) % most_samples);
        std::rotate(stretch.begin(), stretch.begin() + oldest, stretch.end());
    }
    stretch.erase(stretch.begin(), stretch.end() - static_cast<std::ptrdiff_t>(count));
    return stretch;
}

}  // namespace halflsb
