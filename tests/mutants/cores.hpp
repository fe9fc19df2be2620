// Firmware filters, each written out plainly with its one-line changes. They share no arithmetic with the twins.
#pragma once

#include <algorithm>
#include <array>
#include <bit>
#include <cmath>
#include <cstdint>
#include <memory>
#include <vector>

#include "tests/mutants/faults.hpp"

namespace halflsb::mutants {

using Whole = std::int64_t;

/// `bits` are dropped: half an LSB added and floored, where nothing is wrong.
inline Whole shortened(Whole sum, int bits, Fault fault) {
    const Whole half = Whole{1} << (bits - 1);
    switch (fault) {
        case Fault::floor:
            return sum >> bits;
        case Fault::toward_zero:
            return sum / (Whole{1} << bits);
        case Fault::half_away:
            return (sum + half - (sum < 0 ? 1 : 0)) >> bits;
        case Fault::half_even:
            return (sum + half - 1 + ((sum >> bits) & 1)) >> bits;
        case Fault::constant_twice:
            return (sum + 2 * half) >> bits;
        default:
            return (sum + half) >> bits;
    }
}

inline Whole wrapped(Whole number, int bits) { return (number << (64 - bits)) >> (64 - bits); }

inline Whole into_word(Whole number, int bits, Fault fault) {
    if (fault == Fault::output_wraps) return wrapped(number, bits);
    return std::clamp(number, -(Whole{1} << (bits - 1)), (Whole{1} << (bits - 1)) - 1);
}

/// One channel's filter: a sample in, none, one or more out.
class Core {
public:
    virtual ~Core() = default;
    virtual void power_up() {}
    virtual void reset() = 0;
    virtual void step(Whole x, std::vector<Whole>& out) = 0;
    virtual void exchange_state() {}
    virtual void clear() { reset(); }
};

/// M1 to M4: a running sum of 16.
class Average final : public Core {
public:
    Average(Fault fault, bool rounds) : fault_(fault), rounds_(rounds) {
        if (fault == Fault::window_15_by_15 || fault == Fault::window_15_by_16) points_ = 15;
        if (fault == Fault::window_17_by_17 || fault == Fault::window_17_by_16) points_ = 17;
        divisor_ = fault == Fault::window_15_by_16 || fault == Fault::window_17_by_16 ? 16 : points_;
        clear();
    }
    void power_up() override {
        clear();
        if (fault_ != Fault::garbage_at_power_up) return;
        ring_.fill(0x5A5A);
        sum_ = 0x5A5A5A5A;
    }
    void clear() override {
        ring_.fill(0);
        sum_ = pos_ = count_ = 0;
    }
    void reset() override {
        const Whole sum = sum_;
        if (fault_ == Fault::no_reset) return;
        if (fault_ == Fault::half_reset) {
            // Of 16 words of two bytes and a sum of four the first 18 bytes.
            std::fill_n(ring_.begin(), 9, 0);
            pos_ = 0;
            return;
        }
        clear();
        if (fault_ == Fault::sum_kept) sum_ = sum;
    }
    void step(Whole x, std::vector<Whole>& out) override {
        if (count_ == 0 && fault_ == Fault::first_sample) {
            ring_.fill(x);
            sum_ = points_ * x;
        }
        sum_ -= ring_[static_cast<std::size_t>(pos_)];
        ring_[static_cast<std::size_t>(pos_)] = x;
        sum_ += x;
        if (fault_ == Fault::sum_16) sum_ = wrapped(sum_, 16);
        if (fault_ == Fault::sum_u16) sum_ &= 0xFFFF;
        const Whole restart = fault_ == Fault::ring_from_1 ? 1 : 0;
        pos_ = pos_ + 1 == points_ ? restart : pos_ + 1;
        ++count_;
        const Whole by = fault_ == Fault::growing ? std::min<Whole>(count_, 16) : divisor_;
        out.push_back(into_word(divided(by), 16, fault_));
    }

private:
    Whole divided(Whole by) const {
        if (by == 16 && fault_ != Fault::growing) {
            return rounds_ || fault_ == Fault::toward_zero ? shortened(sum_, 4, fault_) : sum_ >> 4;
        }
        // floor of (sum + by / 2) / by, doubled so that it stays whole.
        const Whole above = rounds_ ? 2 * sum_ + by : 2 * sum_, below = 2 * by;
        return above / below - (above % below < 0 ? 1 : 0);
    }

    Fault fault_;
    bool rounds_;
    Whole points_ = 16, divisor_ = 16;
    std::array<Whole, 17> ring_{};
    Whole sum_ = 0, pos_ = 0, count_ = 0;
};

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

/// E1: s has 4 more bits than x; what is dropped is floored.
class OnePole final : public Core {
public:
    explicit OnePole(Fault fault) : fault_(fault) {}
    void power_up() override { s_ = fault_ == Fault::garbage_at_power_up ? 0x5A5A5A5A : 0; }
    void clear() override {
        s_ = 0;
        is_first_ = true;
    }
    void reset() override {
        if (fault_ != Fault::no_reset) clear();
    }
    void step(Whole x, std::vector<Whole>& out) override {
        constexpr int k = 4;
        if (fault_ == Fault::narrow_state || fault_ == Fault::narrow_divided) {
            s_ += fault_ == Fault::narrow_state ? (x - s_) >> k : (x - s_) / (1 << k);
            return out.push_back(s_);
        }
        if (fault_ == Fault::unsigned_inside) {
            s_ = static_cast<std::int32_t>(static_cast<std::uint32_t>(s_) + (static_cast<std::uint32_t>(x - s_) >> k));
            return out.push_back(into_word(s_, 16, fault_));
        }
        if (is_first_ && fault_ == Fault::first_sample) s_ = x * (1 << k);
        is_first_ = false;
        s_ = wrapped(s_ + x - shifted(s_, k), fault_ == Fault::sum_16 ? 16 : 32);
        out.push_back(into_word(shifted(s_, k), 16, fault_));
    }

private:
    Whole shifted(Whole s, int k) const {
        if (fault_ == Fault::toward_zero) return s / (1 << k);
        if (fault_ == Fault::constant_twice) return (s + (1 << (k - 1))) >> k;  // half an LSB where none was meant
        return s >> k;
    }
    Fault fault_;
    Whole s_ = 0;
    bool is_first_ = true;
};

/// Three integrators and combs, 8 samples for one, 9 bits off.
class Cic final : public Core {
public:
    explicit Cic(Fault fault) : fault_(fault) {}
    void clear() override {
        integrators_.fill(0);
        combs_.fill(0);
        count_ = 0;
    }
    void reset() override {
        if (fault_ == Fault::no_reset) return;
        if (fault_ != Fault::half_reset) return clear();
        integrators_.fill(0);
        count_ = 0;
    }
    void step(Whole x, std::vector<Whole>& out) override {
        Whole v = x;
        for (Whole& each : integrators_) {
            each = wrapped(each + v, fault_ == Fault::sum_16 ? 24 : 32);
            v = each;
        }
        const Whole phase = fault_ == Fault::last_phase ? 0 : 7;
        if (count_++ % 8 != phase) return;
        for (Whole& each : combs_) {
            const Whole before = each;
            each = v;
            v = wrapped(v - before, 32);
        }
        const int shift = fault_ == Fault::shift_less ? 8 : fault_ == Fault::shift_more ? 10 : 9;
        out.push_back(into_word(rounded(v, shift), 16, fault_));
    }

private:
    Whole rounded(Whole v, int shift) const {
        if (fault_ == Fault::toward_zero) return v / (Whole{1} << shift);
        if (fault_ == Fault::constant_twice) return (v + (Whole{1} << (shift - 1))) >> shift;
        return v >> shift;
    }
    Fault fault_;
    std::array<Whole, 3> integrators_{}, combs_{};
    Whole count_ = 0;
};

}  // namespace halflsb::mutants
