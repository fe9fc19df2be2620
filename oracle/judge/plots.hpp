// What a person wants to see of a case, as curves: made while judging, written by the report.
//
// Nothing here decides anything. Whatever the length of the case, a plot has a bounded number of points. A value that
// is not a finite number is a gap in its curve. Texts are our own words: nothing of a plan or a board is in them.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "oracle/judge/verdict.hpp"

namespace halflsb {

struct PlotCurve {
    enum class Role { stimulus, reference, response, error };
    Role role = Role::response;
    std::string name;
    std::vector<double> values;     ///< one a point of the plot
    std::vector<double> low, high;  ///< ends of an interval around the values; or both empty
};

/// What the rules ask, over a part of the axis: the values shall lie between the ends.
struct PlotLimit {
    double from = 0.0, to = 0.0;  ///< of x; infinite: to the end of the axis
    std::optional<double> min, max;
    Verdict verdict = Verdict::pass;
};

/// Curves over one y axis. The panels of a plot share x and are zoomed together.
struct PlotPanel {
    std::string quantity, unit;  ///< of y: "gain", "dB"
    std::vector<PlotCurve> curves;
    std::vector<PlotLimit> limits = {};
    bool is_angle = false;  ///< degrees: a step of more than half a turn is no line
};

/// A place that is worth looking at.
struct PlotMark {
    double x = 0.0;
    std::string text;
    Verdict verdict = Verdict::pass;
};

struct Plot {
    enum class Over { time, frequency };
    std::string title;
    std::string note = {};  ///< a sentence or more on what is seen; "" where nothing needs saying
    Over over = Over::time;
    int channel = 0;        ///< of the response, counted from 1; 0: the signal has only one
    double rate_hz = 0.0;   ///< over time: x counts samples of the response, so many a second
    std::vector<double> x;  ///< ascending: sample, or Hz
    std::vector<PlotPanel> panels;
    std::vector<PlotMark> marks = {};
};

using CasePlots = std::vector<Plot>;

/// The quantity of the panel that shows response - declared reference, in natural_unit().
inline constexpr const char* error_panel = "error";

}  // namespace halflsb
