// A mask: limits of a gain over frequency, from a file or from a published standard.
#pragma once

#include <string>
#include <vector>

namespace halflsb {

/// In dB; infinite where there is none.
struct MaskLimits {
    double min_db, max_db;
};

/// Limits at a frequency. Two corners at one frequency are a jump.
struct MaskCorner {
    double hz;
    MaskLimits limits;
};

/// What the limits of a weighting stand around.
enum class NominalCurve { none, a_weighting, c_weighting, k_weighting };

struct ResponseMask {
    /// Between two corners: a straight line in dB over the logarithm of frequency, as IEC 61260-1 has it, or the wider
    /// limits of both, where a table says nothing of what lies between its frequencies. Where one corner has no limit
    /// there is none between them either.
    enum class Between { straight, wider };

    std::string name;                 ///< as the plan has it: of a standard's mask, or the path of a file
    std::string source = {};          ///< standard, edition, table and class; "" of a file
    std::string claim = {};           ///< what a pass says and what it does not; "" of a file
    std::vector<MaskCorner> corners;  ///< ascending, at least two
    Between between = Between::straight;
    bool ends_stay = false;  ///< what the outermost corners ask holds beyond them too
    NominalCurve nominal = NominalCurve::none;
    double shift_db = 0.0;  ///< of nominal curve and limits

    /// What it speaks about, edges included; to_hz() may be infinite.
    double from_hz() const;
    double to_hz() const;
    /// Of the gain itself. At a jump the wider side of each limit: an edge belongs to both. Both infinite outside.
    MaskLimits limits_at(double hz) const;
};

}  // namespace halflsb
