// One table per stimulus, filter or rule: the name, type, unit, range, default and help of each of
// its parameters. The plan reader, its messages, --help and the reference in docs all walk these
// tables, so a word exists in one place only.
#pragma once

#include <cstdint>
#include <limits>
#include <map>
#include <memory>
#include <optional>
#include <string>
#include <string_view>
#include <variant>
#include <vector>

namespace halflsb {

enum class ParameterType {
    integer,      ///< a whole number
    real,         ///< a finite number; a whole number is taken too
    text,         ///< a string
    choice,       ///< a string out of `choices`
    reals,        ///< an array of finite numbers, not empty
    sections,     ///< an array of arrays of finite numbers
    bands,        ///< an array of tables {from_hz, to_hz, min_db, max_db}; see rule.hpp
    file,         ///< a path under the plan's root; the reader hands on the file's numbers as `reals`
    integers,     ///< an array of whole numbers, not empty; handed on as `reals`
    signal_file,  ///< a path of a CSV or NPY file under the plan's root; handed on as a SignalFile
    stimuli,      ///< an array of tables, each a stimulus with its shape
    mask_file,    ///< a path of a CSV file; a SignalFile of from_hz, to_hz, min_db or -inf, max_db or +inf
};

inline constexpr double no_limit = std::numeric_limits<double>::infinity();

/// One word of the plan. Ranges are inclusive and hold for each element of an array.
struct Parameter {
    std::string_view name = {};  ///< as written in the plan, its unit at the end
    ParameterType type = ParameterType::real;
    std::string_view unit = {};  ///< for messages and docs: "Hz", "samples", "dB", "LSB", "of full scale", ""
    double minimum = -no_limit;
    double maximum = no_limit;
    bool above_minimum = false;  ///< the minimum itself is not taken: a level of 0 would be silence
    bool required = false;
    std::optional<double> default_value = {};  ///< of a number that may be left out
    /// Of a choice, the first is the default unless required; of a real number, words that may stand in its place.
    std::vector<std::string_view> choices = {};
    std::string_view help = {};    ///< one sentence
    bool optional_choice = false;  ///< a choice without a default: left out, it says nothing
};

/// A stimulus shape, filter kind or rule kind with its parameters, in the order docs show them.
struct Recipe {
    std::string_view name = {};
    std::string_view help = {};
    std::vector<Parameter> parameters = {};
};

/// Samples from a file, as the file held them: one column of an NPY, or those of a CSV.
struct SignalFile {
    std::string path;                          ///< as the plan wrote it
    std::vector<std::string> names;            ///< of the columns; "" where the file gives none
    std::vector<std::vector<double>> columns;  ///< all of one length, none empty
    bool whole_numbers = false;                ///< an integer NPY, or a CSV without any fraction
    std::optional<double> rate_hz;             ///< where the file states it
    std::size_t time_column = 0;  ///< which one of the file, from 1, held the times and is not here; 0: none
};

struct StimulusWords;

/// What a plan gave for one parameter.
using ParameterValue =
    std::variant<std::int64_t, double, std::string, std::vector<double>, std::vector<std::vector<double>>,
                 std::shared_ptr<const SignalFile>, std::shared_ptr<const std::vector<StimulusWords>>>;

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
    std::shared_ptr<const SignalFile> signal_file(std::string_view name) const;
    std::vector<StimulusWords> stimuli(std::string_view name) const;
    const std::map<std::string, ParameterValue, std::less<>>& all() const { return values_; }

private:
    std::map<std::string, ParameterValue, std::less<>> values_;
};

/// A stimulus inside another one.
struct StimulusWords {
    std::string shape;
    ParameterValues values;
};

/// The recipe of that name, or nullptr.
const Recipe* find_recipe(const std::vector<Recipe>& recipes, std::string_view name);
/// The parameter of that name in a recipe, or nullptr.
const Parameter* find_parameter(const Recipe& recipe, std::string_view name);

}  // namespace halflsb
