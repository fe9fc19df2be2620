// Boards in random arithmetic that their plan does not tell: what is inferred returns the same bits, to stimuli that
// were not among the captures too.
#include "oracle/explain/inference.hpp"

#include <catch2/catch.hpp>
#include <cstdio>

#include "oracle/arithmetic/twin.hpp"
#include "oracle/explain/probes.hpp"
#include "oracle/explain/said_words.hpp"
#include "tests/oracle/arithmetic/random_description.hpp"
#include "tests/support/rounds.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

std::vector<Code> returned_by(const DescribedChain& described, const std::vector<Code>& sent) {
    const auto twin = make_twin(described);
    std::vector<Code> response(twin->outputs_for(sent.size()));
    twin->process(sent, response);
    return response;
}

/// The filter alone: of its arithmetic only the words between stages, as their formats are the firmware's types.
FilterChain undeclared(const FilterChain& chain) {
    FilterChain plain = chain;
    for (FilterStage& stage : plain) {
        stage.coefficient_fraction_bits.reset();
        stage.arithmetic = {};
    }
    return plain;
}

std::string words_of_chain(const FilterChain& chain) {
    std::string text;
    for (const FilterStage& stage : chain) {
        for (const std::string& word : said_words(stage)) text += (text.empty() ? "" : ", ") + word;
        text += ";";
    }
    return text;
}

struct Totals {
    int boards = 0, inferred = 0, same = 0;
};

void infer(const RandomChain& board, Random& random, Totals& totals) {
    Signal signal;
    signal.rate_hz = 1200.0;
    signal.input = board.in;
    signal.output = board.out;
    std::vector<ChannelCapture> all;
    for (const Probe& probe : probes_for(signal)) {
        ChannelCapture capture;
        capture.case_name = probe.what;
        capture.sent = probe.codes;
        capture.response = returned_by(board.described, probe.codes);
        all.push_back(std::move(capture));
    }
    CaptureSet captures(signal, std::move(all));
    BoardDescription plan;
    plan.filter = undeclared(board.stages);
    const Inference found = infer_arithmetic(plan, captures, [] { return true; });
    ++totals.boards;
    if (!found.fitting) {
        UNSCOPED_INFO("not inferred after " << found.tried << ": " << text_of(board) << "; nearest "
                                            << found.nearest.front().fit.equal << " "
                                            << words_of_chain(found.nearest.front().hypothesis.board.filter));
        return;
    }
    ++totals.inferred;
    const FilterChain& chain = found.fitting->hypothesis.board.filter;
    const auto described = describe(chain, board.in, board.out, 1.0).described;
    REQUIRE(described);
    std::vector<Code> other(6000);
    const std::int64_t half = std::int64_t{1} << (board.in.word_bits - 1);
    for (Code& code : other) code = static_cast<Code>(zero_code(board.in) + random.whole(-half, half - 1));
    const bool is_same = returned_by(*described, other) == returned_by(board.described, other);
    if (is_same)
        ++totals.same;
    else
        UNSCOPED_INFO("other bits: " << text_of(board) << "; inferred " << words_of_chain(chain));
}

/// Of one stage each: what nobody says of two is not told apart by what comes out of the second.
Totals infer_all(std::uint64_t seed, std::int64_t boards) {
    Random random(seed);
    Totals totals;
    while (totals.boards < boards) {
        const RandomChain chain = random_chain(random);
        if (chain.stages.size() == 1) infer(chain, random, totals);
    }
    return totals;
}

}  // namespace

TEST_CASE("explain: the arithmetic that nobody declared is inferred to the bit", "[explain]") {
    constexpr std::uint64_t seed = 20261203;
    CAPTURE(seed);
    const Totals totals = infer_all(seed, test::rounds_of(12));
    // 95 of 100 is asked of many: of 12 more than two are missed once in 50 draws.
    CHECK(totals.same >= totals.boards - 2);
    CHECK(totals.same > 0);
}

TEST_CASE("explain: and so it is of 200", "[explain][.long]") {
    constexpr std::uint64_t seed = 20261204;
    const Totals totals = infer_all(seed, 200);
    std::printf(
        "undeclared arithmetics of one stage inferred from 9 stimuli that return the same bits to others | 190 of 200 "
        "| "
        "%d of %d, %d reproduce the captures; seed %llu\n",
        totals.same, totals.boards, totals.inferred, static_cast<unsigned long long>(seed));
    CHECK(totals.same >= 0.95 * totals.boards);
}
