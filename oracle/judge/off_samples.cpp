#include "oracle/judge/off_samples.hpp"

#include <algorithm>
#include <cmath>

namespace halflsb {
namespace {

/// A word that wraps jumps by its whole range; behind a division or coarse coefficients that is less of the output.
/// Below a 64th of full scale and 64 times the error that is allowed anyway, too many errors would look like one.
constexpr double least_parts = 64.0;

}  // namespace

OffSamples::OffSamples(const SampleFormat& output, const ErrorEnds& ends)
    : lsb_(lsb_value(output)),
      lowest_(lowest_value(output)),
      highest_(highest_value(output)),
      full_scale_(full_scale_value(output)),
      slack_(ends.largest() + lsb_) {
    const double least = std::max(least_parts * slack_, full_scale_ / least_parts);
    step_ = lsb_ * std::exp2(std::ceil(std::log2(least / lsb_)));
}

void OffSamples::End::add(double value) {
    if (is_found && value < extreme) return;
    if (!is_found || value > extreme) {
        extreme = value;
        standing = short_ones = 0;
        is_found = true;
    }
    ++standing;
}

bool OffSamples::End::is_cut_off(double rail) const { return short_ones > 0 && (standing > 1 || extreme >= rail); }

/// The hardest stimulus may reach either end once; a word has both of its ends at one distance from 0, to a step.
std::int64_t OffSamples::clipped() const {
    const bool high = high_.is_cut_off(highest_), low = low_.is_cut_off(-lowest_);
    const bool is_mirrored = (high || low) && std::fabs(high_.extreme - low_.extreme) <= lsb_;
    return (high || is_mirrored ? high_.short_ones : 0) + (low || is_mirrored ? low_.short_ones : 0);
}

void OffSamples::add(double value) {
    high_.add(value);
    low_.add(-value);
}

/// Against a reference that is cut off a word that wraps is no whole turn away, against the design it is; the
/// coefficients are rounded, so that is known to a 64th of full scale.
bool OffSamples::is_wrapped(double value, double reference, double design) const {
    const auto is_turned = [](double by, double turn, double within) {
        const double turns = std::round(by / turn);
        return turns != 0.0 && std::fabs(by - turns * turn) <= within;
    };
    return is_turned(value - reference, step_, slack_) ||
           is_turned(value - design, 2.0 * full_scale_, full_scale_ / least_parts + slack_);
}

void OffSamples::add_off(double value, double reference, double design) {
    ++off_;
    if (is_wrapped(value, reference, design)) {
        ++wrapped_;
    } else if (value >= 0.0 && reference > value && value == high_.extreme) {
        ++high_.short_ones;
    } else if (value <= 0.0 && reference < value && -value == low_.extreme) {
        ++low_.short_ones;
    }
}

}  // namespace halflsb
