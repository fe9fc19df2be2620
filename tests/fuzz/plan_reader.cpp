// Whatever a plan holds, its reader answers: a plan that can be used, or whole messages.
#include <algorithm>
#include <array>
#include <cmath>
#include <string>
#include <string_view>

#include "runner/config/plan_file.hpp"
#include "runner/config/resolved_plan.hpp"
#include "tests/fuzz/problem_text.hpp"
#include "tests/support/fake_files.hpp"

using namespace halflsb;

namespace {

/// The reader goes through the stimulus of a written latency rule, which may have 10^10 samples; no fuzzer
/// has the time. Such a plan is left out by its digits.
bool may_take_long(std::string_view text) {
    std::size_t run = 0, longest = 0;
    for (const char c : text) {
        const bool is_digit = (c >= '0' && c <= '9') || c == '_' || (c >= 'a' && c <= 'f') || c == 'x';
        run = is_digit ? run + 1 : 0;
        longest = std::max(longest, run);
    }
    return longest > 5 && text.find("latency") != std::string_view::npos;
}

void check_usable(const Plan& plan) {
    fuzz::require(!plan.cases.empty(), "a plan has a case");
    fuzz::require(plan.filter.empty() == plan.filter_is_unknown, "a plan has stages, or says that they are unknown");
    for (const Case& the_case : plan.cases) {
        fuzz::require(the_case.stimulus != nullptr && !the_case.rules.empty(), "a case has a stimulus and rules");
        const std::int64_t length = the_case.stimulus->length_samples();
        fuzz::require(length >= 1, "a stimulus has samples");
        // Ends and beyond: a stimulus is a function of every index.
        for (const std::int64_t first : {std::int64_t{0}, length / 2, length - 1}) {
            std::array<Code, 32> codes{};
            fill_codes(*the_case.stimulus, plan.signal.input, plan.signal.quantise, first, codes);
        }
    }
}

/// What a plan is understood to be is a plan too, and printed again the same text.
void check_printed(FakeFiles files, const Plan& plan) {
    // Some rounds of reading each default that does not fit; a fuzzer finds the plan with the most of them.
    if (plan.cases.size() > 20) return;
    const auto printed = resolved_plan("p/plan.toml", files, {"p", std::nullopt});
    const auto* text = std::get_if<std::string>(&printed);
    fuzz::require(text != nullptr, "a plan that is taken is printed");
    files.contents["p/plan.toml"] = *text;
    const auto again = resolved_plan("p/plan.toml", files, {"p", std::nullopt});
    const auto* same = std::get_if<std::string>(&again);
    fuzz::require(same != nullptr && *same == *text, "a printed plan is read and printed the same", *text);
}

}  // namespace

/// A plan, and behind a NUL byte each the files taps.txt (as taps.h, too) and common.toml beside it.
extern "C" int LLVMFuzzerTestOneInput(const std::uint8_t* data, std::size_t size) {
    const std::string_view text(reinterpret_cast<const char*>(data), size);
    const std::size_t cut = std::min(text.find('\0'), size);
    FakeFiles files;
    files.contents["p/plan.toml"] = text.substr(0, cut);
    if (cut < size) {
        const std::string_view rest = text.substr(cut + 1);
        const std::size_t second = std::min(rest.find('\0'), rest.size());
        files.contents["p/taps.txt"] = rest.substr(0, second);
        files.contents["p/taps.h"] = rest.substr(0, second);
        if (second < rest.size()) files.contents["p/common.toml"] = rest.substr(second + 1);
    }
    if (may_take_long(text)) return 0;
    const auto read = read_plan("p/plan.toml", files, {"p", std::nullopt});
    for (const std::string& path : files.read_paths) {
        fuzz::require(path.starts_with("p/"), "a plan reads nothing outside the root", path);
    }
    if (const auto* problems = std::get_if<ReadProblems>(&read)) {
        fuzz::require_whole_messages(*problems, {"p/plan.toml", "p/taps.txt", "p/taps.h", "p/common.toml", "taps.txt"});
    } else {
        check_usable(std::get<Plan>(read));
        check_printed(files, std::get<Plan>(read));
    }
    return 0;
}
