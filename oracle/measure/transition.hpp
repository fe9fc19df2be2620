// Figures of a response to a step, in the terms of IEEE 181-2011 and IEC 60469:2013 (both from memory): state levels,
// reference level instants, transition duration, aberrations, settling duration, final value.
//
// The samples are taken relative to the states, z = (y - first) / (second - first), so that falling is rising, and are
// joined by straight lines: an instant is where those cross a level. Of several crossings the 50 % instant is the
// first, the 10 % instant the last one before it, the 90 % instant the first one after it. A continuous response
// between the samples crosses within |y''| / (8 |y'|) samples of the figure (error of linear interpolation).
//
// Uncertainties. A sample may lie off in two ways, and a figure says both.
//   bound b (Figure::bound): sqrt(lsb^2 + u^2(levels)). Whatever rounding the board has, from floor to half-up, its
//   error
//     is within one LSB, and it may be the same one in each sample. An instant's share is the larger distance to where
//     the same response crosses the level - b and the level + b: b over the local slope where the response is straight,
//     the length of the flat parts where it stands on few codes. Those of two ends of a duration add up.
//   noise s (the standard uncertainty): the standard deviation of the samples before the step (of the final stretch
//   when
//     fewer than 16 stand there). Its share is s over the slope between the level - 4 s and the level + 4 s, as if each
//     sample were as noisy as a line between two is not. Where s exceeds the change from one sample to the next, the
//     first of several crossings is taken for the one, and the instant comes early by about as much as the uncertainty
//     says. Those of two ends add in squares.
// Where a state lies within b or 4 s of the level, there is no such crossing, and no instant: `too_coarse`.
// Aberrations: 100 b / amplitude and 100 s / amplitude; of noise alone the largest of n samples lies some s sqrt(2 ln
// n) beyond the level.
// A sample that is off can make another crossing of the 50 % level the first one, and a state reached or not: all that is
// found from there moves with it. An instant's shifted levels begin from the 50 % level that is shifted likewise; an
// aberration's bound holds what it is from the first and from the last sample between which that crossing can lie, b + 4
// s either way, and with states that count as reached so much sooner or later.
//
// The window. A whole record is held, at most transition_most_samples (8 MiB); of a longer run the caller chooses the
// window around the step.
#pragma once

#include <cstddef>
#include <cstdint>
#include <optional>
#include <span>
#include <string_view>
#include <vector>

#include "oracle/measure/figure.hpp"
#include "oracle/measure/state_levels.hpp"

namespace halflsb {

inline constexpr std::size_t transition_least_samples = 32;
inline constexpr std::size_t transition_most_samples = std::size_t{1} << 20;
inline constexpr std::size_t final_least_samples = 16;

struct TransitionQuestion {
    /// Of the stimulus's first sample at its new level, counted from the first sample of the window; the instants count
    /// from here. At least one sample should stand before it.
    std::int64_t step_index = 0;
    /// Both levels of the stimulus times the reference's gain at frequency 0; without them the histogram's.
    std::optional<StateLevels> levels;
    /// Reference levels in % of the way from first to second; 0 < low < mid < high < 100.
    double low_percent = 10.0, mid_percent = 50.0, high_percent = 90.0;
    double band_percent = 2.0;  ///< settled within +- this much of the amplitude; above 0, below 100 - mid_percent
    double lsb = 0.0;           ///< of the response's codes, as a value; 0 for what is not quantised
    /// How many samples at the end make the final value, at least 16; 0 for a quarter of those from the step on.
    std::size_t final_samples = 0;
};

/// Why a figure cannot be said.
enum class TransitionFault {
    none,
    bad_question,   ///< reference levels, band, LSB, step or final stretch out of range
    too_short,      ///< fewer than 32 samples, or fewer than 16 at the end
    too_long,       ///< more than transition_most_samples
    not_finite,     ///< a sample or a level is NaN or infinite
    no_transition,  ///< both levels are the same, or a histogram finds no two
    starts_beyond,  ///< the response never stands short of the reference level before it goes through
    never_reaches,  ///< the response never gets to the reference level
    too_coarse,     ///< a reference level or the band lies within an LSB (or the noise) of a state
    not_settled,    ///< the response leaves the band in the final stretch
    still_moving,   ///< the final stretch goes on moving
};
/// The reason in words that can stand after "cannot be judged: ".
std::string_view reason_of(TransitionFault fault);

/// A figure, or why there is none: `fault` is none exactly when there is a figure.
struct TransitionFigure {
    std::optional<Figure> figure;
    TransitionFault fault = TransitionFault::none;
};

struct TransitionFigures {
    StateLevels levels;
    bool levels_are_given = false;
    double noise = 0.0;  ///< the standard deviation s above, the one that was found
    /// Samples from step_index on: the latency of the response's transition.
    TransitionFigure low_instant, mid_instant, high_instant;
    TransitionFigure duration_samples;  ///< high_instant - low_instant
    /// In % of the amplitude, 0 or more. Beyond the second level, at any time after the mid instant; and short of it
    /// after it was first reached (to an LSB), so the swing back.
    TransitionFigure overshoot_percent, undershoot_percent;
    /// The same before the transition, as in a mirror: on the far side of the first level, before the mid instant (so
    /// against the transition's direction); and on the near side before the first level was last left.
    TransitionFigure preshoot_percent, early_overshoot_percent;
    /// From the mid instant to the last entry into the band around the second level; its edges crossed by straight
    /// lines. Uncertainty: as of an instant, by bands that are wider and narrower, so it knows of ringing that comes
    /// near an edge.
    TransitionFigure settling_samples;
    /// Mean of the final stretch, of the codes as they are, in the samples' unit. Uncertainty: from the spread of 8
    /// batch means (Law and Carson 1979 for batch means), so with 7 degrees of freedom, for a stretch longer than some
    /// 80 times the noise's correlation. `still_moving`: its halves differ by more than half the band and by more than
    /// 4 standard deviations of such a difference.
    TransitionFigure final_value;
    int final_value_degrees = 7;
};

struct TransitionAnswer {
    std::optional<TransitionFigures> figures;
    TransitionFault fault = TransitionFault::none;  ///< none exactly when there are figures
};

/// Cost: a few passes.
TransitionAnswer measure_transition(const TransitionQuestion& question, std::span<const double> samples);

/// Collects the window, 8 bytes a sample: `window_samples` from `window_first` on, both counted from the first sample
/// added; what lies outside counts nothing. Any split into blocks gives the same figures, bit for bit.
class TransitionMeasure {
public:
    explicit TransitionMeasure(TransitionQuestion question, std::int64_t window_first = 0,
                               std::size_t window_samples = transition_most_samples);
    void add(std::span<const double> response);
    TransitionAnswer value() const;

private:
    TransitionQuestion question_;
    std::int64_t skip_;
    std::size_t window_samples_;
    bool is_too_long_;
    std::vector<double> record_;
};

}  // namespace halflsb
