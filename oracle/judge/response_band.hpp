// One band or the mask of a response rule: each of its points is decided by itself, look by look.
//
// A point that was decided stays decided: the looks share alpha and beta (repeated_looks.hpp), so what each says holds
// whenever it was said.
#pragma once

#include <complex>
#include <cstddef>
#include <optional>
#include <string>
#include <utility>
#include <vector>

#include "oracle/judge/certainty.hpp"
#include "oracle/measure/response.hpp"
#include "oracle/rules/response_rule.hpp"

namespace halflsb {

/// A point of the measure that lies in the band and where the stimulus has power.
struct BandPoint {
    std::size_t index;  ///< of the measure
    double hz;
    std::complex<double> design;
};

class BandDecision {
public:
    BandDecision(const ResponseRule& rule, const ResponseBand& band, std::vector<BandPoint> points);
    /// Points that the mask does not limit are left out.
    BandDecision(const ResponseRule& rule, const ResponseMask& mask, std::vector<BandPoint> points);

    /// Each point and side that is held against a limit: what shares alpha.
    std::size_t decisions() const;
    /// What has come so far. `shares` are those of one point, one side and one look.
    void look(const ResponseSums& sums, const ErrorShares& shares);
    /// Fails with one point, passes with all of them.
    Verdict verdict() const;
    /// For each side the point that decides it: of the points that fail, or else of those that are undecided, or else
    /// of all, the one with the least room.
    std::vector<JudgedFigure> figures(const ResponseSums& sums) const;
    /// Of the same points frequency and verdict.
    std::vector<std::pair<double, Verdict>> decisive_points(const ResponseSums& sums) const;
    /// None of a mask.
    const std::optional<ResponseBand>& band() const { return band_; }
    /// Those that are held, ascending.
    const std::vector<BandPoint>& points() const { return points_; }
    /// What is asked of one of them.
    MaskLimits limits_at(std::size_t point) const;
    /// What is undecided yet.
    struct Open {
        std::size_t gains = 0;  ///< points and sides
        bool is_not_a_number = false;
        double samples_needed = 0.0;  ///< for all of them, wherever they lie; 0 where no spread is known
    };
    Open open(const ResponseSums& sums, double samples, const ErrorShares& shares) const;
    /// How many samples a test of one length, fixed beforehand, needs for a gain on the limit of the hardest point:
    /// `shares` are those of a point and a side, not of a look. 0 where no spread is known.
    double fixed_length_samples(const ResponseSums& sums, double samples, const ErrorShares& shares) const;

private:
    struct Side {
        std::vector<double> limits_db;  ///< one a point; infinite: none
        bool at_least;
        std::vector<Verdict> verdicts;  ///< one a point
    };
    struct Gain;
    BandDecision(const ResponseRule& rule, std::string name, std::vector<BandPoint> points,
                 const std::vector<MaskLimits>& limits);
    Gain gain_at(const ResponseSums& sums, const BandPoint& point) const;
    double samples_to_tell(const Side& side, std::size_t point, const Gain& gain, double samples,
                           const ErrorShares& shares) const;
    std::vector<Gain> gains(const ResponseSums& sums) const;
    static double room_of(const Side& side, std::size_t point, const Gain& gain);
    /// Index of the point that decides the side.
    std::size_t decisive(const Side& side, const std::vector<Gain>& gains) const;
    JudgedFigure figure_of(const Side& side, const std::vector<Gain>& gains) const;

    std::optional<ResponseBand> band_;
    std::string name_;  ///< "from 10 Hz to 60 Hz"
    double zone_db_;
    bool relative_to_design_;
    std::vector<BandPoint> points_;
    std::vector<Side> sides_;
};

/// "50 Hz", with 6 significant digits.
std::string hz_text(double hz);

}  // namespace halflsb
