#include "oracle/arithmetic/element_filter.hpp"

#include <algorithm>
#include <cmath>

namespace halflsb {

ValueEnds::ValueEnds(const Word& word)
    : lowest_(lowest_value(word)),
      highest_(highest_value(word)),
      full_scale_(-lowest_),
      wraps_(word.overflow == Overflow::wrap) {}

double ValueEnds::operator()(double value) const {
    // NaN compares false with both ends and stays.
    if (!wraps_) return std::clamp(value, lowest_, highest_);
    if (value >= -full_scale_ && value < full_scale_) return value;
    const double wrapped = std::remainder(value, 2.0 * full_scale_);
    return wrapped == full_scale_ ? -full_scale_ : wrapped;
}

std::optional<ValueEnds> ends_of(const Word& word) {
    return word.bits == wide_bits ? std::nullopt : std::optional<ValueEnds>(word);
}

ElementFilter::ElementFilter(const ChainElement& element) : exact_(make_filter(element.exact)) {
    const DescribedStage& stage = *element.stage;
    if (element.is_last_of_stage && !stage.out.is_float) out_ends_ = ends_of(stage.out.word);
    if (!element.holds_one_state() || !element.is_first_order() || element.forward.size() > 3 ||
        stage.state.overflow != Overflow::saturate || stage.stage.initial != Initial::zeros) {
        return;
    }
    state_ends_ = ends_of(stage.state);
    feeds_back_clipped_ = state_ends_.has_value();
    if (const Comb* comb = element.comb()) {
        b0_ = comb->direct, b1_ = comb->forward, a_ = comb->feedback;
        delay_ = static_cast<std::size_t>(comb->delay_samples);
    } else {
        const auto at = [](const std::vector<double>& list, std::size_t k) { return k < list.size() ? list[k] : 0.0; };
        b0_ = at(element.forward, 0), b1_ = at(element.forward, 1), b2_ = at(element.forward, 2);
        a_ = at(element.feedback, 0);
    }
    reset();
}

void ElementFilter::reset() {
    exact_->reset();
    past_in_.assign(delay_, 0.0);
    past_state_.assign(delay_, 0.0);
    place_ = 0;
    older_in_ = 0.0;
}

std::size_t ElementFilter::outputs_for(std::size_t inputs) const { return exact_->outputs_for(inputs); }

void ElementFilter::process(std::span<const double> in, std::span<double> sums, std::span<double> held,
                            std::span<double> out) {
    if (feeds_back_clipped_) {
        run_clipped(in, sums, held);
    } else {
        exact_->process(in, sums);
        std::copy(sums.begin(), sums.end(), held.begin());
    }
    std::copy(held.begin(), held.end(), out.begin());
    if (out_ends_) {
        for (double& value : out) value = (*out_ends_)(value);
    }
}

// With a pole near z = 1 the state is moved by its change, 1 + a being exact.
void ElementFilter::run_clipped(std::span<const double> in, std::span<double> sums, std::span<double> held) {
    const bool by_change = a_ < -0.5;
    const double leak = 1.0 + a_;
    for (std::size_t n = 0; n < in.size(); ++n) {
        const double old_in = past_in_[place_], old = past_state_[place_];
        const double drive = b0_ * in[n] + b1_ * old_in + b2_ * older_in_;
        const double sum = by_change ? old + (drive - leak * old) : drive - a_ * old;
        older_in_ = old_in;
        past_in_[place_] = in[n];
        past_state_[place_] = (*state_ends_)(sum);
        sums[n] = sum;
        held[n] = past_state_[place_];
        place_ = place_ + 1 == delay_ ? 0 : place_ + 1;
    }
}

}  // namespace halflsb
