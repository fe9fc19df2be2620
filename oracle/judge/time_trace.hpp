// What a channel of a case looked like over time: stimulus, reference and response, and the error below, in constant
// memory.
//
// A long case is thinned to the lowest and the highest sample of each bucket; beside it stand every sample around the
// largest error, and those from the edge of a step or an impulse on.
#pragma once

#include <array>
#include <cstdint>
#include <optional>
#include <vector>

#include "oracle/judge/extremes.hpp"
#include "oracle/judge/plots.hpp"
#include "oracle/judge/rule_judge.hpp"

namespace halflsb {

class TimeTrace {
public:
    /// Plan and case must outlive the trace. `lag_samples` is that at which reference and response are added.
    TimeTrace(const Plan& plan, const Case& the_case, int channel, int lag_samples);

    /// The next samples. A block without a declared reference is shown without reference and error.
    void add(const AlignedBlock& block);
    /// Appends its plots.
    void plot(CasePlots& plots) const;

private:
    /// Stimulus, reference, response, error, each in the unit that is shown.
    static constexpr std::size_t signals = 4;
    using Row = std::array<double, signals>;
    /// Every sample of a stretch.
    struct Stretch {
        std::int64_t first_index = -1;
        std::vector<Row> rows;
    };
    void look_at_error(std::int64_t index, const Row& row);
    /// Of the largest error, as far as they have come.
    Stretch surroundings() const;
    Plot frame(std::string title) const;
    Plot overview() const;
    Plot plot_of(const Stretch& stretch, std::string title) const;
    void add_panels(Plot& plot, std::array<std::vector<double>, signals> columns) const;
    std::string note_on_what_is_seen() const;

    const Signal& signal_;
    const Case& case_;
    int channel_, lag_;
    double rate_hz_;
    double worth_, error_worth_;        ///< values of one unit that is shown
    std::optional<std::int64_t> edge_;  ///< where a step or an impulse is to be seen
    bool has_reference_ = false;
    std::int64_t first_index_ = -1, next_index_ = 0;
    ThinnedSamples<signals> thinned_;
    Stretch from_edge_;
    std::vector<Row> newest_;  ///< a ring, by index
    double largest_error_ = 0.0;
    std::int64_t largest_at_ = -1;
    std::int64_t kept_for_ = -1;  ///< the largest error whose surroundings are whole
    Stretch around_largest_;
};

}  // namespace halflsb
