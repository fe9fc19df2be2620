// Two channels that a board mixes up: each way is found from the captures, and a right board has none.
#include "oracle/explain/channel_search.hpp"

#include <catch2/catch.hpp>

#include "oracle/explain/probes.hpp"
#include "tests/oracle/explain/small_boards.hpp"

using namespace halflsb;
using namespace halflsb::test;

namespace {

Signal two_channels() {
    Signal signal;
    signal.rate_hz = 1200.0;
    signal.input = *sample_format("q15");
    signal.output = signal.input;
    signal.channels = 2;
    return signal;
}

BoardDescription average() {
    FilterStage stage;
    stage.design = MovingAverage{16};
    stage.kind = "moving-average";
    stage.arithmetic.rounding = Rounding::half_up;
    return {{stage}};
}

using Captures = std::vector<ChannelCapture>;

/// Channel 2 gets the cases of channel 1 backward, so that they differ.
std::array<Captures, 2> sent_captures() {
    std::array<Captures, 2> captures;
    for (const Probe& probe : probes_for(two_channels())) {
        ChannelCapture one;
        one.case_name = probe.what;
        one.sent = probe.codes;
        captures[0].push_back(one);
        std::reverse(one.sent.begin(), one.sent.end());
        captures[1].push_back(one);
    }
    return captures;
}

Captures& answered(Captures& captures) {
    SmallAverage board(Wrong::nothing);
    for (ChannelCapture& capture : captures) capture.response = returned_by(board, capture.sent, Wrong::nothing);
    return captures;
}

std::string cause_of(const std::array<Captures, 2>& captures, std::size_t channel) {
    const std::vector<ChannelBoard> boards{{average(), &captures[0]}, {average(), &captures[1]}};
    const auto cause = channel_cause(two_channels(), boards, channel);
    return cause ? cause->hypothesis.what() : "";
}

}  // namespace

TEST_CASE("explain: channels that pass alone have no cause between them", "[explain]") {
    auto captures = sent_captures();
    for (Captures& each : captures) answered(each);
    // What is asked of a right channel is answered by nothing: the declared board is looked at before.
    const std::vector<ChannelBoard> boards{{average(), &captures[0]}, {average(), &captures[1]}};
    CHECK_FALSE(channel_cause(two_channels(), boards, 0));
    CHECK_FALSE(channel_cause(two_channels(), {{average(), &captures[0]}}, 0));
}

TEST_CASE("explain: channels that are exchanged", "[explain]") {
    auto captures = sent_captures();
    for (Captures& each : captures) answered(each);
    for (std::size_t i = 0; i < captures[0].size(); ++i) std::swap(captures[0][i].response, captures[1][i].response);
    CHECK(cause_of(captures, 0) == "its filter gets the samples of channel 2");
    CHECK(cause_of(captures, 1) == "its filter gets the samples of channel 1");
}

TEST_CASE("explain: channels that share a state", "[explain]") {
    auto captures = sent_captures();
    SmallAverage board(Wrong::nothing);
    for (std::size_t i = 0; i < captures[0].size(); ++i) {
        board.reset();
        for (std::size_t n = 0; n < captures[0][i].sent.size(); ++n) {
            for (Captures& each : captures) each[i].response.push_back(static_cast<Code>(board.step(each[i].sent[n])));
        }
    }
    for (std::size_t channel = 0; channel < 2; ++channel)
        CHECK(cause_of(captures, channel) == "all channels pass one filter and share its state");
}

TEST_CASE("explain: a part of one channel in the other", "[explain]") {
    auto captures = sent_captures();
    for (Captures& each : captures) answered(each);
    for (std::size_t i = 0; i < captures[0].size(); ++i) {
        for (std::size_t n = 0; n < captures[1][i].response.size(); ++n) {
            const std::int64_t sum = captures[1][i].response[n] + floored(captures[0][i].sent[n], 7);
            captures[1][i].response[n] = static_cast<Code>(std::clamp<std::int64_t>(sum, -32768, 32767));
        }
    }
    CHECK(cause_of(captures, 1) == "1/128 of the input of channel 1 is added to its output");
    CHECK(cause_of(captures, 0).empty());
}
