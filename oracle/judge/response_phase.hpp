// Phase and group delay of a response rule against their limits, look by look.
//
// The phase of a point is that of design + estimate, or how far it is from the design's. What noise adds across the
// true response H is normal with the estimate's deviation s, and |H^| sin(phase^ - phase) is just that part: so the
// phase is off by more than asin(t s / |H^|) as rarely as t says, while t s is below half of |H^|; else nothing is
// told.
//
// The group delay is its mean over a step between two points a and b, which is exact, unlike a derivative:
//
//     mean delay = -(phase_b - phase_a) / (2 pi (f_b - f_a)) samples,  u^2 = (s_a^2 / |H_a|^2 + s_b^2 / |H_b|^2) /
//     (...)^2
//
// by the propagation of uncertainty (JCGM 100:2008, 5.1.2, from memory). Spectra of noise at points more than a main
// lobe of the window (4 bins) apart are uncorrelated, so steps are no shorter. What lies between the points is taken
// from the design, so only the difference from it must turn by less than half a turn in a step: 1/2 of the step's
// reciprocal in samples. A step is a sixteenth of the range: shorter ones know their delay less well in proportion.
#pragma once

#include <complex>
#include <cstddef>
#include <vector>

#include "oracle/judge/certainty.hpp"
#include "oracle/judge/response_band.hpp"
#include "oracle/judge/rule_judge.hpp"
#include "oracle/measure/response.hpp"
#include "oracle/measure/response_estimate.hpp"

namespace halflsb {

/// A phase, or a mean delay over a step, as it was measured.
struct PhaseFigure {
    double value = 0.0;  ///< degrees, or samples
    double uncertainty = 0.0;
    double degrees = 0.0;  ///< of freedom
    double ratio = 0.0;    ///< the larger s / |H| behind it
    /// What the value is surely within, either way; infinite where nothing is known.
    double reach(double probability) const;
};

class PhaseDecisions {
public:
    PhaseDecisions() = default;
    /// `points`: all that the stimulus answers for, ascending.
    PhaseDecisions(const PhaseLimits& limits, const std::vector<BandPoint>& points, const ResponseSums& sums,
                   const JudgedChannel& channel);

    /// What shares alpha.
    std::size_t decisions() const;
    /// `shares` are those of one figure and one look.
    void look(const ResponseSums& sums, const ErrorShares& shares);
    Verdict verdict() const;
    std::vector<JudgedFigure> figures(const ResponseSums& sums) const;
    struct Open {
        std::size_t figures = 0;
        bool is_not_a_number = false;
        double samples_needed = 0.0;
    };
    Open open(const ResponseSums& sums, double samples, const ErrorShares& shares) const;
    double fixed_length_samples(const ResponseSums& sums, double samples, const ErrorShares& shares) const;
    const PhaseLimits& limits() const { return limits_; }
    /// The range in which the phase is held; nothing is when it is empty.
    double from_hz() const;
    double to_hz() const;
    bool limits_phase() const { return !phases_.empty(); }
    Verdict phase_verdict() const;

    /// A step of the group delay, with its interval at a two-sided confidence, for a plot.
    struct Step {
        double from_hz, to_hz, value, low, high, design;
        Verdict verdict;
    };
    std::vector<Step> steps(const ResponseSums& sums, double confidence) const;

private:
    struct Item {
        BandPoint a, b;                 ///< of a phase only a
        double design = 0.0;            ///< of what is limited: 0 where limits are relative to it
        std::vector<Verdict> verdicts;  ///< one a side
    };
    struct Side {
        double limit, zone;
        bool at_least, of_size;  ///< of_size: the size of the value is held
    };
    PhaseFigure phase_of(const Item& item, const ResponseSums& sums) const;
    PhaseFigure delay_of(const Item& item, const ResponseSums& sums) const;
    PhaseFigure figure_of(const Item& item, bool is_delay, const ResponseSums& sums) const {
        return is_delay ? delay_of(item, sums) : phase_of(item, sums);
    }
    void add_steps(const std::vector<BandPoint>& inside, const ResponseSums& sums, const JudgedChannel& channel);
    template <class Use>
    void each(Use use) const;
    JudgedFigure shown(const std::vector<Item>& items, std::size_t side, const std::vector<Side>& sides, bool is_delay,
                       const ResponseSums& sums) const;

    PhaseLimits limits_;
    double rate_hz_ = 1.0;
    std::vector<Side> phase_sides_, delay_sides_;
    std::vector<Item> phases_, delays_;
};

/// Points of a case at which a response rule holds the phase, from what the stimulus answers for.
std::vector<BandPoint> phase_points(const PhaseLimits& limits, const std::vector<BandPoint>& points, double rate_hz);

}  // namespace halflsb
