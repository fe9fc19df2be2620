// [signal] of a plan.
#include "runner/config/plan_reader.hpp"
#include "runner/config/plan_words.hpp"
#include "stimuli/number_text.hpp"

namespace halflsb {

namespace {

void refuse_zero(TableReader& reader, const Recipe& recipe, const ParameterValues& values, std::string_view name) {
    if (values.number(recipe, name) == 0.0) {
        reader.refuse(reader.place_of(name), std::string(name) + " is 0",
                      "give a number other than 0, or leave it out");
    }
}

/// Between kinds of value the plan must say how values go from one to the other; within one a value is a value.
void check_kinds(TableReader& reader, const Signal& signal) {
    const bool given = reader.entry("output_per_input") != nullptr;  // be it wrong: that was told
    const bool is_same = value_kind(signal.input) == value_kind(signal.output);
    const std::string pair = std::string(signal.input.name) + " in and " + std::string(signal.output.name) + " out";
    if (!is_same && !given) {
        reader.refuse(
            reader.place_of("output"), pair + " are of different kinds, so nothing says what gain 1 is",
            "add output_per_input: the value of the output format that stands for the value 1 of the input format");
    }
    if (is_same && given) {
        reader.refuse(reader.place_of("output_per_input"),
                      "output_per_input has no meaning with " + pair + ", values of one kind",
                      "leave it out; a gain belongs in the filter");
    }
}

/// The format of "input" or "output" in its layout, or nullopt after a report.
std::optional<SampleFormat> read_format(TableReader& reader, const ParameterValues& values, const std::string& side) {
    const Recipe& recipe = signal_recipe();
    if (!values.has(side)) return std::nullopt;
    const auto format = sample_format(*values.text(recipe, side));
    const std::string justification = *values.text(recipe, side + "_justification");
    auto laid_out =
        with_layout(*format,
                    justification == "left"     ? Justification::left
                    : justification == "packed" ? Justification::packed
                                                : Justification::right,
                    values.text(recipe, side + "_byte_order") == "big" ? ByteOrder::big : ByteOrder::little);
    if (laid_out) return *laid_out;
    Error error = laid_out.error();
    error.place = side + "_" + error.place;
    reader.refuse(error);
    return std::nullopt;
}

/// full_scale_unit serves for the input too where it must mean the same: one unit, one kind of value, one full scale.
void read_units(const ParameterValues& values, Signal& signal) {
    const Recipe& recipe = signal_recipe();
    signal.unit = values.text(recipe, "unit").value_or("");
    signal.full_scale_unit = values.number(recipe, "full_scale_unit");
    signal.input_unit = values.text(recipe, "input_unit").value_or(signal.unit);
    signal.input_full_scale_unit = values.number(recipe, "input_full_scale_unit");
    const bool is_alike = signal.input_unit == signal.unit && value_kind(signal.input) == value_kind(signal.output) &&
                          full_scale_value(signal.input) == full_scale_value(signal.output);
    if (!signal.input_full_scale_unit && is_alike) signal.input_full_scale_unit = signal.full_scale_unit;
}

}  // namespace

std::optional<Signal> read_signal(ReadContext& context, TableReader& top) {
    const TomlValue* table = top.table("signal", true);
    if (table == nullptr) return std::nullopt;
    TableReader reader(context, *table, "[signal]", &top);
    const Recipe& recipe = signal_recipe();
    const ParameterValues values = reader.parameters(recipe);
    reader.refuse_unknown_keys();
    refuse_zero(reader, recipe, values, "full_scale_unit");
    refuse_zero(reader, recipe, values, "input_full_scale_unit");
    refuse_zero(reader, recipe, values, "output_per_input");

    Signal signal;
    const auto input = read_format(reader, values, "input");
    const auto output = read_format(reader, values, "output");
    if (input && output) {
        signal.input = *input;
        signal.output = *output;
        check_kinds(reader, signal);
    }
    if (!reader.is_clean()) return std::nullopt;
    signal.rate_hz = *values.number(recipe, "rate_hz");
    signal.channels = static_cast<int>(*values.integer(recipe, "channels"));
    signal.output_per_input = values.number(recipe, "output_per_input").value_or(1.0);
    signal.filter = values.text(recipe, "filter").value_or("");
    read_units(values, signal);
    signal.quantise = *rounding_from(*values.text(recipe, "quantise"));
    return signal;
}

}  // namespace halflsb
