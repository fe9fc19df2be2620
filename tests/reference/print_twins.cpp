// The twins of oracle/arithmetic for the reference check twins_test.py: descriptions in the words of a plan on standard
// input, codes on standard output.
//
//   input q15                                        formats and output_per_input open a case
//   output i16
//   output_per_input 0x1p+0
//   stage fir                                        then its words, and those of its arithmetic
//   filter taps reals 0x1p-1 0x1.8p-2
//   arithmetic rounding text half-up
//   codes 1 -2 3                                     the end of the case
//
// Each case is answered by a line: "codes" and the outputs, or "refused stage N, WORD: problem; remedy". `kinds` in
// place of a case is answered by the kinds of filter that can be made.
#include <cstdlib>
#include <iostream>
#include <sstream>
#include <string>

#include "oracle/arithmetic/twin.hpp"

namespace {

using namespace halflsb;

struct Stage {
    std::string kind;
    ParameterValues words, arithmetic;
};

struct Case {
    std::optional<SampleFormat> input, output;
    double output_per_input = 1.0;
    std::vector<Stage> stages;
};

double real(const std::string& text) { return std::strtod(text.c_str(), nullptr); }

std::vector<double> reals(std::istream& rest) {
    std::vector<double> list;
    for (std::string text; rest >> text;) list.push_back(real(text));
    return list;
}

ParameterValue value(const std::string& type, std::istream& rest) {
    if (type == "reals") return reals(rest);
    if (type == "sections") {
        const std::vector<double> numbers = reals(rest);
        std::vector<std::vector<double>> rows;
        for (std::size_t i = 0; i + 5 <= numbers.size(); i += 5) {
            rows.emplace_back(numbers.begin() + static_cast<std::ptrdiff_t>(i),
                              numbers.begin() + static_cast<std::ptrdiff_t>(i + 5));
        }
        return rows;
    }
    std::string text;
    rest >> text;
    if (type == "whole") return static_cast<std::int64_t>(std::stoll(text));
    if (type == "real") return real(text);
    return text;
}

std::string refusal(std::size_t stage, const Error& error) {
    return "refused stage " + std::to_string(stage + 1) + ", " + error.place + ": " + error.problem + "; " +
           error.remedy;
}

// What a twin must not do: return other codes when its input comes in other blocks, or after a reset.
std::vector<Code> codes_in_blocks(Twin& twin, const std::vector<Code>& in, std::size_t largest) {
    std::vector<Code> out;
    twin.reset();
    std::size_t size = 1;
    for (std::size_t at = 0; at < in.size(); at += size, size = size % largest + 1) {
        size = std::min(size, in.size() - at);
        std::vector<Code> part(twin.outputs_for(size));
        twin.process(std::span(in).subspan(at, size), part);
        out.insert(out.end(), part.begin(), part.end());
    }
    return out;
}

std::string answer(const Case& given, const std::vector<Code>& in) {
    FilterChain chain;
    for (const Stage& each : given.stages) {
        const auto arithmetic = make_arithmetic(each.arithmetic);
        if (!arithmetic) return refusal(chain.size(), arithmetic.error());
        StageContext context;
        context.arithmetic = *arithmetic;
        auto stage = make_stage(each.kind, each.words, context);
        if (!stage) return refusal(chain.size(), stage.error());
        if (const auto error = misplaced_word(*stage, each.arithmetic)) return refusal(chain.size(), *error);
        chain.push_back(std::move(*stage));
    }
    const auto [described, problem] = describe(chain, *given.input, *given.output, given.output_per_input);
    if (problem) return refusal(problem->stage, problem->error);
    if (described->missing) return refusal(described->missing->stage, described->missing->error);
    const auto twin = make_twin(*described);
    if (!twin) return "refused: no twin of a complete description";
    const std::vector<Code> out = codes_in_blocks(*twin, in, 64);
    if (codes_in_blocks(*twin, in, in.size()) != out) return "refused: other codes in other blocks";
    std::string line = "codes";
    for (const Code code : out) line += " " + std::to_string(code);
    return line;
}

}  // namespace

int main() {
    Case given;
    for (std::string line; std::getline(std::cin, line);) {
        std::istringstream rest(line);
        std::string word, name, type;
        rest >> word;
        if (word == "kinds") {
            for (const Recipe& recipe : filter_recipes()) std::cout << recipe.name << ' ';
            std::cout << '\n';
        } else if (word == "codes") {
            std::vector<Code> codes;
            for (Code code; rest >> code;) codes.push_back(code);
            std::cout << answer(given, codes) << '\n';
            given = {};
        } else if (word == "filter" || word == "arithmetic") {
            rest >> name >> type;
            Stage& stage = given.stages.back();
            (word == "filter" ? stage.words : stage.arithmetic).set(name, value(type, rest));
        } else {
            rest >> name;
            if (word == "stage") given.stages.push_back({name, {}, {}});
            if (word == "input") given.input = sample_format(name);
            if (word == "output") given.output = sample_format(name);
            if (word == "output_per_input") given.output_per_input = real(name);
        }
    }
}
