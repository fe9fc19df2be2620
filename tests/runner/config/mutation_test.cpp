// Spoiled plans and rigs: whatever is done to the bytes, the reader answers, and each answer has a place,
// a line, a caret and a remedy.
#include <array>
#include <random>
#include <regex>

#include "tests/support/config_texts.hpp"
#include "tests/support/rounds.hpp"

using namespace halflsb;

namespace {

std::string spoiled(std::string text, std::mt19937& random) {
    const auto below = [&](std::size_t n) { return n == 0 ? 0 : static_cast<std::size_t>(random()) % n; };
    const std::size_t edits = 1 + below(4);
    for (std::size_t i = 0; i < edits && !text.empty(); ++i) {
        const std::size_t at = below(text.size()), length = 1 + below(std::min<std::size_t>(text.size() - at, 40));
        switch (below(6)) {
            case 0:
                text.erase(at, length);
                break;
            case 1:
                text.insert(at, text.substr(below(text.size()), length));
                break;
            case 2:
                text[at] = static_cast<char>(below(256));
                break;
            case 3:
                text.insert(at, 1, "[]{}=\"'.,#\n\r\t-+e0n"[below(18)]);
                break;
            case 4: {
                // A whole line away, or twice.
                const std::size_t begin = text.rfind('\n', at) == std::string::npos ? 0 : text.rfind('\n', at) + 1;
                const std::size_t end =
                    text.find('\n', begin) == std::string::npos ? text.size() : text.find('\n', begin) + 1;
                const std::string line = text.substr(begin, end - begin);
                if (below(2) == 0) {
                    text.erase(begin, line.size());
                } else {
                    text.insert(below(2) == 0 ? begin : 0, line);
                }
                break;
            }
            default: {
                constexpr std::array<const char*, 10> values = {
                    "nan", "-inf", "1e308", "-1", "0", "9223372036854775807", "true", "\"\"", "[]", "{}"};
                const std::size_t equals = text.find('=', at);
                if (equals == std::string::npos) break;
                const std::size_t end = text.find('\n', equals);
                text.replace(equals + 1, end == std::string::npos ? std::string::npos : end - equals - 1,
                             values[below(values.size())]);
            }
        }
    }
    return text;
}

bool is_well_formed(const std::string& message, const std::string& file) {
    const std::regex opening("^" + file + ":[1-9][0-9]*:[1-9][0-9]*: [^\n]+\n    [^\n]*\n    ( *)\\^\n  [^\n]+$");
    std::smatch parts;
    return std::regex_match(message, parts, opening) &&
           static_cast<std::size_t>(parts[1].length()) <= shown_line_columns;
}

}  // namespace

TEST_CASE("mutations: no spoiled plan or rig crashes the readers, and every message is whole", "[config]") {
    // Fixed, so that a run can be repeated; a failure names seed and round.
    constexpr std::mt19937::result_type seed = 20261201;
    const int rounds = test::rounds_of(1500);
    std::mt19937 random(seed);
    int good = 0;
    for (int round = 0; round < rounds; ++round) {
        INFO("seed " << seed << ", round " << round);
        const bool is_plan = round % 3 != 0;
        const std::string text = spoiled(
            is_plan ? good_plan : good_rig + "[commands]\nbefore_run = [[\"./flash.sh\", \"{image}\"]]\n", random);
        FakeFiles files;
        files.contents["f.toml"] = text;
        ReadProblems problems;
        if (is_plan) {
            const auto read = read_plan("f.toml", files);
            if (const auto* found = std::get_if<ReadProblems>(&read)) problems = *found;
        } else {
            const auto read = read_rig("f.toml", files);
            if (const auto* found = std::get_if<ReadProblems>(&read)) problems = *found;
        }
        if (problems.texts.empty()) ++good;
        for (const std::string& message : problems.texts) {
            INFO(text);
            INFO(message);
            REQUIRE(is_well_formed(message, "f\\.toml"));
        }
    }
    // Most spoil something; some only a comment or a digit.
    CHECK(good > 0);
    CHECK(good < rounds / 2);
}
