// One table per stimulus, filter or rule: the name, type, unit, range, default and help of each of
// its parameters. The plan reader, its messages, --help and the reference in docs all walk these
// tables, so a word exists in one place only.
#pragma once

#include <cstdint>
#include <limits>
#include <map>
#include <optional>
#include <string>
#include <string_view>
#include <variant>
#include <vector>

namespace halflsb {

enum class ParameterType {
    integer,   ///< a whole number
    real,      ///< a finite number; a whole number is taken too
    text,      ///< a string
    choice,    ///< a string out of `choices`
    reals,     ///< an array of finite numbers, not empty
    sections,  ///< an array of arrays of finite numbers
    bands,     ///< an array of tables {from_hz, to_hz, min_db, max_db}; see rule.hpp
    file,      ///< a path under the plan's root; the reader hands on the file's numbers as `reals`
};

inline constexpr double no_limit = std::numeric_limits<double>::infinity();

/// One word of the plan. Ranges are inclusive and hold for each element of an array.
struct Parameter {
    std::string_view name = {};  ///< as written in the plan, its unit at the end
    ParameterType type = ParameterType::real;
    std::string_view unit = {};  ///< for messages and docs: "Hz", "samples", "dB", "LSB", "of full scale", ""
    double minimum = -no_limit;
    double maximum = no_limit;
    bool required = false;
    std::optional<double> default_value = {};    ///< of a number that may be left out
    std::vector<std::string_view> choices = {};  ///< of a choice, the first is the default unless required
    std::string_view help = {};                  ///< one sentence
};

/// A stimulus shape, filter kind or rule kind with its parameters, in the order docs show them.
struct Recipe {
    std::string_view name = {};
    std::string_view help = {};
    std::vector<Parameter> parameters = {};
};

/// What a plan gave for one parameter.
using ParameterValue =
    std::variant<std::int64_t, double, std::string, std::vector<double>, std::vector<std::vector<double>>>;

/// What a plan gave for one recipe: types and ranges of the table already hold, defaults are not
/// yet filled in.
class ParameterValues {
public:
    void set(std::string name, ParameterValue value);
    bool has(std::string_view name) const;
    /// The number given, or the recipe's default; nullopt when there is neither.
    std::optional<double> number(const Recipe& recipe, std::string_view name) const;
    std::optional<std::int64_t> integer(const Recipe& recipe, std::string_view name) const;
    std::optional<std::string> text(const Recipe& recipe, std::string_view name) const;
    std::vector<double> numbers(std::string_view name) const;
    std::vector<std::vector<double>> rows(std::string_view name) const;
    const std::map<std::string, ParameterValue, std::less<>>& all() const { return values_; }

private:
    std::map<std::string, ParameterValue, std::less<>> values_;
};

/// The recipe of that name, or nullptr.
const Recipe* find_recipe(const std::vector<Recipe>& recipes, std::string_view name);
/// The parameter of that name in a recipe, or nullptr.
const Parameter* find_parameter(const Recipe& recipe, std::string_view name);

}  // namespace halflsb
