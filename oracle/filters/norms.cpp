// What a filter does to one sample, and how large its output can get.
#include <algorithm>
#include <array>
#include <cmath>
#include <cstdint>

#include "oracle/filters/filter.hpp"

namespace halflsb {

namespace {

// Outputs that a unit impulse reaches through the stages without feedback.
std::int64_t finite_length(const FilterChain& chain) {
    std::int64_t length = 1;
    for (const FilterStage& stage : chain) {
        if (const auto* average = std::get_if<MovingAverage>(&stage.design)) length += average->points - 1;
        if (const auto* fir = std::get_if<Fir>(&stage.design))
            length += static_cast<std::int64_t>(fir->taps.size()) - 1;
        if (const auto* cascade = std::get_if<BiquadCascade>(&stage.design)) {
            length += 2 * static_cast<std::int64_t>(cascade->sections.size());
        }
    }
    return length;
}

// Answers a unit impulse piece by piece.
class ImpulseAnswer {
public:
    explicit ImpulseAnswer(const FilterChain& chain) : filter_(make_filter(chain)) {}

    double absolute_sum(std::int64_t samples) {
        double sum = 0.0;
        while (samples > 0) {
            const auto count = static_cast<std::size_t>(std::min(samples, static_cast<std::int64_t>(piece_.size())));
            std::fill_n(piece_.begin(), count, 0.0);
            if (first_) piece_[0] = 1.0;
            first_ = false;
            const std::span<double> piece(piece_.data(), count);
            filter_->process(piece, piece);
            double part = 0.0;
            for (const double h : piece) part += std::fabs(h);
            sum += part;
            samples -= static_cast<std::int64_t>(count);
        }
        return sum;
    }

private:
    std::unique_ptr<Filter> filter_;
    std::array<double, 1024> piece_{};
    bool first_ = true;
};

}  // namespace

std::vector<double> impulse_response(const FilterChain& chain, std::size_t length) {
    std::vector<double> response(length, 0.0);
    if (length > 0) response[0] = 1.0;
    make_filter(chain)->process(response, response);
    return response;
}

std::optional<std::int64_t> flush_samples(const FilterChain& chain, double full_scale, double half_step) {
    // The whole sum first, then what is left of it after each sample.
    const double whole = l1_norm(chain, 1e-12);
    ImpulseAnswer answer(chain);
    constexpr std::int64_t most_samples = std::int64_t{1} << 24;
    double gone = 0.0;
    for (std::int64_t samples = 0; samples <= most_samples; ++samples) {
        if ((whole - gone) * full_scale < half_step) return samples;
        gone += answer.absolute_sum(1);
    }
    return std::nullopt;
}

double l1_norm(const FilterChain& chain, double tail) {
    // Beyond this many samples the rest is the sum of a geometric series, from the last stretch.
    constexpr std::int64_t most_samples = std::int64_t{1} << 24;
    ImpulseAnswer answer(chain);
    const std::int64_t finite = finite_length(chain);
    double sum = answer.absolute_sum(finite);
    const double radius = largest_pole_radius(chain);
    if (!(radius > 0.0)) return sum;

    // In a stretch of eight time constants the slowest mode falls to e^-8, and once polynomial factors
    // of repeated poles have lost their grip each stretch is a fixed fraction of the one before. While
    // faster modes still die the fraction looks better than it will be, hence never less than e^-8.
    const double time_constant = -1.0 / std::log(radius);
    const double wanted = std::ceil(8.0 * time_constant);
    const auto stretch = static_cast<std::int64_t>(std::clamp(wanted, 64.0, static_cast<double>(most_samples / 4)));
    const double decay = std::exp(-static_cast<double>(stretch) / time_constant);
    double before = answer.absolute_sum(stretch);
    sum += before;
    for (std::int64_t samples = finite + stretch;; samples += stretch) {
        const double now = answer.absolute_sum(stretch);
        sum += now;
        const double ratio = before > 0.0 ? std::max(now / before, decay) : decay;
        if (ratio < 0.5 && now * ratio / (1.0 - ratio) <= tail * sum) return sum;
        if (samples >= most_samples) return decay < 1.0 ? sum + now * decay / (1.0 - decay) : no_limit;
        before = now;
    }
}

}  // namespace halflsb
