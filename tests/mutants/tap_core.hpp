// Taps over a ring of past samples, with their one-line changes.
#pragma once

#include "tests/mutants/cores.hpp"

namespace halflsb::mutants {

/// F1 to F5: taps in 2^-15, a ring of past samples.
class Taps final : public Core {
public:
    Taps(const std::vector<double>& taps, Fault fault) : fault_(fault), ring_(taps.size(), 0) {
        for (const double tap : taps) h_.push_back(stored(tap));
        if (fault == Fault::reversed) std::reverse(h_.begin(), h_.end());
        if (fault == Fault::zero_first) {
            h_.insert(h_.begin(), 0);
            ring_.push_back(0);
        }
    }
    void power_up() override {
        std::fill(ring_.begin(), ring_.end(), fault_ == Fault::garbage_at_power_up ? 0x5A5A : 0);
    }
    void clear() override {
        std::fill(ring_.begin(), ring_.end(), 0);
        pos_ = 0;
        is_first_ = true;
    }
    void reset() override {
        if (fault_ == Fault::no_reset) return;
        if (fault_ != Fault::half_reset) return clear();
        std::fill_n(ring_.begin(), ring_.size() / 2, 0);
        pos_ = 0;
    }
    void step(Whole x, std::vector<Whole>& out) override {
        if (is_first_ && fault_ == Fault::first_sample) std::fill(ring_.begin(), ring_.end(), x);
        is_first_ = false;
        ring_[pos_] = x;
        std::size_t k = pos_;
        const std::size_t last = ring_.size() - (fault_ == Fault::ring_read_short ? 2 : 1);
        Whole acc = 0;
        for (const Whole h : h_) {
            acc += product(h * ring_[k]);
            if (fault_ == Fault::sum_32) acc = wrapped(acc, 32);
            k = k == 0 ? last : k - 1;
        }
        const std::size_t restart = fault_ == Fault::ring_from_1 ? 1 : 0;
        pos_ = pos_ + 1 == ring_.size() ? restart : pos_ + 1;
        const int shift = fault_ == Fault::shift_less ? 14 : fault_ == Fault::shift_more ? 16 : 15;
        out.push_back(into_word(is_per_product() ? acc : shortened(acc, shift, fault_), 16, fault_));
    }

private:
    Whole stored(double tap) const {
        const double scaled = tap * (fault_ == Fault::scale_less ? 32767.0 : 32768.0);
        if (fault_ == Fault::cut) return static_cast<Whole>(scaled);
        if (fault_ == Fault::taps_floored) return static_cast<Whole>(std::floor(scaled));
        if (fault_ == Fault::coarse) return std::lround(tap * 256.0) * 128;
        return std::lround(scaled);
    }
    bool is_per_product() const {
        return fault_ == Fault::products_floored || fault_ == Fault::products_rounded || fault_ == Fault::products_16;
    }
    Whole product(Whole whole) const {
        if (fault_ == Fault::products_floored) return whole >> 15;
        if (fault_ == Fault::products_rounded) return (whole + 16384) >> 15;
        if (fault_ == Fault::products_16) return wrapped(whole >> 15, 16);
        return whole;
    }

    Fault fault_;
    std::vector<Whole> h_, ring_;
    std::size_t pos_ = 0;
    bool is_first_ = true;
};

}  // namespace halflsb::mutants
