// No right board fails: whole checks of random filters in random arithmetic, of the C filters of the virtual board, and
// of the standard set, through all of the judging. Undecided is allowed, a fail is not.
#include "tests/rigs/right_boards.hpp"

#include <cstdio>

#include "tests/support/companions.hpp"
#include "tests/support/rounds.hpp"

using namespace halflsb;
using namespace halflsb::test;
using testing::chance;

namespace {

using RuleKind = decltype(Rule::kind);

/// Of channels, cases and kinds of rule what was judged.
struct Totals {
    std::int64_t boards = 0, failed_boards = 0, cases = 0, samples = 0, fails = 0;
    std::map<std::string, std::array<std::int64_t, 3>> verdicts;  ///< by kind: pass, undecided, fail

    std::int64_t judged(const std::string& kind) const {
        const auto found = verdicts.find(kind);
        return found == verdicts.end() ? 0 : found->second[0] + found->second[1] + found->second[2];
    }
};

std::string text_of(const RuleVerdict& verdict) {
    std::string text = std::string(kind_name(verdict.rule)) + " " + std::string(name_of(verdict.verdict)) + " " +
                       verdict.reason + " channel " + std::to_string(verdict.channel);
    for (const JudgedFigure& figure : verdict.figures) {
        char line[400];
        std::snprintf(line, sizeof line, "\n    %s %.9g +- %.3g limit %.9g %s %s %s", figure.name.c_str(),
                      figure.value.value_or(NAN), figure.uncertainty.value_or(0.0), figure.limit.value_or(NAN),
                      figure.unit.c_str(), std::string(name_of(figure.verdict)).c_str(), figure.note.c_str());
        text += line;
    }
    if (verdict.first_bad) text += "\n    first bad sample " + std::to_string(verdict.first_bad->index);
    return text;
}

void judge_case(const RightBoard& board, const Plan& plan, const Case& the_case, const Returned& returned,
                Totals& totals) {
    BaseResponse base;
    if (the_case.companion) {
        const auto found = std::find_if(plan.cases.begin(), plan.cases.end(),
                                        [&](const Case& other) { return other.name == the_case.companion->base; });
        REQUIRE(found != plan.cases.end());
        base = base_of(board.respond(plan, *found).codes, static_cast<std::size_t>(plan.signal.channels));
    }
    CaseJudge judge(plan, the_case, false, std::move(base));
    const auto channels = static_cast<std::size_t>(plan.signal.channels);
    for (std::size_t first = 0; first < returned.codes.size(); first += 256 * channels)
        judge.add(std::span(returned.codes).subspan(first, std::min(256 * channels, returned.codes.size() - first)));
    const auto judgement = judge.finish([&](std::int64_t first, std::span<Code> codes) -> Outcome<void> {
        std::copy_n(returned.codes.begin() + first * plan.signal.channels, codes.size(), codes.begin());
        return {};
    });
    REQUIRE(judgement);
    ++totals.cases;
    totals.samples += static_cast<std::int64_t>(returned.codes.size());
    for (const RuleVerdict& verdict : judgement->rules) {
        ++totals.verdicts[std::string(kind_name(verdict.rule))][static_cast<std::size_t>(verdict.verdict)];
        if (verdict.verdict != Verdict::fail) continue;
        ++totals.fails;
        std::string stimulus;
        for (const Parameter& parameter : find_recipe(stimulus_recipes(), the_case.shape)->parameters) {
            if (the_case.stimulus_values.has(parameter.name)) stimulus += " " + std::string(parameter.name);
        }
        UNSCOPED_INFO(board.text << "\n  case " << the_case.name << " (" << the_case.shape << stimulus << ")\n  "
                                 << text_of(verdict));
        CHECK(verdict.verdict != Verdict::fail);
    }
}

/// With places of their own, so that a refusal names one; those that the case cannot answer are left out.
bool settle(const Plan& plan, Case& the_case) {
    for (std::size_t i = 0; i < the_case.rules.size(); ++i)
        the_case.rules[i].position = {"plan.toml", static_cast<int>(100 + i), 1};
    for (const Refusal& refusal : refusals(plan, the_case))
        std::erase_if(the_case.rules, [&](const Rule& rule) { return rule.position == refusal.position; });
    return !the_case.rules.empty();
}

ErrorRule derived_error() {
    const Limit derived{0.0, Limit::In::full_scale_ratio, true};
    ErrorRule rule;
    rule.largest = rule.rms = rule.bias = derived;
    return rule;
}

/// Loudest level at which no stage's output reaches its end, by the L1 norm of the stages before it.
double quiet_level(const Plan& plan) {
    double most = 1.0;
    FilterChain part;
    for (const FilterStage& stage : plan.filter) {
        part.push_back(stage);
        most = std::max(most, l1_norm(declared_chain(part), 1e-3));
    }
    return std::min(0.9, 0.8 / most);
}

/// The stimuli of one check, each with the rules that it can answer.
class RandomCases {
public:
    RandomCases(Random& random, const RightBoard& board) : random_(random), board_(board) {
        is_plain_ = is_linear(board.plan.filter) && !changes_rate(board.plan.filter);
        level_ = is_plain_ ? quiet_level(board.plan) : 0.5;
        if (chance(random, 30)) level_ = std::ldexp(level_, -static_cast<int>(random.whole(1, 7)));
    }

    void judge_all(Totals& totals) {
        noise(totals);
        sine(totals);
        step(totals);
        silence(totals);
        loud(totals);
        again(totals);
        hardest(totals);
    }

private:
    Case made(const std::string& shape, const ParameterValues& values) const {
        return a_case(board_.plan, shape, values, {});
    }
    /// Beside what is asked the rules that hold for every case.
    void judge(Case the_case, const Returned& returned, std::vector<RuleKind> kinds, Totals& totals) {
        for (RuleKind& kind : kinds) the_case.rules.push_back({std::move(kind), {}});
        the_case.rules.push_back({derived_error(), {}});
        the_case.rules.push_back({ExactRule{}, {}});
        the_case.rules.push_back({LatencyRule{0, chance(random_, 50)}, {}});
        if (settle(board_.plan, the_case)) judge_case(board_, board_.plan, the_case, returned, totals);
    }
    template <class Kind>
    static void add(std::vector<RuleKind>& kinds, const std::optional<Kind>& kind) {
        if (kind) kinds.push_back(*kind);
    }
    double hz() { return board_.plan.signal.rate_hz * random_.between(0.002, 0.48); }

    void noise(Totals& totals) {
        const std::int64_t length = random_.whole(4096, 12000);
        const Case the_case =
            made("noise",
                 values({{"level_ratio", level_}, {"seed", random_.whole(1, 1 << 30)}, {"length_samples", length}}));
        const Returned returned = board_.respond(board_.plan, the_case);
        std::vector<RuleKind> kinds;
        if (is_plain_ && !returned.overflowed) {
            const RightRules right(board_.plan, the_case);
            if (right.is_bounded()) {
                kinds.push_back(right.drift());
                add(kinds, right.noise(chance(random_, 50)));
                const std::size_t bins = static_cast<std::size_t>(random_.whole(1, 32));
                add(kinds, right.response(static_cast<std::size_t>(random_.whole(1, 250)), bins, chance(random_, 50)));
            }
        }
        judge(the_case, returned, kinds, totals);
    }

    void sine(Totals& totals) {
        const Case the_case = made(
            "sine",
            values({{"level_ratio", level_}, {"frequency_hz", hz()}, {"length_samples", random_.whole(2000, 6000)}}));
        const Returned returned = board_.respond(board_.plan, the_case);
        std::vector<RuleKind> kinds;
        if (is_plain_ && !returned.overflowed) {
            const RightRules right(board_.plan, the_case);
            if (right.is_bounded()) add(kinds, right.tone());
        }
        judge(the_case, returned, kinds, totals);
    }

    void step(Totals& totals) {
        const double sign = chance(random_, 50) ? 1.0 : -1.0;
        const Case the_case = made("step", values({{"level_ratio", sign * level_},
                                                   {"at_samples", random_.whole(40, 200)},
                                                   {"length_samples", random_.whole(1000, 5000)}}));
        const Returned returned = board_.respond(board_.plan, the_case);
        std::vector<RuleKind> kinds;
        if (is_plain_ && !returned.overflowed) {
            const RightRules right(board_.plan, the_case);
            if (right.is_bounded()) add(kinds, right.transition());
        }
        judge(the_case, returned, kinds, totals);
    }

    void silence(Totals& totals) {
        const Case the_case = made("burst", values({{"frequency_hz", hz()},
                                                    {"level_ratio", level_},
                                                    {"on_samples", random_.whole(100, 400)},
                                                    {"off_samples", std::int64_t{1}},
                                                    {"repeats", std::int64_t{1}},
                                                    {"length_samples", random_.whole(1500, 5000)}}));
        SilenceRule rule;
        rule.largest = Limit{0.0, Limit::In::full_scale_ratio, true};
        judge(the_case, board_.respond(board_.plan, the_case), {rule}, totals);
    }

    /// The signs that drive the output the furthest.
    void hardest(Totals& totals) {
        const Signal& signal = board_.plan.signal;
        if (!is_plain_ || !signal.input.has_lsb() || !signal.output.has_lsb()) return;
        std::string signs;
        const std::vector<double> h = impulse_response(chain_of_channel(board_.plan.filter, 1), 1024);
        const double way = chance(random_, 50) ? 1.0 : -1.0;  // a level is positive, so the signs are turned round
        for (std::size_t n = h.size(); n-- > 0;) signs += way * h[n] < 0.0 ? '-' : way * h[n] > 0.0 ? '+' : '0';
        const Case the_case = made(
            "signs", values({{"signs", signs}, {"level_ratio", 1.0}, {"length_samples", random_.whole(1100, 2000)}}));
        judge(the_case, board_.respond(board_.plan, the_case), {HeadroomRule{}}, totals);
    }

    /// Whatever overflows then: the limits that claim nothing must say so.
    void loud(Totals& totals) {
        const std::int64_t length = random_.whole(1000, 4000);
        const double sign = chance(random_, 50) ? 1.0 : -1.0;
        Case the_case =
            made("impulse",
                 values({{"level_ratio", sign}, {"at_samples", random_.whole(0, 30)}, {"length_samples", length}}));
        switch (random_.whole(0, 3)) {
            case 0:
                the_case = made("square", values({{"level_ratio", 1.0},
                                                  {"period_samples", random_.whole(2, 300)},
                                                  {"length_samples", length}}));
                break;
            case 1:
                the_case = made("ramp", values({{"from_ratio", -1.0}, {"to_ratio", 1.0}, {"length_samples", length}}));
                break;
            case 2:
                the_case = made(
                    "noise",
                    values({{"level_ratio", 1.0}, {"seed", random_.whole(1, 1 << 30)}, {"length_samples", length}}));
                break;
            default:
                break;
        }
        judge(the_case, board_.respond(board_.plan, the_case), {}, totals);
    }

    /// Sent once more, as each rule that needs no oracle asks, at a level that may clip.
    void again(Totals& totals) {
        const std::int64_t cycle = rate_cycle_of(board_.plan).inputs, later = cycle * random_.whole(1, 30);
        const Case base = made("noise", values({{"level_ratio", chance(random_, 20) ? 0.9 : level_ / 2.0},
                                                {"seed", random_.whole(1, 1 << 30)},
                                                {"length_samples", cycle * random_.whole(31, 1 + 4000 / cycle + 31)}}));
        const auto linear = [](std::vector<std::int64_t> ratios, std::vector<std::int64_t> shifts) {
            return LinearityRule{std::move(ratios), std::move(shifts), std::nullopt, std::nullopt};
        };
        const std::vector<RuleKind> kinds = {RepeatRule{std::nullopt}, BlocksRule{{random_.whole(1, 60)}, std::nullopt},
                                             ShiftRule{{later}, std::nullopt},
                                             linear({chance(random_, 50) ? -1 : 2}, {later})};
        for (const RuleKind& kind : kinds) {
            Case asked = base;
            asked.rules = {{kind, {"plan.toml", 100, 1}}};
            const Plan plan = with_case(board_.plan, asked);
            for (const Case& the_case : plan.cases) {
                if (the_case.companion && refusals(plan, the_case).empty())
                    judge_case(board_, plan, the_case, board_.respond(plan, the_case), totals);
            }
        }
    }

    Random& random_;
    const RightBoard& board_;
    bool is_plain_ = false;
    double level_ = 0.5;
};

void judge_standard_set(const RightBoard& board, Totals& totals) {
    for (const Case& the_case : board.plan.cases) {
        const auto is_long =
            std::find(the_case.labels.begin(), the_case.labels.end(), long_label) != the_case.labels.end();
        if (!is_long) judge_case(board, board.plan, the_case, board.respond(board.plan, the_case), totals);
    }
}

/// One in `standard_each` under the standard set of a random plan; of the others one in eight a C filter. Numbers from
/// `first` on.
Totals over_right_boards(std::uint64_t seed, std::int64_t first, std::int64_t boards, std::int64_t standard_each) {
    Totals totals;
    const FirmwareBoards firmware;
    for (std::int64_t number = first; totals.boards < boards; ++number) {
        // Each draws of its own: a board that failed is found again by its number alone.
        Random random(seed * 1'000'003 + static_cast<std::uint64_t>(number));
        INFO("seed " << seed << ", board " << number);
        const std::int64_t fails = totals.fails;
        if (number % standard_each == standard_each - 1) {
            const auto board = random_plan_board(static_cast<std::uint32_t>(random.bits()));
            if (!board) continue;
            judge_standard_set(*board, totals);
        } else if (number % 8 == 7) {
            const RightBoard& board =
                firmware.at(static_cast<std::size_t>(random.whole(0, static_cast<std::int64_t>(firmware.size()) - 1)));
            RandomCases(random, board).judge_all(totals);
        } else {
            const RightBoard board = random_twin(random);
            RandomCases(random, board).judge_all(totals);
        }
        ++totals.boards;
        totals.failed_boards += totals.fails > fails;
    }
    return totals;
}

std::int64_t asked_or(const char* variable, std::int64_t otherwise) {
    const char* asked = std::getenv(variable);
    return asked != nullptr ? std::atoll(asked) : otherwise;
}

std::string told(const Totals& totals) {
    std::string text;
    for (const auto& [kind, counts] : totals.verdicts) {
        text += (text.empty() ? "" : "; ") + kind + " " + std::to_string(counts[0]) + " pass, " +
                std::to_string(counts[1]) + " undecided, " + std::to_string(counts[2]) + " fail";
    }
    return text;
}

}  // namespace

TEST_CASE("none of a hundred fails any rule", "[rigs]") {
    constexpr std::uint64_t seed = 20261210;
    const Totals totals = over_right_boards(seed, 0, rounds_of(100), 50);
    INFO(told(totals));
    CHECK(totals.fails == 0);
    // All of it must have happened.
    if (!draws_all_rounds()) return;
    for (const char* kind : {"error", "exact", "latency", "response", "noise", "drift", "tone", "transition", "silence",
                             "repeat", "blocks", "shift", "linearity", "headroom"}) {
        CAPTURE(kind);
        CHECK(totals.judged(kind) > 0);
    }
}

TEST_CASE("nor does one of 10,000", "[rigs][.long]") {
    const auto seed = static_cast<std::uint64_t>(asked_or("HALFLSB_RIGHT_SEED", 20261211));
    const std::int64_t boards = asked_or("HALFLSB_RIGHT_BOARDS", 10'000);
    // One that failed, alone.
    const std::int64_t alone = asked_or("HALFLSB_RIGHT_BOARD", -1);
    const Totals totals = alone < 0 ? over_right_boards(seed, 0, boards, 20) : over_right_boards(seed, alone, 1, 20);
    std::printf(
        "right boards that fail no rule of the whole judging | 10,000 of 10,000 | %lld of %lld; %lld cases, %lld "
        "samples; %s; seed %llu\n",
        static_cast<long long>(totals.boards - totals.failed_boards), static_cast<long long>(totals.boards),
        static_cast<long long>(totals.cases), static_cast<long long>(totals.samples), told(totals).c_str(),
        static_cast<unsigned long long>(seed));
    CHECK(totals.fails == 0);
}
