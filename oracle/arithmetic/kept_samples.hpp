// Which samples a decimator computes, and what an interpolator puts between them.
#pragma once

#include "oracle/arithmetic/stage_twin.hpp"

namespace halflsb {

class KeptSamples {
public:
    explicit KeptSamples(Kept kept) : factor_(kept.each), first_(kept.first), until_next_(kept.first) {}

    void reset() { until_next_ = first_; }
    std::size_t count_of(std::size_t inputs) const {
        return inputs <= until_next_ ? 0 : (inputs - until_next_ - 1) / factor_ + 1;
    }
    /// Whether this sample is one of them; to be asked once a sample.
    bool keeps() {
        if (until_next_ > 0) {
            --until_next_;
            return false;
        }
        until_next_ = factor_ - 1;
        return true;
    }

    bool has_state() const { return factor_ > 1; }
    std::int64_t state() const { return static_cast<std::int64_t>(until_next_); }
    bool set_state(std::int64_t until_next) {
        if (until_next < 0 || until_next >= static_cast<std::int64_t>(factor_)) return false;
        until_next_ = static_cast<std::size_t>(until_next);
        return true;
    }

private:
    std::size_t factor_, first_, until_next_;
};

/// factor - 1 zeros behind each sample: 0 as a word and as bits of a float32.
class ZeroStuffing final : public StageTwin {
public:
    explicit ZeroStuffing(std::size_t factor) : factor_(factor) {}
    void reset() override {}
    std::size_t outputs_for(std::size_t inputs) const override { return inputs * factor_; }
    void process(std::span<const std::int64_t> in, std::span<std::int64_t> out) override {
        std::fill(out.begin(), out.end(), 0);
        for (std::size_t i = 0; i < in.size(); ++i) out[i * factor_] = in[i];
    }
    void append_state(std::vector<std::int64_t>&) const override {}
    bool take_state(std::span<const std::int64_t>&) override { return true; }
    void append_reaches(std::vector<NodeReach>&) const override {}

private:
    std::size_t factor_;
};

}  // namespace halflsb
