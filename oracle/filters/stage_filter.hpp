// What chain.cpp asks of the filter of one stage beside the contract in filter.hpp: to start at another state than
// zeros. Private to this room.
#pragma once

#include <memory>

#include "oracle/filters/filter.hpp"

namespace halflsb {

class StageFilter : public Filter {
public:
    /// After a reset: the state as if `value` had come in for ever.
    virtual void preload(double value) = 0;
};

/// Initial::first_sample: preloads with the first sample after a reset.
class FirstSampleStart final : public Filter {
public:
    explicit FirstSampleStart(std::unique_ptr<StageFilter> filter) : filter_(std::move(filter)) {}
    void reset() override {
        filter_->reset();
        has_started_ = false;
    }
    std::size_t outputs_for(std::size_t inputs) const override { return filter_->outputs_for(inputs); }
    void process(std::span<const double> in, std::span<double> out) override {
        if (!has_started_ && !in.empty()) {
            filter_->preload(in.front());
            has_started_ = true;
        }
        filter_->process(in, out);
    }

private:
    std::unique_ptr<StageFilter> filter_;
    bool has_started_ = false;
};

}  // namespace halflsb
