#include "rigs/virtual-board/passage_faults.hpp"

#include <array>
#include <functional>
#include <limits>
#include <utility>

namespace halflsb::board {

namespace {

constexpr std::uint32_t event_period_samples = 1000;
constexpr std::uint32_t half_buffer_samples = 32;
constexpr std::uint32_t repeated_half_buffer = 10;

/// Passes everything on; each fault overrides what it spoils.
class Around : public CodeFilter {
public:
    explicit Around(std::unique_ptr<CodeFilter> inner) : inner_(std::move(inner)) {}
    void reset() override { inner_->reset(); }
    void reset_half() override { inner_->reset_half(); }
    std::int32_t step(std::int32_t x) override { return inner_->step(x); }
    void begin_block() override { inner_->begin_block(); }

protected:
    CodeFilter& inner() { return *inner_; }

private:
    std::unique_ptr<CodeFilter> inner_;
};

class OneSampleLate : public Around {
public:
    using Around::Around;
    void reset() override {
        Around::reset();
        previous_ = 0;
    }
    std::int32_t step(std::int32_t x) override { return std::exchange(previous_, Around::step(x)); }

private:
    std::int32_t previous_ = 0;
};

class HalfReset : public Around {
public:
    using Around::Around;
    void reset() override { Around::reset_half(); }
};

class NeverReset : public Around {
public:
    using Around::Around;
    void reset() override {}
    void reset_half() override {}
};

class LostAtBlockBoundary : public Around {
public:
    using Around::Around;
    void begin_block() override { Around::reset(); }
};

class Bypass : public Around {
public:
    using Around::Around;
    std::int32_t step(std::int32_t x) override { return x; }
};

class AtInput : public Around {
public:
    AtInput(std::unique_ptr<CodeFilter> inner, std::function<std::int32_t(std::int32_t)> change)
        : Around(std::move(inner)), change_(std::move(change)) {}
    std::int32_t step(std::int32_t x) override { return Around::step(change_(x)); }

private:
    std::function<std::int32_t(std::int32_t)> change_;
};

std::int32_t swapped_16(std::int32_t x) {
    return static_cast<std::int16_t>(__builtin_bswap16(static_cast<std::uint16_t>(x & 0xFFFF)));
}
std::int32_t swapped_32(std::int32_t x) {
    return static_cast<std::int32_t>(__builtin_bswap32(static_cast<std::uint32_t>(x)));
}
std::int32_t inverted_16(std::int32_t x) { return x == -32768 ? 32767 : -x; }
std::int32_t inverted_32(std::int32_t x) {
    return x == std::numeric_limits<std::int32_t>::min() ? std::numeric_limits<std::int32_t>::max() : -x;
}
std::int32_t inverted_float(std::int32_t bits) {
    return static_cast<std::int32_t>(static_cast<std::uint32_t>(bits) ^ 0x80000000u);
}

class HalfBufferRepeated : public Around {
public:
    using Around::Around;
    void reset() override {
        Around::reset();
        count_ = 0;
    }
    std::int32_t step(std::int32_t x) override {
        const std::uint32_t place = count_ % half_buffer_samples;
        const bool repeats = (count_ / half_buffer_samples) % repeated_half_buffer == repeated_half_buffer - 1;
        ++count_;
        if (!repeats) buffer_[place] = x;
        return Around::step(buffer_[place]);
    }

private:
    std::array<std::int32_t, half_buffer_samples> buffer_{};
    std::uint32_t count_ = 0;
};

class EveryThousandth : public Around {
public:
    EveryThousandth(std::unique_ptr<CodeFilter> inner, bool drops) : Around(std::move(inner)), drops_(drops) {}
    void reset() override {
        Around::reset();
        count_ = 0;
        held_ = 0;
    }
    std::int32_t step(std::int32_t x) override {
        if (++count_ == event_period_samples) {
            count_ = 0;
            if (drops_) return held_;
            Around::step(x);
        }
        return held_ = Around::step(x);
    }

private:
    bool drops_;
    std::uint32_t count_ = 0;
    std::int32_t held_ = 0;
};

}  // namespace

std::unique_ptr<CodeFilter> with_fault(PassageFault fault, halflsb_format format, std::unique_ptr<CodeFilter> filter) {
    const bool narrow = format == HALFLSB_Q15 || format == HALFLSB_I16;
    const auto inverted = format == HALFLSB_F32 ? inverted_float : narrow ? inverted_16 : inverted_32;
    switch (fault) {
        case PassageFault::one_sample_late:
            return std::make_unique<OneSampleLate>(std::move(filter));
        case PassageFault::reset_clears_half:
            return std::make_unique<HalfReset>(std::move(filter));
        case PassageFault::never_reset:
            return std::make_unique<NeverReset>(std::move(filter));
        case PassageFault::lost_at_block_boundary:
            return std::make_unique<LostAtBlockBoundary>(std::move(filter));
        case PassageFault::bypass:
            return std::make_unique<Bypass>(std::move(filter));
        case PassageFault::bytes_swapped:
            return std::make_unique<AtInput>(std::move(filter), narrow ? swapped_16 : swapped_32);
        case PassageFault::polarity_inverted:
            return std::make_unique<AtInput>(std::move(filter), inverted);
        case PassageFault::half_buffer_repeated:
            return std::make_unique<HalfBufferRepeated>(std::move(filter));
        case PassageFault::sample_dropped:
            return std::make_unique<EveryThousandth>(std::move(filter), true);
        case PassageFault::sample_duplicated:
            return std::make_unique<EveryThousandth>(std::move(filter), false);
    }
    return filter;
}

}  // namespace halflsb::board
