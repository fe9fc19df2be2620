// Answers questions about the stimuli room, one a line on standard input, one answer a line, for
// stimuli_test.py. Doubles travel as hexadecimal, so nothing is lost on the way.
//
//   codes SHAPE FORMAT ROUNDING RATE_HZ FIRST COUNT NAME=VALUE...   the codes
//   ratios SHAPE RATE_HZ FIRST COUNT NAME=VALUE...                  the ratios before quantising
//   philox C0 C1 C2 C3 K0 K1                                        four words, all hexadecimal
//   sine HIGH LOW | exp2 HIGH LOW                                   of a 128-bit fraction in two words
//   log X | quantile P                                              of a double
//   npy TYPE COUNT                                                  our header, hexadecimal
//   parse BYTES                                                     "TYPE COUNT OFFSET" or the error
#include <cinttypes>
#include <cstdio>
#include <cstdlib>
#include <iostream>
#include <sstream>
#include <string>

#include "stimuli/exact_math.hpp"
#include "stimuli/inverse_normal.hpp"
#include "stimuli/npy.hpp"
#include "stimuli/philox.hpp"
#include "stimuli/stimulus.hpp"

using namespace halflsb;

namespace {

void set_value(const Recipe& recipe, ParameterValues& values, const std::string& pair) {
    const auto sign = pair.find('=');
    const std::string name = pair.substr(0, sign);
    const std::string text = pair.substr(sign + 1);
    const Parameter* parameter = find_parameter(recipe, name);
    if (parameter == nullptr) {
        values.set(name, 0.0);  // make_stimulus refuses it
    } else if (parameter->type == ParameterType::integer) {
        values.set(name, std::int64_t{std::strtoll(text.c_str(), nullptr, 10)});
    } else if (parameter->type == ParameterType::choice) {
        values.set(name, text);
    } else if (parameter->type == ParameterType::reals) {
        std::vector<double> list;
        std::istringstream items(text);
        for (std::string item; std::getline(items, item, ',');) list.push_back(std::strtod(item.c_str(), nullptr));
        values.set(name, list);
    } else {
        values.set(name, std::strtod(text.c_str(), nullptr));
    }
}

void answer_stimulus(std::istringstream& words, bool as_codes) {
    std::string shape, format_name = "q15", rounding_name = "half-up", rate;
    std::int64_t first = 0;
    std::size_t count = 0;
    words >> shape;
    if (as_codes) words >> format_name >> rounding_name;
    words >> rate >> first >> count;
    const auto format = sample_format(format_name);
    const auto rounding = rounding_from(rounding_name);
    const Recipe* recipe = find_recipe(stimulus_recipes(), shape);
    if (!format || !rounding || recipe == nullptr) {
        std::puts("unknown word");
        return;
    }
    ParameterValues values;
    for (std::string pair; words >> pair;) set_value(*recipe, values, pair);
    const auto stimulus = make_stimulus(shape, values, {std::strtod(rate.c_str(), nullptr), *format});
    if (!stimulus) {
        std::puts(to_text(stimulus.error()).c_str());
        return;
    }
    if (as_codes) {
        std::vector<Code> codes(count);
        fill_codes(**stimulus, *format, *rounding, first, codes);
        for (const Code code : codes) std::printf("%" PRId32 " ", code);
    } else {
        std::vector<double> ratios(count);
        (*stimulus)->fill(first, ratios);
        for (const double ratio : ratios) std::printf("%a ", ratio);
    }
    std::puts("");
}

Uint128 read_fraction(std::istringstream& words) {
    std::uint64_t high = 0, low = 0;
    words >> std::hex >> high >> low;
    return Uint128{high} << 64 | low;
}

void answer(const std::string& line) {
    std::istringstream words(line);
    std::string verb, text;
    words >> verb;
    if (verb == "codes" || verb == "ratios") {
        answer_stimulus(words, verb == "codes");
    } else if (verb == "philox") {
        PhiloxCounter counter{};
        PhiloxKey key{};
        words >> std::hex;
        for (auto& word : counter) words >> word;
        for (auto& word : key) words >> word;
        const auto result = philox4x32_10(counter, key);
        std::printf("%08x %08x %08x %08x\n", result[0], result[1], result[2], result[3]);
    } else if (verb == "sine") {
        std::printf("%a\n", sine_of_turns(read_fraction(words)));
    } else if (verb == "exp2") {
        const Uint128 power = exp2_of_fraction(read_fraction(words));
        std::printf("%016" PRIx64 "%016" PRIx64 "\n", static_cast<std::uint64_t>(power >> 64),
                    static_cast<std::uint64_t>(power));
    } else if (verb == "log" || verb == "quantile") {
        words >> text;
        const double x = std::strtod(text.c_str(), nullptr);
        std::printf("%a\n", verb == "log" ? natural_log(x) : normal_quantile_of_upper_tail(x));
    } else if (verb == "npy") {
        std::int64_t count = 0;
        words >> text >> count;
        for (const NpyType type : {NpyType::int16, NpyType::int32, NpyType::float32, NpyType::float64}) {
            if (text != descriptor_of(type)) continue;
            for (const std::byte b : npy_header(type, count)) std::printf("%02x", std::to_integer<unsigned>(b));
        }
        std::puts("");
    } else if (verb == "parse") {
        words >> text;
        std::vector<std::byte> bytes;
        for (std::size_t i = 0; i + 1 < text.size(); i += 2) {
            bytes.push_back(static_cast<std::byte>(std::strtoul(text.substr(i, 2).c_str(), nullptr, 16)));
        }
        const auto header = parse_npy_header(bytes);
        if (header) {
            std::printf("%s %" PRId64 " %zu\n", std::string(descriptor_of(header->type)).c_str(), header->count,
                        header->data_offset);
        } else {
            std::printf("%s: %s\n", header.error().place.c_str(), header.error().problem.c_str());
        }
    } else {
        std::puts("unknown verb");
    }
}

}  // namespace

int main() {
    for (std::string line; std::getline(std::cin, line);) answer(line);
    return 0;
}
