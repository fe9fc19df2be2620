// Sections with feedback, how their coefficients are made, and their one-line changes.
#pragma once

#include "tests/mutants/cores.hpp"

namespace halflsb::mutants {

/// b0 b1 b2 a1 a2 as designed, y[n] = b0 x[n] + ... - a1 y[n-1] - a2 y[n-2].
using Section = std::array<double, 5>;

/// A second order, the angles those of a bilinear transform that keeps the cut-off (bilinear "cookbook", from memory);
/// high: the same for the other half of the axis.
inline Section second_order(double cutoff_over_rate, double q, bool is_high, Fault fault) {
    const double w = 2.0 * 3.14159265358979323846 * cutoff_over_rate * (fault == Fault::twice_the_cutoff ? 2.0 : 1.0);
    const double alpha = std::sin(w) / (2.0 * q), a0 = 1.0 + alpha, c = std::cos(w);
    const double b1 = is_high ? -(1.0 + c) : 1.0 - c, b0 = is_high ? (1.0 + c) / 2.0 : (1.0 - c) / 2.0;
    const double b_over = fault == Fault::b_times_a0 ? 1.0 : a0,
                 b0_over = fault == Fault::b0_over_a0 ? a0 * a0 : b_over;
    return {b0 / b0_over, b1 / b_over, b0 / b_over, -2.0 * c / a0, (1.0 - alpha) / a0};
}

struct SectionSetup {
    int word_bits = 16, coefficient_bits = 14, coarse_bits = 8;
    bool rounds = true, saves = false;
};

/// B1 to B7: direct form I.
class Biquad final : public Core {
public:
    Biquad(const Section& section, const SectionSetup& setup, Fault fault) : setup_(setup), fault_(fault) {
        bits_ = fault == Fault::q14 ? 14 : setup.coefficient_bits;
        double most = 1.0;
        if (fault == Fault::by_largest)
            for (const double c : section) most = std::max(most, std::fabs(c));
        for (std::size_t i = 0; i < 5; ++i) c_[i] = stored((i < 3 ? section[i] : -section[i]) / most);
        if (fault == Fault::a1_sign) c_[3] = -c_[3];
        if (fault == Fault::a2_sign) c_[4] = -c_[4];
        if (fault == Fault::tables_exchanged) std::rotate(c_.begin(), c_.begin() + 2, c_.end());
        if (fault == Fault::b1_one_more) ++c_[1];
    }
    void power_up() override { x1_ = x2_ = y1_ = y2_ = fault_ == Fault::garbage_at_power_up ? 0x5A5A : 0; }
    void clear() override {
        x1_ = x2_ = y1_ = y2_ = w1_ = w2_ = rem_ = 0;
        is_first_ = true;
    }
    void reset() override {
        if (fault_ == Fault::no_reset) return;
        if (fault_ != Fault::half_reset) return clear();
        x1_ = x2_ = 0;
    }
    void exchange_state() override { std::swap(y1_, y2_); }
    void step(Whole x, std::vector<Whole>& out) override {
        if (is_first_ && fault_ == Fault::first_sample) x1_ = x2_ = y1_ = y2_ = x;
        is_first_ = false;
        out.push_back(fault_ == Fault::direct_2 || fault_ == Fault::direct_2_wraps ? form_2(x) : form_1(x));
    }

private:
    Whole stored(double c) const {
        const double one = std::ldexp(1.0, bits_), scaled = c * (fault_ == Fault::scale_less ? one - 0.5 : one);
        if (fault_ == Fault::cut) return static_cast<Whole>(scaled);
        if (fault_ == Fault::coarse)
            return std::lround(std::ldexp(c, setup_.coarse_bits)) << (bits_ - setup_.coarse_bits);
        return std::llround(scaled);
    }
    Whole product(Whole c, Whole v) const {
        if (fault_ == Fault::products_floored) return (c * v) >> bits_;
        if (fault_ == Fault::products_rounded) return (c * v + (Whole{1} << (bits_ - 1))) >> bits_;
        return c * v;
    }
    Whole added(Whole acc, Whole term) const {
        if (fault_ == Fault::products_upper) return wrapped(((acc << 32) + term + 0x80000000) >> 32, 32);
        // Partial sums of 32-bit words may wrap in 64 bits; the last one does not.
        const auto sum = static_cast<Whole>(static_cast<std::uint64_t>(acc) + static_cast<std::uint64_t>(term));
        return fault_ == Fault::sum_32 ? wrapped(sum, 32) : sum;
    }
    Whole form_1(Whole x) {
        Whole acc = 0;
        if (setup_.saves && fault_ != Fault::no_saving) acc += rem_;
        if (fault_ == Fault::saving) acc += rem_;
        acc = added(acc, product(c_[0], x));
        acc = added(acc, product(c_[1], x1_));
        acc = added(acc, product(c_[2], x2_));
        acc = added(acc, product(c_[3], y1_));
        acc = added(acc, product(c_[4], y2_));
        const int shift = fault_ == Fault::shift_less ? bits_ - 1 : fault_ == Fault::shift_more ? bits_ + 1 : bits_;
        Whole v = 0;
        if (fault_ == Fault::products_floored || fault_ == Fault::products_rounded)
            v = acc;
        else if (fault_ == Fault::products_upper)
            v = acc * (Whole{1} << (32 - bits_));
        else
            v = setup_.rounds ? shortened(acc, shift, fault_) : acc >> shift;
        rem_ = acc - v * (Whole{1} << bits_);
        const Whole y = into_word(v, setup_.word_bits, fault_);
        if (fault_ == Fault::x_order) {
            x1_ = x;
            x2_ = x1_;
        } else {
            x2_ = x1_;
            x1_ = x;
        }
        const Whole fed = fault_ == Fault::feedback_unheld ? v : y;
        if (fault_ == Fault::y_order) {
            y1_ = fed;
            y2_ = y1_;
        } else {
            y2_ = y1_;
            y1_ = fed;
        }
        return y;
    }
    Whole form_2(Whole x) {
        const Fault how = fault_ == Fault::direct_2_wraps ? Fault::output_wraps : Fault::none;
        const Whole one = Whole{1} << bits_;
        const Whole w = into_word(shortened(x * one + c_[3] * w1_ + c_[4] * w2_, bits_, how), 16, how);
        const Whole y = into_word(shortened(c_[0] * w + c_[1] * w1_ + c_[2] * w2_, bits_, how), 16, how);
        w2_ = w1_;
        w1_ = w;
        return y;
    }

    SectionSetup setup_;
    Fault fault_;
    int bits_ = 14;
    std::array<Whole, 5> c_{};
    Whole x1_ = 0, x2_ = 0, y1_ = 0, y2_ = 0, w1_ = 0, w2_ = 0, rem_ = 0;
    bool is_first_ = true;
};

/// Two sections, the first in words of 32 bits.
class Pair final : public Core {
public:
    Pair(const Section& first, const Section& second, Fault fault)
        : fault_(fault), first_(first, {32, 14, 8, true, false}, own(fault)), second_(second, {}, own(fault)) {}
    void clear() override {
        first_.clear();
        second_.clear();
    }
    void reset() override {
        first_.reset();
        second_.reset();
    }
    void step(Whole x, std::vector<Whole>& out) override {
        between_.clear();
        first_.step(x, between_);
        const Whole y = between_.front();
        second_.step(fault_ == Fault::held_between ? into_word(y, 16, Fault::none) : y, out);
    }

private:
    static Fault own(Fault fault) { return fault == Fault::held_between ? Fault::none : fault; }
    Fault fault_;
    Biquad first_, second_;
    std::vector<Whole> between_;
};

}  // namespace halflsb::mutants
