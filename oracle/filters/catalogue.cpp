// The words of [[filter]] and the way from them to a stage.
#include <array>
#include <charconv>
#include <cmath>
#include <functional>
#include <optional>
#include <string>

#include "oracle/filters/coefficients.hpp"
#include "oracle/filters/filter.hpp"
#include "oracle/filters/stability.hpp"

namespace halflsb {

namespace {

constexpr std::size_t most_points = 65536;
constexpr std::size_t most_taps = 65536;
constexpr std::size_t most_sections = 64;
constexpr double most_fraction_bits = 62.0;
constexpr double largest_coefficient = 1e9;
constexpr std::string_view fraction_bits_name = "coefficient_fraction_bits";
constexpr std::string_view sign_convention = "y[n] = b0 x[n] + b1 x[n-1] + b2 x[n-2] - a1 y[n-1] - a2 y[n-2]";

// The shortest text that reads back as the same number.
std::string text_of(double number) {
    std::array<char, 32> text{};
    const auto end = std::to_chars(text.data(), text.data() + text.size(), number).ptr;
    return std::string(text.data(), end);
}

std::string text_of_radius(double radius) {
    std::array<char, 32> text{};
    const auto end = std::to_chars(text.data(), text.data() + text.size(), radius, std::chars_format::general, 9).ptr;
    return std::string(text.data(), end);
}

std::string text_of(std::size_t number) { return std::to_string(number); }

Error refuse(std::string_view place, std::string problem, std::string remedy) {
    return Error{ErrorKind::input, std::string(place), std::move(problem), std::move(remedy)};
}

const Recipe& recipe_of(std::string_view kind) { return *find_recipe(filter_recipes(), kind); }

std::optional<Error> unusable_number(std::string_view place, double number) {
    if (std::fabs(number) <= largest_coefficient) return std::nullopt;
    return refuse(
        place, text_of(number) + " is no coefficient",
        "each number must lie within -" + text_of(largest_coefficient) + " .. " + text_of(largest_coefficient));
}

// Exactly one of the two ways to give the coefficients; the name of the one given.
Outcome<std::string> one_of(const ParameterValues& values, std::string_view inline_name, std::string_view file_name) {
    const bool has_inline = values.has(inline_name), has_file = values.has(file_name);
    const std::string either = std::string(inline_name) + " or " + std::string(file_name);
    if (has_inline && has_file) return refuse(file_name, either + ": both are given", "keep one of them");
    if (!has_inline && !has_file) return refuse(inline_name, either + " is missing", "give one of them");
    return std::string(has_inline ? inline_name : file_name);
}

Outcome<std::optional<int>> fraction_bits_of(const Recipe& recipe, const ParameterValues& values) {
    if (!values.has(fraction_bits_name)) return std::optional<int>();
    const auto bits = values.integer(recipe, fraction_bits_name);
    if (!bits || *bits < 0 || *bits > static_cast<std::int64_t>(most_fraction_bits)) {
        return refuse(fraction_bits_name, bits ? std::to_string(*bits) + " is out of range" : "not a whole number",
                      "give a whole number within 0 .. 62");
    }
    return std::optional<int>(static_cast<int>(*bits));
}

// The first complaint about the coefficients as they are used; none when they are fine.
using Complaint = std::function<std::optional<std::string>(const FilterStage&)>;

// The same complaint after rounding is about the word length, and has a remedy: more bits.
Outcome<FilterStage> checked_after_rounding(FilterStage stage, const Complaint& complaint) {
    if (!stage.coefficient_fraction_bits) return stage;
    const auto problem = complaint(with_rounded_coefficients(stage));
    if (!problem) return stage;
    // Finer is not always better by one step (a pole can round inwards, then outwards), so the advice is
    // the first number from which on all do.
    const int given = *stage.coefficient_fraction_bits, most = static_cast<int>(most_fraction_bits);
    int enough = most + 1;
    for (FilterStage finer = stage; enough > given + 1; --enough) {
        finer.coefficient_fraction_bits = enough - 1;
        if (complaint(with_rounded_coefficients(finer))) break;
    }
    return refuse(fraction_bits_name, "with " + std::to_string(given) + " fraction bits " + *problem,
                  enough <= most ? "store the coefficients with " + std::to_string(enough) + " fraction bits or more"
                                 : "no number of fraction bits up to 62 is enough: scale the coefficients");
}

std::optional<std::string> complaint_about_taps(const FilterStage& stage) {
    for (const double tap : std::get<Fir>(stage.design).taps) {
        if (tap != 0.0) return std::nullopt;
    }
    return "all taps are 0";
}

std::string quoted(const BiquadSection& s, std::string_view names) {
    return names == "a" ? "a1 = " + text_of(s.a1) + ", a2 = " + text_of(s.a2)
                        : "b0 = " + text_of(s.b0) + ", b1 = " + text_of(s.b1) + ", b2 = " + text_of(s.b2);
}

std::optional<std::string> complaint_about_sections(const FilterStage& stage) {
    const auto& sections = std::get<BiquadCascade>(stage.design).sections;
    for (std::size_t i = 0; i < sections.size(); ++i) {
        const BiquadSection& s = sections[i];
        const std::string which = "section " + text_of(i + 1);
        if (!is_stable(s)) {
            return which + " is unstable: " + quoted(s, "a") + " put a pole at radius " +
                   text_of_radius(pole_radius(s));
        }
        if (s.b0 == 0.0 && s.b1 == 0.0 && s.b2 == 0.0) return which + " passes nothing: " + quoted(s, "b");
    }
    return std::nullopt;
}

std::string remedy_for_sections(const std::vector<BiquadSection>& sections) {
    bool unstable = false, turned_is_stable = true;
    for (const BiquadSection& s : sections) {
        unstable = unstable || !is_stable(s);
        turned_is_stable = turned_is_stable && is_stable({s.b0, s.b1, s.b2, -s.a1, -s.a2});
    }
    if (!unstable) return "at least one of b0, b1, b2 must differ from 0";
    std::string remedy = "poles must lie inside the unit circle, where " + std::string(sign_convention);
    if (turned_is_stable) remedy += "; with the signs of all a1 and a2 turned round the cascade is stable";
    return remedy;
}

Outcome<FilterStage> make_moving_average(const ParameterValues& values) {
    const auto points = values.integer(recipe_of("moving-average"), "points");
    const std::string remedy = "give a whole number within 1 .. " + text_of(most_points);
    if (!points) return refuse("points", values.has("points") ? "not a whole number" : "points is missing", remedy);
    if (*points < 1 || *points > static_cast<std::int64_t>(most_points)) {
        return refuse("points", std::to_string(*points) + " points", remedy);
    }
    return FilterStage{MovingAverage{static_cast<int>(*points)}, std::nullopt};
}

Outcome<FilterStage> make_fir(const ParameterValues& values) {
    const auto name = one_of(values, "taps", "taps_file");
    if (!name) return name.error();
    const auto bits = fraction_bits_of(recipe_of("fir"), values);
    if (!bits) return bits.error();
    FilterStage stage{Fir{values.numbers(*name)}, *bits};
    const auto& taps = std::get<Fir>(stage.design).taps;
    if (taps.empty() || taps.size() > most_taps) {
        return refuse(*name, text_of(taps.size()) + " taps", "give 1 .. " + text_of(most_taps) + " taps");
    }
    for (const double tap : taps) {
        if (auto error = unusable_number(*name, tap)) return *error;
    }
    if (auto problem = complaint_about_taps(stage)) {
        return refuse(*name, *problem, "at least one tap must differ from 0");
    }
    return checked_after_rounding(std::move(stage), complaint_about_taps);
}

// Five numbers b0 b1 b2 a1 a2, or six b0 b1 b2 a0 a1 a2 with a0 = 1 as design programs print them.
Outcome<BiquadSection> section_from(const std::vector<double>& row, std::size_t number, std::string_view place) {
    const std::string which = "section " + text_of(number);
    for (const double c : row) {
        if (auto error = unusable_number(place, c)) return *error;
    }
    if (row.size() == 5) return BiquadSection{row[0], row[1], row[2], row[3], row[4]};
    if (row.size() != 6) {
        return refuse(place, which + " has " + text_of(row.size()) + " numbers",
                      "a section is [b0, b1, b2, a1, a2] or [b0, b1, b2, 1, a1, a2]");
    }
    if (row[3] != 1.0) {
        return refuse(place, which + " has a0 = " + text_of(row[3]),
                      "divide its six numbers by a0, so that a0 = 1, or leave a0 out");
    }
    return BiquadSection{row[0], row[1], row[2], row[4], row[5]};
}

Outcome<std::vector<std::vector<double>>> section_rows(const ParameterValues& values, const std::string& name) {
    if (name == "sections") return values.rows(name);
    const std::vector<double> numbers = values.numbers(name);
    if (numbers.size() % 5 != 0) {
        return refuse(name, text_of(numbers.size()) + " numbers are no whole number of sections",
                      "write five numbers a section: b0, b1, b2, a1, a2 (a0 is 1 and left out)");
    }
    std::vector<std::vector<double>> rows;
    for (auto at = numbers.begin(); at != numbers.end(); at += 5) rows.emplace_back(at, at + 5);
    return rows;
}

Outcome<FilterStage> make_cascade(const ParameterValues& values) {
    const auto name = one_of(values, "sections", "sections_file");
    if (!name) return name.error();
    const auto bits = fraction_bits_of(recipe_of("biquad-cascade"), values);
    if (!bits) return bits.error();
    const auto rows = section_rows(values, *name);
    if (!rows) return rows.error();
    if (rows->empty() || rows->size() > most_sections) {
        return refuse(*name, text_of(rows->size()) + " sections", "give 1 .. " + text_of(most_sections) + " sections");
    }
    BiquadCascade cascade;
    for (const auto& row : *rows) {
        const auto section = section_from(row, cascade.sections.size() + 1, *name);
        if (!section) return section.error();
        cascade.sections.push_back(*section);
    }
    FilterStage stage{std::move(cascade), *bits};
    if (auto problem = complaint_about_sections(stage)) {
        return refuse(*name, *problem, remedy_for_sections(std::get<BiquadCascade>(stage.design).sections));
    }
    return checked_after_rounding(std::move(stage), complaint_about_sections);
}

Parameter fraction_bits_parameter() {
    Parameter bits;
    bits.name = fraction_bits_name;
    bits.type = ParameterType::integer;
    bits.unit = "bits";
    bits.minimum = 0.0;
    bits.maximum = most_fraction_bits;
    bits.help = "The firmware stores each coefficient as a multiple of 2^-this, rounded half away from zero.";
    return bits;
}

Parameter coefficients_parameter(std::string_view name, ParameterType type, std::string_view help) {
    Parameter parameter;
    parameter.name = name;
    parameter.type = type;
    parameter.minimum = -largest_coefficient;
    parameter.maximum = largest_coefficient;
    parameter.help = help;
    return parameter;
}

std::vector<Recipe> written_recipes() {
    Parameter points;
    points.name = "points";
    points.type = ParameterType::integer;
    points.unit = "samples";
    points.minimum = 1.0;
    points.maximum = static_cast<double>(most_points);
    points.required = true;
    points.help = "How many samples are averaged, the newest included.";
    return {
        {"moving-average", "The mean of the last samples: y[n] = (x[n] + ... + x[n-points+1]) / points.", {points}},
        {"fir",
         "A finite impulse response: y[n] = taps[0] x[n] + taps[1] x[n-1] + ...",
         {coefficients_parameter("taps", ParameterType::reals,
                                 "The taps, 1 .. 65536 of them, the one of the newest sample first."),
          coefficients_parameter("taps_file", ParameterType::file,
                                 "Instead of taps: a file with one tap a line, the one of the newest sample first."),
          fraction_bits_parameter()}},
        {"biquad-cascade",
         "Second-order sections one after the other, each y[n] = b0 x[n] + b1 x[n-1] + b2 x[n-2] - a1 y[n-1] - a2 "
         "y[n-2].",
         {coefficients_parameter("sections", ParameterType::sections,
                                 "1 .. 64 sections, each [b0, b1, b2, a1, a2], or [b0, b1, b2, 1, a1, a2]."),
          coefficients_parameter("sections_file", ParameterType::file,
                                 "Instead of sections: a file with one number a line, b0, b1, b2, a1, a2 of each "
                                 "section in turn."),
          fraction_bits_parameter()}},
    };
}

}  // namespace

const std::vector<Recipe>& filter_recipes() {
    static const std::vector<Recipe> recipes = written_recipes();
    return recipes;
}

Outcome<FilterStage> make_stage(std::string_view kind, const ParameterValues& values, const StageContext&) {
    if (kind == "moving-average") return make_moving_average(values);
    if (kind == "fir") return make_fir(values);
    if (kind == "biquad-cascade") return make_cascade(values);
    std::string known;
    for (const Recipe& recipe : filter_recipes()) known += (known.empty() ? "" : ", ") + std::string(recipe.name);
    return refuse("kind", "\"" + std::string(kind) + "\" is no filter kind", "known kinds: " + known);
}

}  // namespace halflsb
