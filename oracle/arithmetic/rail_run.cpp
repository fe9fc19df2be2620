// What reaches the rails of an element, sample by sample.
#include <algorithm>
#include <cmath>

#include "oracle/arithmetic/rail_element.hpp"

namespace halflsb {

std::size_t RailElement::order() const { return std::max(element_.forward.size() - 1, element_.feedback.size()); }

// s_k[n] = sum over j >= k of b_j x[n - (j - k)] - a_j y[n - (j - k)]
double RailElement::level_of(Place place) const {
    if (place.source == Source::input) return input_.level;
    if (place.source == Source::state) return state_level_;
    if (place.source != Source::transposed) return sum_level_;
    double level = 0.0;
    for (std::size_t j = place.index; j <= order(); ++j) {
        level += std::fabs(forward(j)) * input_.level + std::fabs(feedback(j)) * sum_level_;
    }
    return level;
}

double RailElement::error_of(Place place) const {
    if (place.source == Source::input) return input_.error;
    if (place.source == Source::state) return state_error_;
    if (place.source != Source::transposed) return sum_error_;
    // Each state on the way has shortened its sum, and perhaps three products.
    double error = 0.0;
    for (std::size_t j = place.index; j <= order(); ++j) {
        error += std::fabs(forward(j)) * input_.error + std::fabs(feedback(j)) * sum_error_ +
                 4.0 * step_of(element_.stage->state);
    }
    return error;
}

bool RailElement::is_watched() const {
    return std::any_of(nodes_.begin(), nodes_.end(), [](const RailNode& node) { return node.is_watched; });
}

void RailElement::reset() {
    filter_.reset();
    if (state_filter_) state_filter_->reset();
    for (auto* series : {&in_, &sums_, &states_}) series->assign(reach_back_, 0.0);
}

double RailElement::value_at(Place place, std::size_t n) const {
    if (place.source == Source::input) return in_[n];
    if (place.source == Source::state || place.source == Source::held) return states_[n];
    if (place.source != Source::transposed) return sums_[n];
    double value = 0.0;
    for (std::size_t j = place.index; j <= order(); ++j) {
        const std::size_t at = n - (j - place.index);
        value += forward(j) * in_[at] - feedback(j) * sums_[at];
    }
    return value;
}

bool RailElement::leaves_rail(const Rail& rail, std::size_t n) const {
    const auto leaves = [&](double value) { return !(value >= rail.lowest && value <= rail.highest); };
    switch (rail.place.source) {
        case Source::window:
            return leaves(sums_[n] * points_over_gain_);
        case Source::window_rest:
            return leaves(sums_[n] * points_over_gain_ - in_[n]);
        case Source::product:
            return leaves(forward(0) * (in_[n] - states_[n - 1]));
        case Source::partial: {
            double sum = 0.0;
            for (const PartialTerm& term : rail.terms) {
                sum += term.coefficient * value_at(term.of, n - term.delay);
                if (leaves(sum)) return true;
            }
            return false;
        }
        default:
            return leaves(value_at(rail.place, n));
    }
}

void RailElement::process(std::span<const double> in, std::span<double> out, std::span<std::uint8_t> reached) {
    const std::size_t past = reach_back_, count = out.size();
    for (auto* series : {&in_, &sums_, &states_}) {
        // Keep the last `past` samples of what was there.
        series->erase(series->begin(), series->end() - static_cast<std::ptrdiff_t>(past));
        series->resize(past + (series == &in_ ? in.size() : count));
    }
    std::copy(in.begin(), in.end(), in_.begin() + static_cast<std::ptrdiff_t>(past));
    filter_.process(in, std::span(sums_).subspan(past), std::span(states_).subspan(past), out);
    if (state_filter_) state_filter_->process(in, std::span(states_).subspan(past));
    std::fill(reached.begin(), reached.end(), std::uint8_t{0});
    for (std::size_t r = 0; r < rails_.size(); ++r) {
        if (!nodes_[r].is_watched) continue;
        for (std::size_t n = 0; n < count; ++n) {
            if (reached[n] != 0 && nodes_[reached[n] - 1].effect >= nodes_[r].effect) continue;
            if (leaves_rail(rails_[r], past + n)) reached[n] = static_cast<std::uint8_t>(r + 1);
        }
    }
}

}  // namespace halflsb
