// Firmware filters written out plainly, each with its ways of going wrong: boards for explain to look at. They share
// nothing with the twins.
#pragma once

#include <algorithm>
#include <array>
#include <cstdint>
#include <functional>
#include <string>
#include <vector>

#include "stimuli/sample_format.hpp"

namespace halflsb::test {

/// What a board did otherwise than its plan says.
enum class Wrong {
    nothing,
    floor,             // A01
    toward_zero,       // A02
    products_floored,  // A04
    wraps,             // A07
    feedback_unheld,   // A08
    narrow_sum,        // A10
    coefficients_cut,  // C03
    shift_less,        // C05
    constant_twice,    // A05
    a1_sign,           // C07
    taps_reversed,     // C10
    one_late,          // S01
    window_short,      // S02
    half_reset,        // S06: what the memory has first
    no_reset,          // S07
    not_called,        // S20
    bytes_swapped,     // N04
    negated,           // N06
    sample_lost,       // D03, each 100th
    state_lost,        // S11, each 64 samples
    looked_up,         // no change of arithmetic: an output bent by a table
};

inline std::int64_t floored(std::int64_t sum, int bits) { return sum >> bits; }

inline std::int64_t shortened(std::int64_t sum, int bits, Wrong wrong) {
    if (wrong == Wrong::floor) return floored(sum, bits);
    if (wrong == Wrong::toward_zero) return sum / (std::int64_t{1} << bits);
    const int halves = wrong == Wrong::constant_twice ? 2 : 1;
    return floored(sum + halves * (std::int64_t{1} << (bits - 1)), bits);
}

inline std::int64_t into_16_bits(std::int64_t number, Wrong wrong) {
    if (wrong == Wrong::wraps) return static_cast<std::int16_t>(static_cast<std::uint16_t>(number));
    return std::clamp<std::int64_t>(number, -32768, 32767);
}

/// One sample in, one out.
class SmallBoard {
public:
    virtual ~SmallBoard() = default;
    virtual void reset() = 0;
    virtual void reset_half() = 0;
    virtual std::int64_t step(std::int64_t x) = 0;
};

class SmallAverage final : public SmallBoard {
public:
    explicit SmallAverage(Wrong wrong) : wrong_(wrong), ring_(wrong == Wrong::window_short ? 15 : 16) {}
    void reset() override {
        std::fill(ring_.begin(), ring_.end(), 0);
        sum_ = 0;
        at_ = 0;
    }
    void reset_half() override { std::fill_n(ring_.begin(), ring_.size() / 2, 0); }
    std::int64_t step(std::int64_t x) override {
        sum_ += x - ring_[at_];
        if (wrong_ == Wrong::narrow_sum) sum_ = static_cast<std::int16_t>(static_cast<std::uint16_t>(sum_));
        ring_[at_] = x;
        at_ = (at_ + 1) % ring_.size();
        return into_16_bits(shortened(sum_, 4, wrong_), wrong_);
    }

private:
    Wrong wrong_;
    std::vector<std::int64_t> ring_;
    std::size_t at_ = 0;
    std::int64_t sum_ = 0;
};

/// Direct form I, q15, coefficients in q14, feedback added.
class SmallBiquad final : public SmallBoard {
public:
    SmallBiquad(const std::array<double, 5>& b0_b1_b2_a1_a2, Wrong wrong) : wrong_(wrong) {
        for (std::size_t i = 0; i < 5; ++i) {
            const double scaled = 16384.0 * (i < 3 ? b0_b1_b2_a1_a2[i] : -b0_b1_b2_a1_a2[i]);
            c_[i] = wrong == Wrong::coefficients_cut ? static_cast<std::int64_t>(scaled)
                                                     : static_cast<std::int64_t>(scaled + (scaled < 0 ? -0.5 : 0.5));
        }
        if (wrong == Wrong::a1_sign) c_[3] = -c_[3];
    }
    void reset() override { x1_ = x2_ = y1_ = y2_ = 0; }
    void reset_half() override { x1_ = x2_ = 0; }
    std::int64_t step(std::int64_t x) override {
        const int bits = wrong_ == Wrong::shift_less ? 13 : 14;
        const std::array<std::int64_t, 5> words = {x, x1_, x2_, y1_, y2_};
        std::int64_t sum = 0;
        for (std::size_t i = 0; i < 5; ++i)
            sum += wrong_ == Wrong::products_floored ? floored(c_[i] * words[i], bits) : c_[i] * words[i];
        const std::int64_t number = wrong_ == Wrong::products_floored ? sum : shortened(sum, bits, wrong_);
        const std::int64_t y = into_16_bits(number, wrong_);
        x2_ = x1_;
        x1_ = x;
        y2_ = y1_;
        y1_ = wrong_ == Wrong::feedback_unheld ? number : y;
        return y;
    }

private:
    Wrong wrong_;
    std::array<std::int64_t, 5> c_{};
    std::int64_t x1_ = 0, x2_ = 0, y1_ = 0, y2_ = 0;
};

class SmallFir final : public SmallBoard {
public:
    SmallFir(const std::vector<double>& taps, Wrong wrong) : wrong_(wrong), past_(taps.size()) {
        for (const double tap : taps) {
            const double scaled = 32768.0 * tap;
            taps_.push_back(wrong == Wrong::coefficients_cut
                                ? static_cast<std::int64_t>(scaled)
                                : static_cast<std::int64_t>(scaled + (scaled < 0 ? -0.5 : 0.5)));
        }
        if (wrong == Wrong::taps_reversed) std::reverse(taps_.begin(), taps_.end());
    }
    void reset() override { std::fill(past_.begin(), past_.end(), 0); }
    void reset_half() override { std::fill_n(past_.begin(), past_.size() / 2, 0); }
    std::int64_t step(std::int64_t x) override {
        past_.pop_back();
        past_.insert(past_.begin(), x);
        std::int64_t sum = 0;
        for (std::size_t k = 0; k < taps_.size(); ++k)
            sum += wrong_ == Wrong::products_floored ? floored(taps_[k] * past_[k], 15) : taps_[k] * past_[k];
        return into_16_bits(wrong_ == Wrong::products_floored ? sum : shortened(sum, 15, wrong_), wrong_);
    }

private:
    Wrong wrong_;
    std::vector<std::int64_t> taps_, past_;
};

/// What the board returns for a case, with what goes wrong around the filter.
inline std::vector<Code> returned_by(SmallBoard& board, const std::vector<Code>& sent, Wrong wrong) {
    if (wrong == Wrong::half_reset) {
        board.reset_half();
    } else if (wrong != Wrong::no_reset) {
        board.reset();
    }
    std::vector<Code> response;
    std::int64_t last = 0;
    for (std::size_t n = 0; n < sent.size(); ++n) {
        std::int64_t x = sent[n];
        if (wrong == Wrong::negated) x = std::min<std::int64_t>(-x, 32767);
        if (wrong == Wrong::bytes_swapped) {
            const auto bits = static_cast<std::uint16_t>(x);
            x = static_cast<std::int16_t>(static_cast<std::uint16_t>((bits << 8) | (bits >> 8)));
        }
        if (wrong == Wrong::state_lost && n > 0 && n % 64 == 0) board.reset();
        if (wrong == Wrong::sample_lost && n % 100 == 99) {
            response.push_back(static_cast<Code>(last));
            continue;
        }
        const std::int64_t y = board.step(x);
        response.push_back(static_cast<Code>(wrong == Wrong::one_late ? last : y));
        if (wrong == Wrong::not_called) response.back() = sent[n];
        if (wrong == Wrong::looked_up) response.back() = static_cast<Code>(y - y * y * y / (std::int64_t{1} << 34));
        last = y;
    }
    return response;
}

}  // namespace halflsb::test
