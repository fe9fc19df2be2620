// Right boards, each with a plan: twins of random chains, the C filters of rigs/filters, and random plans under the
// standard set; and the whole judging of what they return.
#pragma once

#include <array>
#include <cstring>
#include <filesystem>
#include <functional>
#include <map>
#include <memory>
#include <string>
#include <string_view>
#include <utility>
#include <vector>

#include "oracle/arithmetic/twin.hpp"
#include "oracle/judge/admission.hpp"
#include "oracle/judge/case_judge.hpp"
#include "oracle/judge/companion_case.hpp"
#include "rigs/virtual-board/clean_decisions.hpp"
#include "runner/config/plan_file.hpp"
#include "runner/config/standard_set.hpp"
#include "tests/oracle/arithmetic/random_description.hpp"
#include "tests/rigs/right_rules.hpp"
#include "tests/support/random_plans.hpp"
#include "tests/support/source_dir.hpp"

namespace halflsb::test {

using testing::Random;

/// What came back, and whether some word of the arithmetic overflowed: then the board is right and not linear.
struct Returned {
    std::vector<Code> codes;
    bool overflowed = false;
};

struct RightBoard {
    std::string text;
    Plan plan;
    std::function<Returned(const Plan&, const Case&)> respond;
};

/// Of each channel; nothing where the arithmetic has no twin.
inline std::optional<Returned> twin_returns(const Plan& plan, const Case& the_case) {
    const auto channels = static_cast<std::size_t>(plan.signal.channels);
    const auto length = static_cast<std::size_t>(the_case.stimulus->length_samples());
    std::vector<Code> sent(length * channels), one(length);
    fill_case_codes(plan, the_case, 0, sent);
    Returned made;
    for (std::size_t c = 0; c < channels; ++c) {
        const auto described = described_channel(plan, the_case, static_cast<int>(c) + 1);
        const auto twin = described && !described->missing ? make_twin(*described) : nullptr;
        if (!twin) return std::nullopt;
        for (std::size_t n = 0; n < length; ++n) one[n] = sent[n * channels + c];
        std::vector<Code> out(twin->outputs_for(length));
        twin->process(one, out);
        made.codes.resize(out.size() * channels);
        for (std::size_t n = 0; n < out.size(); ++n) made.codes[n * channels + c] = out[n];
        for (const NodeReach& reach : twin->reaches()) made.overflowed = made.overflowed || reach.overflows > 0;
    }
    return made;
}

inline RightBoard random_twin(Random& random) {
    for (;;) {
        const testing::RandomChain chain =
            testing::chance(random, 20) ? testing::random_narrow_chain(random) : testing::random_chain(random);
        if (!make_twin(chain.described)) continue;
        RightBoard board{"twin: " + text_of(chain), moving_average_plan(), {}};
        board.plan.filter = chain.stages;
        board.plan.signal.input = chain.in;
        board.plan.signal.output = chain.out;
        board.respond = [](const Plan& plan, const Case& the_case) { return *twin_returns(plan, the_case); };
        return board;
    }
}

/// Runs one of the virtual board's filters in this process.
inline Returned firmware_returns(const board::FilterParts& parts, const Plan& plan, const Case& the_case) {
    const auto channels = static_cast<std::size_t>(plan.signal.channels);
    const auto length = static_cast<std::size_t>(the_case.stimulus->length_samples());
    const auto& [in_format, out_format] = std::pair(plan.signal.input, plan.signal.output);
    std::vector<Code> sent(length * channels);
    fill_case_codes(plan, the_case, 0, sent);
    Returned made;
    parts.reset();
    for (std::size_t first = 0; first < length;) {
        // Whole rate cycles, as the runner sends.
        const auto most = static_cast<std::size_t>(parts.process_rate ? 240 : sent_block_samples(the_case, 240));
        const std::size_t count = std::min(length - first, most);
        const auto codes = std::span(sent).subspan(first * channels, count * channels);
        std::vector<std::byte> in(codes.size() * in_format.word_bytes());
        std::vector<std::byte> out(codes.size() * out_format.word_bytes() * parts.up);
        to_wire_bytes(in_format, codes, in);
        std::size_t returned = count;
        if (parts.process_rate)
            returned = parts.process_rate(in.data(), out.data(), static_cast<std::uint16_t>(count));
        else
            parts.process(in.data(), out.data(), static_cast<std::uint16_t>(count));
        std::vector<Code> back(returned * channels);
        from_wire_bytes(out_format, std::span(out).first(back.size() * out_format.word_bytes()), back);
        made.codes.insert(made.codes.end(), back.begin(), back.end());
        first += count;
    }
    if (const auto twin = twin_returns(plan, the_case)) {
        INFO("firmware against its twin, case " << the_case.name);
        const bool is_equal = made.codes == twin->codes;
        CHECK(is_equal);
        made.overflowed = twin->overflowed;
    }
    return made;
}

/// The C filters, under the plans of rigs/cw-7/exact without their cases: the standard set.
class FirmwareBoards {
public:
    FirmwareBoards() : filters_(board::every_filter({}, setting_)) {
        std::vector<std::filesystem::path> paths;
        for (const auto& entry : std::filesystem::directory_iterator(source_path("rigs/cw-7/exact")))
            if (entry.path().extension() == ".toml" && entry.path().stem() != "cases") paths.push_back(entry.path());
        std::sort(paths.begin(), paths.end());
        for (const auto& path : paths) add(path);
    }
    std::size_t size() const { return boards_.size(); }
    const RightBoard& at(std::size_t i) const { return boards_[i]; }

private:
    void add(const std::filesystem::path& path) {
        DiskFiles disk;
        std::string text = *disk.read(path.string(), largest_config_bytes);
        const std::string cases = "include = [\"cw-7/exact/cases.toml\"]";
        text.replace(text.find(cases), cases.size(), "");
        if (text.find("rate_hz") == std::string::npos) text.insert(text.find("[signal]") + 8, "\nrate_hz = 1200.0");
        const auto read = read_plan_text(text);
        if (const auto* problems = std::get_if<ReadProblems>(&read)) FAIL(path << ": " << problems->texts.front());
        const Plan& plan = std::get<Plan>(read);
        for (const board::FilterParts& parts : filters_) {
            if (parts.name != plan.signal.filter) continue;
            boards_.push_back({"C filter " + parts.name, plan, [&parts](const Plan& of, const Case& the_case) {
                                   return firmware_returns(parts, of, the_case);
                               }});
            return;
        }
    }
    /// With the coefficients of rigs/ beside it.
    static std::variant<Plan, ReadProblems> read_plan_text(const std::string& text) {
        FakeFiles files;
        DiskFiles disk;
        for (const auto& entry : std::filesystem::directory_iterator(source_path("rigs/filters/coefficients"))) {
            if (const auto bytes = disk.read(entry.path().string(), largest_named_file_bytes))
                files.contents["./filters/coefficients/" + entry.path().filename().string()] = *bytes;
        }
        files.contents["plan.toml"] = text;
        return read_plan("plan.toml", files);
    }

    board::AverageSetting setting_;
    std::vector<board::FilterParts> filters_;
    std::vector<RightBoard> boards_;
};

/// How a board rounds that has no twin and rounds once: as it is said, if it is. nullopt: said for more than a rounding
/// at the end, and what else rounds nobody knows.
inline std::optional<Rounding> rounding_of_once(const DescribedChain& chain) {
    const auto is_said = [](const DescribedStage& stage) { return stage.rounding_is_said; };
    if (std::none_of(chain.stages.begin(), chain.stages.end(), is_said)) return Rounding::half_up;
    const DescribedStage& stage = chain.stages.front();
    const bool rounds_once = chain.stages.size() == 1 && std::holds_alternative<Fir>(stage.stage.design) &&
                             stage.rounding_at != RoundingAt::product && !stage.fraction_saving;
    return rounds_once ? std::optional(stage.rounding) : std::nullopt;
}

inline bool has_twin(const Plan& plan, const Case& the_case) {
    for (int channel = 1; channel <= plan.signal.channels; ++channel) {
        const auto described = described_channel(plan, the_case, channel);
        if (!described || described->missing || !make_twin(*described)) return false;
    }
    return true;
}

/// Of all channels; nothing where not all of them are known to round the same way.
inline std::optional<Rounding> rounding_of_once(const Plan& plan, const Case& the_case) {
    std::optional<Rounding> all;
    for (int channel = 1; channel <= plan.signal.channels; ++channel) {
        const auto described = described_channel(plan, the_case, channel);
        const auto one = described ? rounding_of_once(*described) : std::optional(Rounding::half_up);
        if (!one || (all && *all != *one)) return std::nullopt;
        all = one;
    }
    return all;
}

/// Signal and filters of a random plan, under the standard set; nothing where that has none, or no board is known.
inline std::optional<RightBoard> random_plan_board(std::uint32_t seed) {
    random_plans::RandomPlan plan = random_plans::Generator(seed).plan();
    std::erase_if(plan.tables, [](const random_plans::Table& table) {
        return table.header.starts_with("[case") || table.header.starts_with("[[case") || table.header == "[[rule]]";
    });
    FakeFiles files = plan.files;
    files.contents["plan.toml"] = plan.text();
    auto read = read_plan("plan.toml", files);
    if (!std::holds_alternative<Plan>(read)) return std::nullopt;
    RightBoard board{"random plan " + std::to_string(seed) + ":\n" + plan.text(), std::get<Plan>(std::move(read)), {}};
    for (const Case& the_case : board.plan.cases) {
        if (!rounding_of_once(board.plan, the_case) && !has_twin(board.plan, the_case)) return std::nullopt;
    }
    board.respond = [](const Plan& of, const Case& the_case) {
        auto made = twin_returns(of, the_case);
        // Where no twin is, what rounds once is one of the right boards.
        return made ? *made : Returned{right_response(of, the_case, *rounding_of_once(of, the_case)), false};
    };
    return board;
}

}  // namespace halflsb::test
