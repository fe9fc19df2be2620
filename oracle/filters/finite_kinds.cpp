// The kinds that forget: moving average and FIR.
#include "oracle/filters/filter_kind.hpp"

namespace halflsb {

namespace {

constexpr std::size_t most_points = 65536;
constexpr std::size_t most_taps = 65536;

Outcome<FilterDesign> make_moving_average(const Recipe& recipe, const ParameterValues& values, const StageContext&) {
    const auto points = values.integer(recipe, "points");
    const std::string remedy = "give a whole number from 1 to " + text_of(most_points);
    if (!points) return refuse("points", values.has("points") ? "not a whole number" : "points is missing", remedy);
    if (*points < 1 || *points > static_cast<std::int64_t>(most_points)) {
        return refuse("points", std::to_string(*points) + " points", remedy);
    }
    return FilterDesign(MovingAverage{static_cast<int>(*points)});
}

std::optional<std::string> complaint_about_taps(const FilterStage& stage) {
    for (const double tap : std::get<Fir>(stage.design).taps) {
        if (tap != 0.0) return std::nullopt;
    }
    return "all taps are 0";
}

Outcome<FilterDesign> make_fir(const Recipe&, const ParameterValues& values, const StageContext&) {
    const auto name = one_of(values, {"taps", "taps_file"});
    if (!name) return name.error();
    FilterStage stage{Fir{values.numbers(*name)}, std::nullopt};
    const auto& taps = std::get<Fir>(stage.design).taps;
    if (taps.empty() || taps.size() > most_taps) {
        return refuse(*name, text_of(taps.size()) + " taps", "give 1 to " + text_of(most_taps) + " taps");
    }
    for (const double tap : taps) {
        if (auto error = unusable_number(*name, tap)) return *error;
    }
    if (auto problem = complaint_about_taps(stage)) {
        return refuse(*name, *problem, "at least one tap must differ from 0");
    }
    return std::move(stage.design);
}

}  // namespace

FilterKind moving_average_kind() {
    return {{"moving-average",
             "The mean of the last samples: y[n] = (x[n] + ... + x[n-points+1]) / points.",
             {{.name = "points",
               .type = ParameterType::integer,
               .unit = "samples",
               .minimum = 1.0,
               .maximum = static_cast<double>(most_points),
               .required = true,
               .help = "How many samples are averaged, the newest included."}}},
            make_moving_average,
            nullptr};
}

FilterKind fir_kind() {
    return {
        {"fir",
         "A finite impulse response: y[n] = taps[0] x[n] + taps[1] x[n-1] + ...",
         {coefficients_parameter("taps", ParameterType::reals,
                                 "The taps, 1 .. 65536 of them, the one of the newest sample first."),
          coefficients_parameter("taps_file", ParameterType::file,
                                 "Instead of taps: a file of them, text, CSV, NPY or the firmware's own C source.")}},
        make_fir,
        complaint_about_taps};
}

}  // namespace halflsb
