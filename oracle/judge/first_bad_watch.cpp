#include "oracle/judge/first_bad_watch.hpp"

#include <algorithm>

namespace halflsb {

CodeScale::CodeScale(const SampleFormat& output)
    : step_(output.has_lsb() ? lsb_value(output) : 1.0), zero_(static_cast<double>(zero_code(output))) {}

void FirstBadWatch::add(std::int64_t first_index, std::span<const Code> stimulus, std::span<const double> reference,
                        std::span<const Code> response, std::int64_t first_beyond) {
    const auto count = static_cast<std::int64_t>(stimulus.size());
    if (count == 0) return;
    const auto take = [&](Neighbourhood& into, std::int64_t from, std::int64_t to) {
        for (std::int64_t index = std::max(from, first_index); index < std::min(to, first_index + count); ++index) {
            const auto at = static_cast<std::size_t>(index - first_index);
            if (into.first_index < 0) into.first_index = index;
            into.stimulus.push_back(stimulus[at]);
            into.response.push_back(response[at]);
            into.reference.push_back(scale_.of_value(reference[at]));
        }
    };
    if (!found_ && first_beyond >= 0) {
        found_ = recent_;
        found_->index = first_beyond;
        // The recent ones reach further back than needed when the bad sample is inside the block.
        const std::int64_t from = std::max<std::int64_t>(first_beyond - shown_neighbours, 0);
        const auto drop =
            std::clamp<std::int64_t>(from - found_->first_index, 0, static_cast<std::int64_t>(found_->stimulus.size()));
        found_->stimulus.erase(found_->stimulus.begin(), found_->stimulus.begin() + drop);
        found_->response.erase(found_->response.begin(), found_->response.begin() + drop);
        found_->reference.erase(found_->reference.begin(), found_->reference.begin() + drop);
        found_->first_index = found_->stimulus.empty() ? -1 : found_->first_index + drop;
        take(*found_, from, first_beyond + shown_neighbours + 1);
    } else if (found_) {
        take(*found_, found_->first_index + static_cast<std::int64_t>(found_->stimulus.size()),
             found_->index + shown_neighbours + 1);
    } else {
        // Across small blocks the last `shown_neighbours` samples may span several of them.
        Neighbourhood joined = recent_;
        take(joined, first_index + count - shown_neighbours, first_index + count);
        const auto surplus =
            std::max<std::int64_t>(static_cast<std::int64_t>(joined.stimulus.size()) - shown_neighbours, 0);
        joined.stimulus.erase(joined.stimulus.begin(), joined.stimulus.begin() + surplus);
        joined.response.erase(joined.response.begin(), joined.response.begin() + surplus);
        joined.reference.erase(joined.reference.begin(), joined.reference.begin() + surplus);
        joined.first_index = first_index + count - static_cast<std::int64_t>(joined.stimulus.size());
        recent_ = std::move(joined);
    }
}

}  // namespace halflsb
