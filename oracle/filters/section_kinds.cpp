// Second-order sections by their coefficients.
#include "oracle/filters/filter_kind.hpp"
#include "oracle/filters/stability.hpp"

namespace halflsb {

namespace {

constexpr std::size_t most_sections = 64;
constexpr std::string_view sign_convention = "y[n] = b0 x[n] + b1 x[n-1] + b2 x[n-2] - a1 y[n-1] - a2 y[n-2]";

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

Outcome<FilterDesign> make_cascade(const Recipe&, const ParameterValues& values, const StageContext&) {
    const auto name = one_of(values, {"sections", "sections_file"});
    if (!name) return name.error();
    const auto rows = section_rows(values, *name);
    if (!rows) return rows.error();
    if (rows->empty() || rows->size() > most_sections) {
        return refuse(*name, text_of(rows->size()) + " sections", "give 1 to " + text_of(most_sections) + " sections");
    }
    BiquadCascade cascade;
    for (const auto& row : *rows) {
        const auto section = section_from(row, cascade.sections.size() + 1, *name);
        if (!section) return section.error();
        cascade.sections.push_back(*section);
    }
    FilterStage stage{std::move(cascade), std::nullopt};
    if (auto problem = complaint_about_sections(stage)) {
        return refuse(*name, *problem, remedy_for_sections(std::get<BiquadCascade>(stage.design).sections));
    }
    return std::move(stage.design);
}

std::string quoted(const BiquadSection& s, std::string_view names) {
    return names == "a" ? "a1 = " + text_of(s.a1) + ", a2 = " + text_of(s.a2)
                        : "b0 = " + text_of(s.b0) + ", b1 = " + text_of(s.b1) + ", b2 = " + text_of(s.b2);
}

}  // namespace

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

FilterKind biquad_cascade_kind() {
    return {{"biquad-cascade",
             "Second-order sections one after the other, each y[n] = b0 x[n] + b1 x[n-1] + b2 x[n-2] - a1 y[n-1] - a2 "
             "y[n-2].",
             {coefficients_parameter("sections", ParameterType::sections,
                                     "1 .. 64 sections, each [b0, b1, b2, a1, a2], or [b0, b1, b2, 1, a1, a2]."),
              coefficients_parameter(
                  "sections_file", ParameterType::file,
                  "Instead of sections: a file of them, text, CSV, NPY or the firmware's own C source.")}},
            make_cascade,
            complaint_about_sections};
}

}  // namespace halflsb
