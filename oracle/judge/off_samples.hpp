// Tells samples that wrapped or clipped from those that err otherwise, in constant memory (headroom_judge.hpp).
#pragma once

#include <cstdint>

#include "oracle/measure/error.hpp"
#include "stimuli/sample_format.hpp"

namespace halflsb {

class OffSamples {
public:
    /// `ends` of the error, values of the output, which has an LSB.
    OffSamples(const SampleFormat& output, const ErrorEnds& ends);
    /// Every response, off or not, in order: the response's extremes are looked for in all of them.
    void add(double value);
    /// After add() of the same sample. `design` is not cut off at the ends of the word.
    void add_off(double value, double reference, double design);

    std::int64_t wrapped() const { return wrapped_; }
    std::int64_t clipped() const;
    std::int64_t others() const { return off_ - wrapped() - clipped(); }

private:
    bool is_wrapped(double value, double reference, double design) const;

    /// One end of the response, its values turned so that further out is larger.
    struct End {
        double extreme = 0.0;
        bool is_found = false;
        std::int64_t standing = 0;    ///< samples at the extreme
        std::int64_t short_ones = 0;  ///< off samples at the extreme that fall short
        void add(double value);
        bool is_cut_off(double rail) const;
    };

    double lsb_, lowest_, highest_, full_scale_, slack_, step_;
    std::int64_t off_ = 0, wrapped_ = 0;
    End high_, low_;
};

}  // namespace halflsb
