// The kinds that forget, at one rate: moving average, FIR and median.
#include <algorithm>

#include "oracle/filters/filter_kind.hpp"
#include "stimuli/values_check.hpp"

namespace halflsb {

namespace {

constexpr std::size_t most_points = 65536;
constexpr std::size_t most_taps = 65536;
constexpr double most_median_points = 4096.0;

Outcome<FilterDesign> make_moving_average(const Recipe& recipe, const ParameterValues& values, const StageContext&) {
    const auto points = values.integer(recipe, "points");
    const std::string remedy = "give a whole number from 1 to " + text_of(most_points);
    if (!points) return refuse("points", values.has("points") ? "not a whole number" : "points is missing", remedy);
    if (*points < 1 || *points > static_cast<std::int64_t>(most_points)) {
        return refuse("points", std::to_string(*points) + " points", remedy);
    }
    return FilterDesign(MovingAverage{static_cast<int>(*points)});
}

Outcome<FilterDesign> make_fir(const Recipe&, const ParameterValues& values, const StageContext&) {
    auto taps = taps_from(values, most_taps);
    if (!taps) return taps.error();
    return FilterDesign(Fir{std::move(*taps)});
}

Outcome<FilterDesign> make_median(const Recipe& recipe, const ParameterValues& values, const StageContext&) {
    if (auto error = misfit_of(recipe, values)) return *error;
    return FilterDesign(Median{static_cast<int>(*values.integer(recipe, "points"))});
}

const std::vector<double>* taps_of(const FilterDesign& design) {
    if (const auto* fir = std::get_if<Fir>(&design)) return &fir->taps;
    if (const auto* decimator = std::get_if<FirDecimator>(&design)) return &decimator->taps;
    return &std::get<FirInterpolator>(design).taps;
}

bool all_are_zero(const std::vector<double>& taps) {
    return std::all_of(taps.begin(), taps.end(), [](double tap) { return tap == 0.0; });
}

}  // namespace

Outcome<std::vector<double>> taps_from(const ParameterValues& values, std::size_t most) {
    const auto name = one_of(values, {"taps", "taps_file"});
    if (!name) return name.error();
    std::vector<double> taps = values.numbers(*name);
    if (taps.empty() || taps.size() > most) {
        return refuse(*name, text_of(taps.size()) + " taps", "give 1 to " + text_of(most) + " taps");
    }
    for (const double tap : taps) {
        if (auto error = unusable_number(*name, tap)) return *error;
    }
    if (all_are_zero(taps)) return refuse(*name, "all taps are 0", "at least one tap must differ from 0");
    return taps;
}

std::optional<std::string> complaint_about_taps(const FilterStage& stage) {
    if (all_are_zero(*taps_of(stage.design))) return "all taps are 0";
    return std::nullopt;
}

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

FilterKind median_kind() {
    return {{"median",
             "The middle one of the last samples by size, of an even number the mean of the middle two. Not linear: "
             "rules about the response do not hold.",
             {{.name = "points",
               .type = ParameterType::integer,
               .unit = "samples",
               .minimum = 1.0,
               .maximum = most_median_points,
               .required = true,
               .help = "How many samples are looked at, the newest included."}}},
            make_median,
            nullptr};
}

}  // namespace halflsb
