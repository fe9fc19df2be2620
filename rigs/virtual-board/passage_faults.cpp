#include "rigs/virtual-board/passage_faults.hpp"

#include <algorithm>
#include <array>
#include <chrono>
#include <functional>
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
    OneSampleLate(std::unique_ptr<CodeFilter> inner, std::int32_t zero)
        : Around(std::move(inner)), zero_(zero), previous_(zero) {}
    void reset() override {
        Around::reset();
        previous_ = zero_;
    }
    std::int32_t step(std::int32_t x) override { return std::exchange(previous_, Around::step(x)); }

private:
    std::int32_t zero_, previous_;
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
    std::int32_t held_ = 0;  // set by the samples before the first event
};

/// Something else gets the processor: the answer is right, and late.
class SlowSample : public Around {
public:
    using Around::Around;
    void reset() override {
        Around::reset();
        count_ = 0;
    }
    std::int32_t step(std::int32_t x) override {
        if (++count_ == event_period_samples) {
            count_ = 0;
            using Clock = std::chrono::steady_clock;
            constexpr auto taken = std::chrono::milliseconds(2);
            // Busy, as an interrupt is: a sleep would take as long as the host's scheduler likes.
            for (const auto begun = Clock::now(); Clock::now() - begun < taken;) continue;
        }
        return Around::step(x);
    }

private:
    std::uint32_t count_ = 0;
};

/// Changes an output that is a whole number, within the ends of its word.
class AtOutput : public Around {
public:
    AtOutput(std::unique_ptr<CodeFilter> inner, Format format)
        : Around(std::move(inner)),
          zero_(zero_code(format)),
          half_range_(std::int64_t{1} << (value_bits(format) - 1)),
          is_whole_(!is_float(format)) {}
    void reset() override {
        Around::reset();
        begin();
    }
    std::int32_t step(std::int32_t x) override {
        const std::int32_t y = Around::step(x);
        if (!is_whole_) return y;
        return static_cast<std::int32_t>(std::clamp(changed(y), zero_ - half_range_, zero_ + half_range_ - 1));
    }

protected:
    virtual std::int64_t changed(std::int64_t y) = 0;
    virtual void begin() = 0;
    std::int64_t zero() const { return zero_; }

private:
    std::int64_t zero_, half_range_;
    bool is_whole_;
};

class OutputHeld : public AtOutput {
public:
    OutputHeld(std::unique_ptr<CodeFilter> inner, Format format)
        : AtOutput(std::move(inner), format), before_(zero()), held_(zero()) {}

private:
    void begin() override { before_ = held_ = zero(); }
    std::int64_t changed(std::int64_t y) override {
        constexpr std::int64_t dead_codes = 4;
        const std::int64_t moved = y - std::exchange(before_, y);
        if (moved >= dead_codes || moved <= -dead_codes) held_ = y;
        return held_;
    }

    std::int64_t before_, held_;
};

class NoiseAdded : public AtOutput {
public:
    using AtOutput::AtOutput;

private:
    void begin() override { state_ = 1; }
    std::int64_t changed(std::int64_t y) override {
        // Constants of Numerical Recipes' quick generator (from memory); its upper bits alone are random.
        state_ = state_ * 1664525U + 1013904223U;
        return y + static_cast<std::int64_t>((state_ >> 16) % 17U) - 8;
    }

    std::uint32_t state_ = 1;
};

class OutputDrifts : public AtOutput {
public:
    using AtOutput::AtOutput;

private:
    void begin() override { count_ = 0; }
    std::int64_t changed(std::int64_t y) override { return y + count_++ / event_period_samples; }

    std::int64_t count_ = 0;
};

}  // namespace

std::unique_ptr<CodeFilter> with_fault(PassageFault fault, Format format, std::unique_ptr<CodeFilter> filter) {
    const auto change_by = [format](std::int32_t (*change)(Format, std::int32_t)) {
        return [format, change](std::int32_t x) { return change(format, x); };
    };
    switch (fault) {
        case PassageFault::one_sample_late:
            return std::make_unique<OneSampleLate>(std::move(filter), zero_code(format));
        case PassageFault::reset_clears_half:
            return std::make_unique<HalfReset>(std::move(filter));
        case PassageFault::never_reset:
            return std::make_unique<NeverReset>(std::move(filter));
        case PassageFault::lost_at_block_boundary:
            return std::make_unique<LostAtBlockBoundary>(std::move(filter));
        case PassageFault::bypass:
            return std::make_unique<Bypass>(std::move(filter));
        case PassageFault::bytes_swapped:
            return std::make_unique<AtInput>(std::move(filter), change_by(bytes_swapped));
        case PassageFault::polarity_inverted:
            return std::make_unique<AtInput>(std::move(filter), change_by(inverted));
        case PassageFault::half_buffer_repeated:
            return std::make_unique<HalfBufferRepeated>(std::move(filter));
        case PassageFault::sample_dropped:
            return std::make_unique<EveryThousandth>(std::move(filter), true);
        case PassageFault::sample_duplicated:
            return std::make_unique<EveryThousandth>(std::move(filter), false);
        case PassageFault::output_held:
            return std::make_unique<OutputHeld>(std::move(filter), format);
        case PassageFault::noise_added:
            return std::make_unique<NoiseAdded>(std::move(filter), format);
        case PassageFault::output_drifts:
            return std::make_unique<OutputDrifts>(std::move(filter), format);
        case PassageFault::slow_sample:
            return std::make_unique<SlowSample>(std::move(filter));
    }
    return filter;
}

}  // namespace halflsb::board
