#include "oracle/measure/transition.hpp"

#include <algorithm>
#include <array>
#include <cmath>

#include "oracle/measure/sums.hpp"

namespace halflsb {

namespace {

using Fault = TransitionFault;

TransitionFigure none(Fault fault) { return {std::nullopt, fault}; }
TransitionFigure some(double value, double uncertainty, double bound) {
    return {Figure{value, uncertainty, bound}, Fault::none};
}

double mean_of(std::span<const double> samples) {
    CompensatedSum sum;
    for (const double sample : samples) sum.add(sample);
    return sum.value() / static_cast<double>(samples.size());
}

double deviation_of(std::span<const double> samples) {
    const double mean = mean_of(samples);
    CompensatedSum squares;
    for (const double sample : samples) squares.add((sample - mean) * (sample - mean));
    return std::sqrt(squares.value() / static_cast<double>(samples.size() - 1));
}

// The samples relative to the states, 0 .. 1, and where straight lines between them cross a level.
class Course {
public:
    Course(std::span<const double> samples, const StateLevels& levels)
        : samples_(samples), first_(levels.first), amplitude_(levels.second - levels.first) {}

    std::size_t size() const { return samples_.size(); }
    double at(std::size_t n) const { return (samples_[n] - first_) / amplitude_; }

    /// The n of an upward crossing of `level` between n - 1 and n; 0 when there is none.
    std::size_t first_up(double level, std::size_t from) const {
        for (std::size_t n = std::max<std::size_t>(from, 1); n < size(); ++n) {
            if (goes_up(level, n)) return n;
        }
        return 0;
    }
    std::size_t last_up(double level, std::size_t to) const {
        for (std::size_t n = to; n > 0; --n) {
            if (goes_up(level, n)) return n;
        }
        return 0;
    }
    /// Of a crossing between n - 1 and n, in samples of the window.
    double instant(double level, std::size_t n) const {
        const double before = at(n - 1), after = at(n);
        return static_cast<double>(n - 1) + (level - before) / (after - before);
    }
    /// The last n after `from` with |z - 1| above the band; `from` when there is none.
    std::size_t last_outside(double band, std::size_t from) const {
        for (std::size_t n = size() - 1; n > from; --n) {
            if (std::fabs(at(n) - 1.0) > band) return n;
        }
        return from;
    }

private:
    bool goes_up(double level, std::size_t n) const { return at(n - 1) < level && at(n) >= level; }

    std::span<const double> samples_;
    double first_, amplitude_;
};

// How far a sample may lie off, over the amplitude.
struct Doubt {
    double bound = 0.0;  ///< codes and levels: perhaps the same in each sample
    double noise = 0.0;  ///< a standard deviation, new in each sample
};

// instant_for(s) is where the response crosses a level that lies `s` further on its way; none when it does not. The
// slope that turns noise into time is taken over 4 standard deviations on either side, else it would be mostly noise.
template <class InstantFor>
TransitionFigure with_doubt(double instant, const Doubt& doubt, InstantFor instant_for) {
    double bound = 0.0, noise = 0.0;
    if (doubt.bound > 0.0) {
        const std::optional<double> early = instant_for(-doubt.bound), late = instant_for(doubt.bound);
        if (!early || !late) return none(Fault::too_coarse);
        bound = std::max(instant - *early, *late - instant);
    }
    if (doubt.noise > 0.0) {
        const std::optional<double> early = instant_for(-4.0 * doubt.noise), late = instant_for(4.0 * doubt.noise);
        if (!early || !late) return none(Fault::too_coarse);
        noise = (*late - *early) / 8.0;
    }
    return some(instant, noise, bound);
}

struct Crossing {
    std::size_t index = 0;  ///< the first sample at or beyond the level, 0 when there is no crossing
    TransitionFigure instant;
};

// find(level, shift) says which crossing is meant when all levels are shifted so far, as the index of its second
// sample, 0 when there is none.
template <class Find>
Crossing crossing_at(const Course& course, double level, const Doubt& doubt, Find find) {
    const std::size_t index = find(level, 0.0);
    if (index == 0) {
        bool reaches = false;
        for (std::size_t n = 0; n < course.size() && !reaches; ++n) reaches = course.at(n) >= level;
        return {0, none(reaches ? Fault::starts_beyond : Fault::never_reaches)};
    }
    return {index, with_doubt(course.instant(level, index), doubt, [&](double shift) {
                const std::size_t other = find(level + shift, shift);
                return other == 0 ? std::nullopt : std::optional(course.instant(level + shift, other));
            })};
}

TransitionFigure difference(const TransitionFigure& late, const TransitionFigure& early) {
    if (!early.figure) return early;
    if (!late.figure) return late;
    return some(late.figure->value - early.figure->value,
                std::hypot(late.figure->standard_uncertainty, early.figure->standard_uncertainty),
                late.figure->bound + early.figure->bound);
}

TransitionFigure relative_to(const TransitionFigure& instant, std::int64_t origin) {
    if (!instant.figure) return instant;
    return some(instant.figure->value - static_cast<double>(origin), instant.figure->standard_uncertainty,
                instant.figure->bound);
}

struct Aberrations {
    double over = 0.0, under = 0.0, pre = 0.0, early = 0.0;
};

/// From sample `mid` on, and back from it; a state is reached once it is no further than `reached`.
Aberrations aberrations_from(const Course& course, std::size_t mid, double reached) {
    Aberrations found;
    bool was_there = false;
    for (std::size_t n = mid; n < course.size(); ++n) {
        const double z = course.at(n);
        found.over = std::max(found.over, z - 1.0);
        was_there = was_there || z >= 1.0 - reached;
        if (was_there) found.under = std::max(found.under, 1.0 - z);
    }
    bool is_there = false;
    for (std::size_t n = mid; n-- > 0;) {
        const double z = course.at(n);
        found.pre = std::max(found.pre, -z);
        is_there = is_there || z <= reached;
        if (is_there) found.early = std::max(found.early, z);
    }
    return found;
}

// All four. The mid crossing, and whether a state was reached, may be another one by as much as a sample is off: what
// lies between the first and the last sample that it can be belongs to either side. The further the stretch and the
// sooner a state counts as reached, the larger a figure, so both ends are those of the ends.
void find_aberrations(const Course& course, double mid_level, std::size_t mid, double reached, const Doubt& doubt,
                      TransitionFigures& figures) {
    const double off = doubt.bound + 4.0 * doubt.noise;
    // A start that may lie beyond the level leaves open which crossing is the first.
    const bool starts_short = course.at(0) < mid_level - off;
    const std::size_t down = starts_short ? course.first_up(mid_level - off, 1) : 1,
                      up = starts_short ? course.first_up(mid_level + off, 1) : 0;
    const std::size_t first = std::min(mid, down), last = up == 0 ? course.size() : up;
    const Aberrations found = aberrations_from(course, mid, reached);
    const Aberrations sooner = aberrations_from(course, first, reached + off),
                      later = aberrations_from(course, last, reached + off),
                      least_from_first = aberrations_from(course, first, reached - off),
                      least_from_last = aberrations_from(course, last, reached - off);
    const auto told = [&](double value, double most, double least) {
        return some(100.0 * value, 100.0 * doubt.noise, 100.0 * (doubt.bound + std::max(most - value, value - least)));
    };
    figures.overshoot_percent = told(found.over, sooner.over, least_from_last.over);
    figures.undershoot_percent = told(found.under, sooner.under, least_from_last.under);
    figures.preshoot_percent = told(found.pre, later.pre, least_from_first.pre);
    figures.early_overshoot_percent = told(found.early, later.early, least_from_first.early);
}

// Instant of the last entry into the band; none when the final stretch is not all inside.
std::optional<double> last_entry(const Course& course, double band, std::size_t mid, std::size_t final_samples) {
    const std::size_t outside = course.last_outside(band, mid - 1);
    if (outside + final_samples >= course.size()) return std::nullopt;
    return course.instant(course.at(outside) > 1.0 ? 1.0 + band : 1.0 - band, outside + 1);
}

template <class MidAt>
TransitionFigure settling_of(const Course& course, double band, MidAt mid_at, std::size_t final_samples,
                             const Doubt& doubt) {
    const auto entry = last_entry(course, band, mid_at(0.0), final_samples);
    if (!entry) return none(Fault::not_settled);
    return with_doubt(*entry, doubt, [&](double shift) {
        const std::size_t mid = mid_at(shift);
        return band > shift && mid > 0 ? last_entry(course, band - shift, mid, final_samples) : std::nullopt;
    });
}

TransitionFigure final_value_of(std::span<const double> stretch, double half_band) {
    constexpr std::size_t batches = 8;
    if (stretch.size() < final_least_samples) return none(Fault::too_short);
    std::array<double, batches> means{};
    // The oldest samples that do not fill a batch stand in the mean alone.
    const std::size_t length = stretch.size() / batches, rest = stretch.size() - batches * length;
    for (std::size_t b = 0; b < batches; ++b) means[b] = mean_of(stretch.subspan(rest + b * length, length));
    const double uncertainty = deviation_of(means) / std::sqrt(static_cast<double>(batches));
    const std::span all(means);
    const std::size_t half = batches / 2;
    const double change = std::fabs(mean_of(all.last(half)) - mean_of(all.first(half)));
    // A change between halves also widens the spread of all: what is left within the halves says how sure it is.
    const double within =
        std::hypot(deviation_of(all.first(half)), deviation_of(all.last(half))) / std::sqrt(static_cast<double>(half));
    if (change > half_band && change > 4.0 * within) return none(Fault::still_moving);
    return some(mean_of(stretch), uncertainty, 0.0);
}

bool is_sound(const TransitionQuestion& q, std::size_t samples) {
    return q.low_percent > 0.0 && q.low_percent < q.mid_percent && q.mid_percent < q.high_percent &&
           q.high_percent < 100.0 && q.band_percent > 0.0 && q.band_percent < 100.0 - q.mid_percent && q.lsb >= 0.0 &&
           std::isfinite(q.lsb) && q.step_index >= 0 && q.step_index < static_cast<std::int64_t>(samples) &&
           (q.final_samples == 0 || q.final_samples >= final_least_samples);
}

bool are_finite(const StateLevels& levels) {
    return std::isfinite(levels.first) && std::isfinite(levels.second) && std::isfinite(levels.standard_uncertainty);
}

}  // namespace

TransitionAnswer measure_transition(const TransitionQuestion& question, std::span<const double> samples) {
    if (samples.size() < transition_least_samples) return {std::nullopt, Fault::too_short};
    if (samples.size() > transition_most_samples) return {std::nullopt, Fault::too_long};
    if (!is_sound(question, samples.size())) return {std::nullopt, Fault::bad_question};
    for (const double sample : samples) {
        if (!std::isfinite(sample)) return {std::nullopt, Fault::not_finite};
    }
    const auto levels = question.levels ? question.levels : state_levels_of(samples);
    if (!levels) return {std::nullopt, Fault::no_transition};
    if (!are_finite(*levels)) return {std::nullopt, Fault::not_finite};
    const double amplitude = std::fabs(levels->second - levels->first);
    if (!(amplitude > 0.0) || !std::isfinite(amplitude)) return {std::nullopt, Fault::no_transition};
    const auto before = static_cast<std::size_t>(question.step_index), after = samples.size() - before;
    const std::size_t final_samples =
        question.final_samples > 0 ? question.final_samples : std::max(after / 4, final_least_samples);
    if (final_samples > after) return {std::nullopt, Fault::too_short};

    TransitionFigures figures;
    figures.levels = *levels;
    figures.levels_are_given = question.levels.has_value();
    const auto stretch = samples.last(final_samples);
    figures.noise = deviation_of(before >= final_least_samples ? samples.first(before) : stretch);
    const Doubt doubt{std::hypot(question.lsb, levels->standard_uncertainty) / amplitude, figures.noise / amplitude};

    const Course course(samples, *levels);
    const double low_level = question.low_percent / 100.0, mid_level = question.mid_percent / 100.0,
                 high_level = question.high_percent / 100.0, band = question.band_percent / 100.0;
    figures.final_value = final_value_of(stretch, 0.5 * band * amplitude);
    // What is found from the mid crossing moves with it: within the doubt it may be another one.
    const auto mid_at = [&](double shift) { return course.first_up(mid_level + shift, 1); };
    const Crossing mid = crossing_at(course, mid_level, doubt, [&](double, double shift) { return mid_at(shift); });
    figures.mid_instant = relative_to(mid.instant, question.step_index);
    if (mid.index == 0) {
        figures.low_instant = figures.high_instant = figures.duration_samples = mid.instant;
        figures.overshoot_percent = figures.undershoot_percent = mid.instant;
        figures.preshoot_percent = figures.early_overshoot_percent = figures.settling_samples = mid.instant;
        return {figures, Fault::none};
    }
    const Crossing low = crossing_at(course, low_level, doubt,
                                     [&](double level, double shift) { return course.last_up(level, mid_at(shift)); });
    const Crossing high = crossing_at(course, high_level, doubt, [&](double level, double shift) {
        const std::size_t from = mid_at(shift);
        return from == 0 ? 0 : course.first_up(level, from);
    });
    figures.low_instant = relative_to(low.instant, question.step_index);
    figures.high_instant = relative_to(high.instant, question.step_index);
    figures.duration_samples = difference(high.instant, low.instant);
    find_aberrations(course, mid_level, mid.index, question.lsb / amplitude, doubt, figures);
    figures.settling_samples = difference(settling_of(course, band, mid_at, final_samples, doubt), mid.instant);
    return {figures, Fault::none};
}

std::string_view reason_of(TransitionFault fault) {
    switch (fault) {
        case Fault::none:
            return "";
        case Fault::bad_question:
            return "a reference level, the band or the step's place is out of range";
        case Fault::too_short:
            return "too few samples";
        case Fault::too_long:
            return "more samples than a transition is measured over";
        case Fault::not_finite:
            return "a sample is NaN or infinite";
        case Fault::no_transition:
            return "there are no two levels";
        case Fault::starts_beyond:
            return "the response stands beyond the reference level from the start";
        case Fault::never_reaches:
            return "the response never reaches the reference level";
        case Fault::too_coarse:
            return "the codes are too coarse, or the noise too large, for this level or band";
        case Fault::not_settled:
            return "the record ends before the response has settled";
        case Fault::still_moving:
            return "the response is still moving at the end of the record";
    }
    return "";
}

TransitionMeasure::TransitionMeasure(TransitionQuestion question, std::int64_t window_first, std::size_t window_samples)
    : question_(question),
      skip_(std::max<std::int64_t>(window_first, 0)),
      window_samples_(std::min(window_samples, transition_most_samples)),
      is_too_long_(window_samples > transition_most_samples) {}

void TransitionMeasure::add(std::span<const double> response) {
    const auto skipped =
        static_cast<std::size_t>(std::min<std::int64_t>(skip_, static_cast<std::int64_t>(response.size())));
    skip_ -= static_cast<std::int64_t>(skipped);
    const auto fresh = response.subspan(skipped);
    const std::size_t room = std::min(window_samples_ - record_.size(), fresh.size());
    record_.insert(record_.end(), fresh.begin(), fresh.begin() + static_cast<std::ptrdiff_t>(room));
}

TransitionAnswer TransitionMeasure::value() const {
    if (is_too_long_) return {std::nullopt, Fault::too_long};
    return measure_transition(question_, record_);
}

}  // namespace halflsb
