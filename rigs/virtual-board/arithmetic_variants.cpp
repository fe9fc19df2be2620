#include "rigs/virtual-board/arithmetic_variants.hpp"

#include <algorithm>
#include <vector>

namespace halflsb::board {

namespace {

// Five products of a q31 biquad need 65 bits; a host has them.
__extension__ typedef __int128 Wide;

Wide floor_divide(Wide value, Wide divisor) { return value / divisor - (value % divisor < 0 ? 1 : 0); }

/// value / divisor as a whole number.
Wide divide(Wide value, Wide divisor, DroppedBits rounding) {
    switch (rounding) {
        case DroppedBits::half_up:
            return floor_divide(2 * value + divisor, 2 * divisor);
        case DroppedBits::half_away:
            return (2 * value + (value < 0 ? -divisor : divisor)) / (2 * divisor);
        case DroppedBits::floor:
            return floor_divide(value, divisor);
        case DroppedBits::toward_zero:
            return value / divisor;
        case DroppedBits::constant_twice:
            return floor_divide(value + divisor, divisor);
    }
    return 0;
}

Wide wrapped(Wide value, int word_bits) {
    const Wide range = Wide(1) << word_bits;
    const Wide low = value - floor_divide(value, range) * range;
    return low >= range / 2 ? low - range : low;
}

std::int32_t into_word(Wide value, int word_bits, bool wraps) {
    if (wraps) return static_cast<std::int32_t>(wrapped(value, word_bits));
    const Wide top = (Wide(1) << (word_bits - 1)) - 1;
    return static_cast<std::int32_t>(std::clamp(value, -top - 1, top));
}

class AverageVariant : public CodeFilter {
public:
    AverageVariant(int points, int word_bits, const Deviation& deviation)
        : divisor_(Wide(points) << deviation.shift_more),
          word_bits_(word_bits),
          deviation_(deviation),
          ring_(static_cast<std::size_t>(std::max(1, points - deviation.points_less))) {}

    void reset() override {
        std::fill(ring_.begin(), ring_.end(), 0);
        position_ = 0;
        sum_ = 0;
    }
    void reset_half() override {
        std::fill(ring_.begin(), ring_.begin() + static_cast<std::ptrdiff_t>(ring_.size() / 2), 0);
        position_ = 0;
        sum_ = 0;
    }
    std::int32_t step(std::int32_t x) override {
        sum_ += x - Wide(ring_[position_]);
        if (deviation_.narrow_sum) sum_ = wrapped(sum_, word_bits_);
        ring_[position_] = x;
        position_ = position_ + 1 == ring_.size() ? 0 : position_ + 1;
        return into_word(divide(sum_, divisor_, deviation_.rounding), word_bits_, deviation_.output_wraps);
    }

private:
    Wide divisor_;
    int word_bits_;
    Deviation deviation_;
    std::vector<std::int32_t> ring_;
    std::size_t position_ = 0;
    Wide sum_ = 0;
};

class OffsetAverageVariant : public CodeFilter {
public:
    OffsetAverageVariant(int points, int word_bits, const Deviation& deviation)
        : inner_(points, word_bits, deviation), middle_(std::int32_t{1} << (word_bits - 1)), deviation_(deviation) {}

    void reset() override { inner_.reset(); }
    void reset_half() override { inner_.reset_half(); }
    std::int32_t step(std::int32_t x) override {
        const std::int32_t code = x & (2 * middle_ - 1);
        const std::int32_t y = inner_.step(deviation_.offset_kept ? code : code - middle_);
        return deviation_.offset_missing ? y : y + middle_;
    }

private:
    AverageVariant inner_;
    std::int32_t middle_;
    Deviation deviation_;
};

/// The sum of products that a FIR and a biquad share.
class ProductSum {
public:
    ProductSum(int fraction_bits, const Deviation& deviation)
        : unit_(Wide(1) << (fraction_bits + deviation.shift_more)), deviation_(deviation) {}
    void add(std::int32_t coefficient, Wide sample) {
        const Wide product = coefficient * sample;
        sum_ += deviation_.products_truncated ? floor_divide(product, unit_) : product;
    }
    Wide rounded() const { return deviation_.products_truncated ? sum_ : divide(sum_, unit_, deviation_.rounding); }

private:
    Wide unit_;
    const Deviation& deviation_;
    Wide sum_ = 0;
};

class FirVariant : public CodeFilter {
public:
    FirVariant(const std::int16_t* taps, int count, const Deviation& deviation)
        : taps_(taps), deviation_(deviation), past_(static_cast<std::size_t>(count)) {}

    void reset() override { std::fill(past_.begin(), past_.end(), std::int16_t{0}); }
    void reset_half() override {
        std::fill(past_.begin(), past_.begin() + static_cast<std::ptrdiff_t>(past_.size() / 2), std::int16_t{0});
    }
    std::int32_t step(std::int32_t x) override {
        std::rotate(past_.begin(), past_.end() - 1, past_.end());
        past_[0] = static_cast<std::int16_t>(x);
        ProductSum sum(15, deviation_);
        for (std::size_t k = 0; k < past_.size(); ++k) sum.add(taps_[k], past_[k]);
        return into_word(sum.rounded(), 16, deviation_.output_wraps);
    }

private:
    const std::int16_t* taps_;
    Deviation deviation_;
    std::vector<std::int16_t> past_;  // newest first
};

template <typename Coefficients>
class BiquadVariant : public CodeFilter {
public:
    BiquadVariant(const Coefficients* sections, int count, int word_bits, const Deviation& deviation)
        : sections_(sections), word_bits_(word_bits), deviation_(deviation), states_(static_cast<std::size_t>(count)) {}

    void reset() override { std::fill(states_.begin(), states_.end(), State{}); }
    void reset_half() override {
        for (State& s : states_) s.x1 = s.x2 = 0;  // the inputs stand first
    }
    std::int32_t step(std::int32_t x) override {
        for (std::size_t i = 0; i < states_.size(); ++i) x = section(sections_[i], states_[i], x);
        return x;
    }

private:
    struct State {
        Wide x1 = 0, x2 = 0, y1 = 0, y2 = 0;
    };

    std::int32_t section(const Coefficients& c, State& s, std::int32_t x) const {
        ProductSum sum(word_bits_ - 2, deviation_);
        sum.add(c.b0, x);
        sum.add(c.b1, s.x1);
        sum.add(c.b2, s.x2);
        sum.add(c.a1, s.y1);
        sum.add(c.a2, s.y2);
        const Wide rounded = sum.rounded();
        const std::int32_t y = into_word(rounded, word_bits_, deviation_.output_wraps);
        s.x2 = s.x1;
        s.x1 = x;
        s.y2 = s.y1;
        s.y1 = deviation_.feedback_unsaturated ? wrapped(rounded, 64) : y;
        return y;
    }

    const Coefficients* sections_;
    int word_bits_;
    Deviation deviation_;
    std::vector<State> states_;
};

}  // namespace

bool Deviation::any() const {
    return rounding != DroppedBits::half_up || output_wraps || feedback_unsaturated || products_truncated ||
           narrow_sum || shift_more != 0 || points_less != 0 || offset_kept || offset_missing;
}

std::unique_ptr<CodeFilter> average_variant(int points, int word_bits, const Deviation& deviation) {
    return std::make_unique<AverageVariant>(points, word_bits, deviation);
}

std::unique_ptr<CodeFilter> offset_average_variant(int points, int word_bits, const Deviation& deviation) {
    return std::make_unique<OffsetAverageVariant>(points, word_bits, deviation);
}

std::unique_ptr<CodeFilter> fir_variant(const std::int16_t* taps, int count, const Deviation& deviation) {
    return std::make_unique<FirVariant>(taps, count, deviation);
}

std::unique_ptr<CodeFilter> biquad_variant(const biquad_q15_coefficients* sections, int count,
                                           const Deviation& deviation) {
    return std::make_unique<BiquadVariant<biquad_q15_coefficients>>(sections, count, 16, deviation);
}

std::unique_ptr<CodeFilter> biquad_variant(const biquad_q31_coefficients* sections, int count,
                                           const Deviation& deviation) {
    return std::make_unique<BiquadVariant<biquad_q31_coefficients>>(sections, count, 32, deviation);
}

}  // namespace halflsb::board
