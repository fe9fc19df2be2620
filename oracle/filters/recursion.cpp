#include "oracle/filters/recursion.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/filters/double_double.hpp"
#include "oracle/filters/memory.hpp"

namespace halflsb {

namespace {

constexpr std::size_t room_samples = 1024;

// A silent input lets the outputs decay into subnormal numbers, where a processor is a hundred times slower. Once all
// that are fed back lie below this, beyond notice in any format, they are dropped: one alone would set the others off
// again. Counted for each sample, so block bounds do not matter.
constexpr double vanished = 1e-200;

double sum_of_sizes_from(const std::vector<double>& numbers, std::size_t first) {
    double sum = 0.0;
    for (std::size_t k = first; k < numbers.size(); ++k) sum += std::fabs(numbers[k]);
    return sum;
}

DoubleDouble sum_of(const std::vector<double>& numbers) {
    DoubleDouble sum;
    for (const double number : numbers) sum = sum + DoubleDouble(number);
    return sum;
}

// Of the loop alone, all of the sum's roundings reaching the output: sum |g| (sum |b| + sum |a| sum |h|) a unit.
double loss_a_unit(const Recursion& design, double norm) {
    const double loop = memory_of(Recursion{{1.0}, design.a}).gain;
    return loop * (sum_of_sizes_from(design.b, 0) + sum_of_sizes_from(design.a, 1) * norm);
}

}  // namespace

RecursionFilter::Halves::Halves(double number) : value(number) {
    const double shifted = number * 134217729.0;  // 2^27 + 1
    high = shifted - (shifted - number);
    low = number - high;
}

RecursionFilter::RecursionFilter(const Recursion& design)
    : gain_at_dc_(to_double(sum_of(design.b) / sum_of(design.a))),
      past_(std::max(design.b.size(), design.a.size()) - 1) {
    for (const double b : design.b) b_.emplace_back(b);
    for (std::size_t k = 1; k < design.a.size(); ++k) minus_a_.emplace_back(-design.a[k]);
    line_in_.resize(past_ + room_samples);
    line_out_.resize(past_ + room_samples);
    reset();
}

void RecursionFilter::reset() { preload(0.0); }

void RecursionFilter::preload(double value) {
    const auto past = static_cast<std::ptrdiff_t>(past_);
    std::fill(line_in_.begin(), line_in_.begin() + past, Halves(value));
    std::fill(line_out_.begin(), line_out_.begin() + past, Output{Halves(value * gain_at_dc_), 0.0});
    place_ = past_;
    quiet_ = 0;
}

double RecursionFilter::step(const Halves* newest_in, Output* next_out) {
    double sum = 0.0, rest = 0.0;
    const auto add = [&](const Halves& a, const Halves& b) {
        const double product = a.value * b.value;
        const double error = a.low * b.low - (((product - a.high * b.high) - a.low * b.high) - a.high * b.low);
        const double before = sum;
        sum += product;
        rest += sum_error(before, product, sum) + error;
    };
    for (const Halves& b : b_) add(b, *newest_in--);
    const Output* past_out = next_out;
    for (const Halves& a : minus_a_) {
        --past_out;
        add(a, past_out->halves);
        rest += a.value * past_out->rest;
    }
    const double result = sum + rest;
    *next_out = Output{Halves(result), sum_error(sum, rest, result)};
    quiet_ = std::fabs(result) < vanished ? quiet_ + 1 : 0;
    if (quiet_ >= minus_a_.size())
        std::fill(next_out + 1 - static_cast<std::ptrdiff_t>(minus_a_.size()), next_out + 1, Output{});
    return result;
}

void RecursionFilter::process(std::span<const double> in, std::span<double> out) {
    for (std::size_t i = 0; i < in.size(); ++i) {
        if (place_ == line_in_.size()) {
            const auto past = static_cast<std::ptrdiff_t>(past_);
            std::copy(line_in_.end() - past, line_in_.end(), line_in_.begin());
            std::copy(line_out_.end() - past, line_out_.end(), line_out_.begin());
            place_ = past_;
        }
        line_in_[place_] = Halves(in[i]);
        out[i] = step(&line_in_[place_], &line_out_[place_]);
        ++place_;
    }
}

double recursion_loss(const Recursion& design) {
    const double terms = static_cast<double>(design.b.size() + design.a.size() - 1);
    return terms * 0x1p-53 * loss_a_unit(design, l1_norm({FilterStage{design, std::nullopt}}));
}

double carried_recursion_loss(const Recursion& design) {
    const double terms = static_cast<double>(design.b.size() + design.a.size() - 1);
    const double norm = l1_norm({FilterStage{design, std::nullopt}});
    return 0x1p-53 * norm + terms * 0x1p-102 * loss_a_unit(design, norm);
}

}  // namespace halflsb
