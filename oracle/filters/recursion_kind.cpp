// A recursion by the coefficients of its two polynomials.
#include <algorithm>
#include <cmath>

#include "oracle/filters/filter_kind.hpp"
#include "oracle/filters/stability.hpp"
#include "stimuli/number_text.hpp"

namespace halflsb {

namespace {

constexpr std::size_t most_order = 32;
constexpr std::string_view sign_convention = "y[n] = sum b[k] x[n-k] - sum a[k] y[n-k]";

std::optional<std::string> complaint_about_recursion(const FilterStage& stage) {
    const auto& recursion = std::get<Recursion>(stage.design);
    if (!is_stable(recursion))
        return "the filter is unstable: a puts a pole at radius " + text_of_radius(pole_radius(recursion));
    if (std::all_of(recursion.b.begin(), recursion.b.end(), [](double b) { return b == 0.0; }))
        return "the filter passes nothing: all of b is 0";
    return std::nullopt;
}

std::string remedy_for_poles(Recursion recursion) {
    std::string remedy = "poles must lie inside the unit circle, where " + std::string(sign_convention);
    for (std::size_t k = 1; k < recursion.a.size(); ++k) recursion.a[k] = -recursion.a[k];
    if (is_stable(recursion)) remedy += "; with the signs of all a behind a[0] turned round it is stable";
    return remedy;
}

std::optional<Error> unusable_list(std::string_view name, const std::vector<double>& list) {
    if (list.empty() || list.size() > most_order + 1) {
        return refuse(name, list.empty() ? std::string(name) + " is missing" : text_of(list.size()) + " coefficients",
                      "give 1 to " + text_of(most_order + 1) + " numbers, order " + text_of(most_order) + " at most");
    }
    for (const double number : list) {
        if (auto error = unusable_number(name, number)) return error;
    }
    return std::nullopt;
}

Outcome<FilterDesign> make_recursion(const Recipe&, const ParameterValues& values, const StageContext&) {
    Recursion recursion{values.numbers("b"), values.numbers("a")};
    if (auto error = unusable_list("b", recursion.b)) return *error;
    if (auto error = unusable_list("a", recursion.a)) return *error;
    const double a0 = recursion.a.front();
    if (a0 == 0.0)
        return refuse("a", "a[0] is 0, and everything is divided by it",
                      "begin with the coefficient of y[n], 1 in most tables");
    for (double& b : recursion.b) b /= a0;
    for (double& a : recursion.a) a /= a0;
    const std::string divided = a0 == 1.0 ? "" : ", after division by a[0] = " + text_of(a0);
    for (const std::string_view name : {"b", "a"}) {
        for (const double number : name == "b" ? recursion.b : recursion.a) {
            if (auto error = unusable_number(name, number)) {
                error->problem += divided;
                return *error;
            }
        }
    }
    const FilterStage stage{recursion, std::nullopt};
    if (auto problem = complaint_about_recursion(stage)) {
        const bool is_unstable = !is_stable(recursion);
        return refuse(is_unstable ? "a" : "b", *problem + (is_unstable ? divided : ""),
                      is_unstable ? remedy_for_poles(recursion) : "at least one of b must differ from 0");
    }
    return FilterDesign(std::move(recursion));
}

Parameter polynomial(std::string_view name, std::string_view help) {
    Parameter parameter = coefficients_parameter(name, ParameterType::reals, help);
    parameter.required = true;
    return parameter;
}

}  // namespace

FilterKind iir_kind() {
    return {{"iir",
             "A recursion by its two polynomials, up to order 32: a[0] y[n] = b[0] x[n] + b[1] x[n-1] + ... - a[1] "
             "y[n-1] - a[2] y[n-2] ...",
             {polynomial("b", "The coefficients of the input, 1 .. 33 of them, the newest sample first."),
              polynomial("a",
                         "The coefficients of the output, 1 .. 33 of them, a[0] first; where it is not 1, all of a "
                         "and b are divided by it.")}},
            make_recursion,
            complaint_about_recursion};
}

}  // namespace halflsb
