// Response codes against those of the twin: equal, or how many differ, from where on and by how much.
#pragma once

#include <cstdint>
#include <span>
#include <vector>

#include "oracle/judge/first_bad_watch.hpp"
#include "oracle/judge/verdict.hpp"

namespace halflsb {

class ExactCount {
public:
    explicit ExactCount(const SampleFormat& output);
    /// Spans of one length, from index `first_index` of the response on. Codes of f32 are compared as bits, so that
    /// neither a NaN nor a zero of the other sign goes unseen.
    void add(std::int64_t first_index, std::span<const Code> stimulus, std::span<const Code> twin,
             std::span<const Code> response);
    RuleVerdict verdict(const Rule& rule) const;
    /// Some sample was compared, and all are equal.
    bool is_exact() const { return samples_ > 0 && differing_ == 0; }

private:
    SampleFormat output_;
    FirstBadWatch watch_;
    std::int64_t samples_ = 0, differing_ = 0, first_ = -1;
    double largest_lsb_ = 0.0;
    std::vector<double> twin_values_;
};

}  // namespace halflsb
