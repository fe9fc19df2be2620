// The search against boards that share no arithmetic with the twins: what was done to each of them is found.
#include "oracle/explain/search.hpp"

#include <catch2/catch.hpp>

#include "oracle/explain/probes.hpp"
#include "tests/oracle/explain/small_boards.hpp"
#include "tests/oracle/explain/small_plans.hpp"

using namespace halflsb;
using namespace halflsb::test;

namespace {

struct Bench {
    FilterStage stage;
    std::function<std::unique_ptr<SmallBoard>(Wrong)> board;
};

Bench average() {
    return {declared(MovingAverage{16}, "moving-average", std::nullopt),
            [](Wrong wrong) { return std::make_unique<SmallAverage>(wrong); }};
}
Bench biquad() {
    const auto& c = low_pass;
    return {declared(BiquadCascade{{{c[0], c[1], c[2], c[3], c[4]}}}, "biquad-cascade", 14),
            [](Wrong wrong) { return std::make_unique<SmallBiquad>(low_pass, wrong); }};
}
Bench fir() {
    return {declared(Fir{slanted}, "fir", 15), [](Wrong wrong) { return std::make_unique<SmallFir>(slanted, wrong); }};
}

/// The captures of a board: each probe is a case, streamed from a reset.
std::vector<ChannelCapture> captures_of(const Bench& bench, Wrong wrong) {
    const auto board = bench.board(wrong);
    board->reset();
    std::vector<ChannelCapture> captures;
    for (const Probe& probe : probes_for(q15_signal())) {
        ChannelCapture capture;
        capture.case_name = probe.what;
        capture.sent = probe.codes;
        capture.response = returned_by(*board, probe.codes, wrong);
        captures.push_back(std::move(capture));
    }
    return captures;
}

SearchResult explained(const Bench& bench, Wrong wrong) {
    Hypothesis as_declared;
    as_declared.board.filter = {bench.stage};
    CaptureSet captures(q15_signal(), captures_of(bench, wrong));
    return search(as_declared, captures, [] { return true; });
}

/// What the classes say, their members joined.
std::string names_of(const SearchResult& result) {
    std::string names;
    for (const EquivalenceClass& each : result.classes) {
        for (const Candidate& member : each.members) names += "[" + member.hypothesis.what() + "]";
        names += "\n";
    }
    return names;
}

/// One class, and `what` stands among its members.
void check_found(const Bench& bench, Wrong wrong, const std::string& what) {
    const SearchResult result = explained(bench, wrong);
    INFO("wanted \"" << what << "\"; found\n"
                     << names_of(result) << "nearest "
                     << (result.nearest ? result.nearest->hypothesis.what() : std::string("none")));
    REQUIRE(!result.classes.empty());
    std::string first;
    for (const Candidate& member : result.classes.front().members) first += "[" + member.hypothesis.what() + "]";
    CHECK(first.find(what) != std::string::npos);
    CHECK(result.classes.size() == 1);
    for (const EquivalenceClass& each : result.classes) {
        for (const Candidate& member : each.members) CHECK(member.hypothesis.changes.size() == 1);
    }
}

}  // namespace

TEST_CASE("explain: a right board is as declared, and nothing else is said", "[explain]") {
    for (const Bench& bench : {average(), biquad(), fir()}) {
        const SearchResult result = explained(bench, Wrong::nothing);
        CHECK(result.has_twin);
        CHECK(result.declared.fit.is_exact());
        CHECK(result.classes.empty());
        CHECK(result.tried == 0);
    }
}

TEST_CASE("explain: of a moving average the one decision that was different", "[explain]") {
    check_found(average(), Wrong::floor, "floor in place of half-up");
    check_found(average(), Wrong::toward_zero, "toward-zero in place of half-up");
    check_found(average(), Wrong::narrow_sum, "an accumulator of 16 bits");
    check_found(average(), Wrong::window_short, "a window of 15 points, divided by 16");
}

TEST_CASE("explain: of a section the one decision that was different", "[explain]") {
    check_found(biquad(), Wrong::floor, "floor in place of half-up");
    check_found(biquad(), Wrong::toward_zero, "toward-zero in place of half-up");
    check_found(biquad(), Wrong::products_floored, "each product shortened by floor");
    check_found(biquad(), Wrong::wraps, "an output that wraps");
    check_found(biquad(), Wrong::feedback_unheld, "feedback before the output's overflow");
    check_found(biquad(), Wrong::coefficients_cut, "coefficients cut off toward zero");
    check_found(biquad(), Wrong::shift_less, "a shift of 13 bits in place of 14");
    check_found(biquad(), Wrong::a1_sign, "a1 with the opposite sign");
}

TEST_CASE("explain: of taps the one decision that was different", "[explain]") {
    check_found(fir(), Wrong::floor, "floor in place of half-up");
    check_found(fir(), Wrong::products_floored, "each product shortened by floor");
    check_found(fir(), Wrong::wraps, "an output that wraps");
    check_found(fir(), Wrong::coefficients_cut, "coefficients cut off toward zero");
    check_found(fir(), Wrong::taps_reversed, "the taps in the opposite order");
}

TEST_CASE("explain: what goes wrong around the filter", "[explain]") {
    for (const Bench& bench : {average(), biquad(), fir()}) {
        check_found(bench, Wrong::one_late, "each output 1 sample late");
        check_found(bench, Wrong::bytes_swapped, "at the input: the bytes of each word in the opposite order");
        check_found(bench, Wrong::negated, "at the input: the opposite sign");
        check_found(bench, Wrong::no_reset, "a reset leaves the state as it was");
        check_found(bench, Wrong::half_reset, "a reset clears only");
        check_found(bench, Wrong::not_called, "the input goes past the filter");
        check_found(bench, Wrong::constant_twice, "the constant of the rounding twice as large");
        check_found(bench, Wrong::sample_lost, "each 100 samples from 99 on: a sample does not reach the filter");
        check_found(bench, Wrong::state_lost, "each 64 samples from 64 on: the state is that of a reset");
    }
}

TEST_CASE("explain: what no hypothesis reproduces is unknown, and the nearest is no cause", "[explain]") {
    for (const Bench& bench : {average(), biquad(), fir()}) {
        const SearchResult result = explained(bench, Wrong::looked_up);
        CHECK(result.classes.empty());
        REQUIRE(result.nearest.has_value());
        CHECK_FALSE(result.nearest->fit.is_exact());
    }
}

TEST_CASE("explain: a board that returns nothing explains nothing", "[explain]") {
    BoardDescription mute;
    mute.filter = {average().stage};
    mute.passage = {PassageKind::lost_shifted, 1, 3, 1};
    const CaptureSet captures(q15_signal(), captures_of(average(), Wrong::nothing));
    const CaptureFit fit = captures.until_first_wrong(mute);
    CHECK(fit.could_run);
    CHECK_FALSE(fit.is_exact());
    CHECK(fit.wrong_index == 3);
}

TEST_CASE("explain: a search can be ended, with what was found so far", "[explain]") {
    Hypothesis as_declared;
    as_declared.board.filter = {biquad().stage};
    CaptureSet captures(q15_signal(), captures_of(biquad(), Wrong::looked_up));
    int asked = 0;
    const SearchResult result = search(as_declared, captures, [&] { return ++asked <= 20; });
    CHECK(result.was_cut);
    CHECK(result.tried <= 20);
}
