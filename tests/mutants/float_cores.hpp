// The same in float32: codes are the bits of a float, or whole numbers that are turned into one.
#pragma once

#include "tests/mutants/section_cores.hpp"

namespace halflsb::mutants {

inline float float_of(Whole code) { return std::bit_cast<float>(static_cast<std::int32_t>(code)); }
inline Whole code_of_float(float value) { return std::bit_cast<std::int32_t>(value); }

/// The mean of 16, summed anew for each output, the newest first.
class FloatAverage final : public Core {
public:
    explicit FloatAverage(Fault fault) : fault_(fault) {}
    void clear() override {
        ring_.fill(0.0F);
        sum_ = 0.0F;
        pos_ = count_ = 0;
    }
    void reset() override {
        if (fault_ != Fault::no_reset) clear();
    }
    void step(Whole x, std::vector<Whole>& out) override {
        const float f = float_of(x);
        if (fault_ == Fault::running_sum) {
            sum_ -= ring_[pos_];
            sum_ += f;
        }
        if (fault_ == Fault::never_cleared) sum_ += f;
        ring_[pos_] = f;
        if (fault_ == Fault::running_sum || fault_ == Fault::never_cleared) {
            pos_ = (pos_ + 1) % 16;
            ++count_;
            const float by = fault_ == Fault::never_cleared ? static_cast<float>(count_) : 16.0F;
            return out.push_back(code_of_float(sum_ / by));
        }
        float sum = f;
        for (std::size_t i = 1; i < 16; ++i) sum += ring_[(pos_ + 16 - i) % 16];
        pos_ = (pos_ + 1) % 16;
        out.push_back(code_of_float(sum / 16.0F));
    }

private:
    Fault fault_;
    std::array<float, 16> ring_{};
    float sum_ = 0.0F;
    std::size_t pos_ = 0, count_ = 0;
};

/// s = s + c (x - s), c = 0.1
class FloatOnePole final : public Core {
public:
    FloatOnePole(Fault fault, bool has_whole_words) : fault_(fault), has_whole_words_(has_whole_words) {}
    void clear() override { s_ = 0.0F; }
    void reset() override {
        if (fault_ != Fault::no_reset) clear();
    }
    void step(Whole x, std::vector<Whole>& out) override {
        const float f = has_whole_words_ ? static_cast<float>(x) : float_of(x);
        if (fault_ == Fault::double_literal) {
            s_ = static_cast<float>(s_ + 0.1 * (f - s_));
        } else {
            const float step = 0.1F * (f - s_);
            s_ = s_ + step;
        }
        if (!has_whole_words_) return out.push_back(code_of_float(s_));
        if (fault_ == Fault::cast) return out.push_back(static_cast<std::int16_t>(static_cast<std::int32_t>(s_)));
        out.push_back(into_word(std::lrint(s_), 16, fault_));
    }

private:
    Fault fault_;
    bool has_whole_words_;
    float s_ = 0.0F;
};

/// Direct form I, each product and each sum a float32.
class FloatBiquad final : public Core {
public:
    FloatBiquad(const Section& section, Fault fault) : fault_(fault) {
        for (std::size_t i = 0; i < 5; ++i) c_[i] = static_cast<float>(i < 3 ? section[i] : -section[i]);
    }
    void clear() override { x1_ = x2_ = y1_ = y2_ = 0.0F; }
    void reset() override {
        if (fault_ != Fault::no_reset) clear();
    }
    void step(Whole code, std::vector<Whole>& out) override {
        const float x = float_of(code);
        const std::array<float, 5> v = {x, x1_, x2_, y1_, y2_};
        float y = c_[0] * v[0];
        for (std::size_t i = 1; i < 5; ++i) {
            const float product = c_[i] * v[i];
            y = y + product;
        }
        x2_ = x1_;
        x1_ = x;
        y2_ = y1_;
        y1_ = y;
        out.push_back(code_of_float(y));
    }

private:
    Fault fault_;
    std::array<float, 5> c_{};
    float x1_ = 0.0F, x2_ = 0.0F, y1_ = 0.0F, y2_ = 0.0F;
};

}  // namespace halflsb::mutants
