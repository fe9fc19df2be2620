// Answers questions about the stimuli room, one a line on standard input, one answer a line, for
// stimuli_test.py. Doubles travel as hexadecimal, so nothing is lost on the way.
//
//   codes SHAPE FORMAT ROUNDING RATE_HZ FIRST COUNT NAME=VALUE...   the codes
//   ratios SHAPE RATE_HZ FIRST COUNT NAME=VALUE...                  the ratios before quantising
//       NAME=VALUE may be  full_scale_unit=NUMBER     what full scale means in the unit
//                          file=1,2,3/0.5,1,2         the columns of a file
//                          parts=( SHAPE NAME=VALUE... ; SHAPE NAME=VALUE... )
//   bytes FORMAT JUSTIFICATION ORDER CODE...                        the words on the wire, hexadecimal
//   read FORMAT JUSTIFICATION ORDER BYTES                           their codes
//   value FORMAT CODE...                                            their values
//   code FORMAT ROUNDING VALUE...                                   the codes of values
//   philox C0 C1 C2 C3 K0 K1                                        four words, all hexadecimal
//   sine HIGH LOW | exp2 HIGH LOW                                   of a 128-bit fraction in two words
//   log X | quantile P                                              of a double
//   npy TYPE COUNT CHANNELS                                         our header, hexadecimal
//   parse BYTES                                                     "TYPE COUNT CHANNELS OFFSET" or the error
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

std::vector<double> numbers_of(const std::string& text) {
    std::vector<double> list;
    std::istringstream items(text);
    for (std::string item; std::getline(items, item, ',');) list.push_back(std::strtod(item.c_str(), nullptr));
    return list;
}

std::shared_ptr<const SignalFile> file_of(const std::string& text) {
    SignalFile file;
    file.path = "asked.csv";
    file.whole_numbers = text.find('.') == std::string::npos;
    std::istringstream columns(text);
    for (std::string column; std::getline(columns, column, '/');) file.columns.push_back(numbers_of(column));
    return std::make_shared<const SignalFile>(std::move(file));
}

void set_value(const Recipe& recipe, ParameterValues& values, const std::string& pair) {
    const auto sign = pair.find('=');
    const std::string name = pair.substr(0, sign);
    const std::string text = pair.substr(sign + 1);
    const Parameter* parameter = find_parameter(recipe, name);
    if (parameter == nullptr) {
        values.set(name, 0.0);  // make_stimulus refuses it
    } else if (parameter->type == ParameterType::integer) {
        values.set(name, std::int64_t{std::strtoll(text.c_str(), nullptr, 10)});
    } else if (parameter->type == ParameterType::choice || parameter->type == ParameterType::text) {
        values.set(name, text);
    } else if (parameter->type == ParameterType::signal_file) {
        values.set(name, file_of(text));
    } else if (parameter->type == ParameterType::reals) {
        values.set(name, numbers_of(text));
    } else {
        values.set(name, std::strtod(text.c_str(), nullptr));
    }
}

StimulusWords read_stimulus(std::istringstream& words, const std::string& shape, StimulusContext& context,
                            std::string& stopped_at);

/// Up to the closing parenthesis.
std::vector<StimulusWords> read_list(std::istringstream& words, StimulusContext& context) {
    std::vector<StimulusWords> list;
    std::string shape, stopped_at = ";";
    while (stopped_at == ";" && words >> shape) list.push_back(read_stimulus(words, shape, context, stopped_at));
    return list;
}

/// Up to the end of the line, a semicolon or a closing parenthesis.
StimulusWords read_stimulus(std::istringstream& words, const std::string& shape, StimulusContext& context,
                            std::string& stopped_at) {
    StimulusWords read;
    read.shape = shape;
    stopped_at.clear();
    const Recipe* recipe = find_recipe(stimulus_recipes(), shape);
    for (std::string word; recipe != nullptr && words >> word;) {
        if (word == ";" || word == ")") {
            stopped_at = word;
            break;
        }
        if (word.ends_with("=(")) {
            read.values.set(word.substr(0, word.size() - 2),
                            std::make_shared<const std::vector<StimulusWords>>(read_list(words, context)));
        } else if (word.starts_with("full_scale_unit=")) {
            context.full_scale_unit = std::strtod(word.c_str() + word.find('=') + 1, nullptr);
        } else {
            set_value(*recipe, read.values, word);
        }
    }
    return read;
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
    StimulusContext context{std::strtod(rate.c_str(), nullptr), *format};
    std::string stopped_at;
    const StimulusWords read = read_stimulus(words, shape, context, stopped_at);
    const auto stimulus = make_stimulus(shape, read.values, context);
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

std::vector<std::byte> bytes_of_hex(const std::string& text) {
    std::vector<std::byte> bytes;
    for (std::size_t i = 0; i + 1 < text.size(); i += 2) {
        bytes.push_back(static_cast<std::byte>(std::strtoul(text.substr(i, 2).c_str(), nullptr, 16)));
    }
    return bytes;
}

void answer_format(std::istringstream& words, const std::string& verb) {
    std::string name, second, third;
    words >> name;
    auto format = sample_format(name);
    if (format && (verb == "bytes" || verb == "read")) {
        words >> second >> third;
        const auto justification = second == "left"     ? Justification::left
                                   : second == "packed" ? Justification::packed
                                                        : Justification::right;
        const auto laid_out = with_layout(*format, justification, third == "big" ? ByteOrder::big : ByteOrder::little);
        format = laid_out ? std::optional(*laid_out) : std::nullopt;
    } else if (verb == "code") {
        words >> second;
    }
    if (!format) {
        std::puts("unknown format");
    } else if (verb == "read") {
        words >> second;
        const auto bytes = bytes_of_hex(second);
        std::vector<Code> codes(bytes.size() / format->word_bytes());
        from_wire_bytes(*format, bytes, codes);
        for (const Code code : codes) std::printf("%" PRId32 " ", code);
        std::puts("");
    } else if (verb == "code") {
        for (std::string number; words >> number;) {
            std::printf("%" PRId32 " ", code_of(*format, std::strtod(number.c_str(), nullptr),
                                                rounding_from(second).value_or(Rounding::half_up)));
        }
        std::puts("");
    } else {
        std::vector<Code> codes;
        for (Code code = 0; words >> code;) codes.push_back(code);
        if (verb == "value") {
            for (const Code code : codes) std::printf("%a ", value_of(*format, code));
        } else {
            std::vector<std::byte> bytes(codes.size() * format->word_bytes());
            to_wire_bytes(*format, codes, bytes);
            for (const std::byte b : bytes) std::printf("%02x", std::to_integer<unsigned>(b));
        }
        std::puts("");
    }
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
    } else if (verb == "bytes" || verb == "read" || verb == "value" || verb == "code") {
        answer_format(words, verb);
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
        int channels = 1;
        words >> text >> count >> channels;
        for (const NpyType type : {NpyType::int8, NpyType::uint8, NpyType::uint16, NpyType::int16, NpyType::int32,
                                   NpyType::int64, NpyType::float32, NpyType::float64}) {
            if (text != descriptor_of(type)) continue;
            for (const std::byte b : npy_header(type, count, channels))
                std::printf("%02x", std::to_integer<unsigned>(b));
        }
        std::puts("");
    } else if (verb == "parse") {
        words >> text;
        const auto header = parse_npy_header(bytes_of_hex(text));
        if (header) {
            std::printf("%s %" PRId64 " %" PRId64 " %zu\n", std::string(descriptor_of(header->type)).c_str(),
                        header->count, header->channels, header->data_offset);
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
