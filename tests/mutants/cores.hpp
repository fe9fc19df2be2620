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
