// Short ways to make a stimulus and to read it.
#pragma once

#include <catch2/catch.hpp>
#include <initializer_list>
#include <memory>
#include <string>
#include <utility>
#include <vector>

#include "stimuli/stimulus.hpp"

namespace halflsb {

using Given = std::initializer_list<std::pair<const char*, ParameterValue>>;

inline SampleFormat format_named(std::string_view name) { return *sample_format(name); }

inline ParameterValues values_of(Given given) {
    ParameterValues values;
    for (const auto& [name, value] : given) values.set(name, value);
    return values;
}

inline Outcome<std::unique_ptr<const Stimulus>> try_make(std::string_view shape, Given given, double rate_hz = 48000.0,
                                                         std::string_view format = "q15",
                                                         std::optional<double> full_scale_unit = {}) {
    StimulusContext context{rate_hz, format_named(format)};
    context.full_scale_unit = full_scale_unit;
    return make_stimulus(shape, values_of(given), context);
}

/// For `parts` and `add`.
inline StimulusWords words(std::string shape, Given given) { return {std::move(shape), values_of(given)}; }
inline ParameterValue list(std::vector<StimulusWords> stimuli) {
    return std::make_shared<const std::vector<StimulusWords>>(std::move(stimuli));
}

inline std::unique_ptr<const Stimulus> made(std::string_view shape, Given given, double rate_hz = 48000.0,
                                            std::string_view format = "q15",
                                            std::optional<double> full_scale_unit = {}) {
    auto outcome = try_make(shape, given, rate_hz, format, full_scale_unit);
    if (!outcome) FAIL(to_text(outcome.error()));
    return std::move(outcome).value();
}

/// The whole text of a refusal, or "accepted".
inline std::string refusal(std::string_view shape, Given given, double rate_hz = 48000.0,
                           std::string_view format = "q15", std::optional<double> full_scale_unit = {}) {
    const auto outcome = try_make(shape, given, rate_hz, format, full_scale_unit);
    if (outcome) return "accepted";
    CHECK(outcome.error().kind == ErrorKind::input);
    return to_text(outcome.error());
}

inline std::vector<double> ratios_of(const Stimulus& stimulus, std::int64_t first_index, std::size_t count) {
    std::vector<double> ratios(count, 99.0);
    stimulus.fill(first_index, ratios);
    return ratios;
}

inline std::vector<Code> codes_of(const Stimulus& stimulus, std::string_view format, std::int64_t first_index,
                                  std::size_t count, Rounding rounding = Rounding::half_up) {
    std::vector<Code> codes(count, 99);
    fill_codes(stimulus, format_named(format), rounding, first_index, codes);
    return codes;
}

}  // namespace halflsb
