#include "runner/report/rule_report.hpp"

#include <catch2/catch.hpp>

#include "tests/runner/report/sample_run.hpp"

using namespace halflsb;

namespace {

Signal signal_at_1200_hz() { return sample::run().signal; }

RuleVerdict response_verdict(std::size_t bands) {
    ResponseRule rule;
    RuleVerdict verdict;
    verdict.rule = {rule, {"cw7.toml", 40, 1}};
    verdict.verdict = Verdict::pass;
    verdict.reference = "design";
    for (std::size_t i = 0; i < bands; ++i) {
        verdict.figures.push_back(
            sample::figure("gain " + std::to_string(i), -1.0 * static_cast<double>(i), 0.5, "dB"));
    }
    return verdict;
}

}  // namespace

TEST_CASE("rule: the brief shows the figure with the least room for its limit", "[report]") {
    RuleVerdict verdict = sample::error_failed(3);
    CHECK(rule_brief(verdict) == "max 1.5 LSB of 0.5");
    verdict.figures.erase(verdict.figures.begin());
    CHECK(rule_brief(verdict) == "snr 61.23 dB, at least 60");  // 2.05 % of room against 3.8 %
    verdict.figures.pop_back();
    CHECK(rule_brief(verdict) == "rms 0.2887 LSB of 0.3");
    verdict.figures.clear();
    CHECK(rule_brief(verdict).empty());
}

TEST_CASE("rule: an exact match is told by its note, not by a missing number", "[report]") {
    RuleVerdict verdict = sample::error_passed(3);
    verdict.figures = {{"snr", std::nullopt, 60.0, std::nullopt, "dB", true, Verdict::pass, "identical"}};
    CHECK(rule_brief(verdict) == "snr identical");
    CHECK(rule_block(verdict, signal_at_1200_hz(), {}) ==
          "  error: pass\n"
          "    against the declared reference, asked at cw7.toml:3:3\n"
          "    figure   measured    limit  margin\n"
          "    snr     identical  ≥ 60 dB    none\n");
}

TEST_CASE("rule: what a decision took, and what a fixed length would have", "[report]") {
    RuleVerdict verdict = sample::error_passed(3);
    verdict.evidence = Evidence{65536, 1000000, 230000.0};
    CHECK(rule_block(verdict, signal_at_1200_hz(), {})
              .find("    decided after 65,536 of 1,000,000 samples; for a gain on its "
                    "limit a test of\n    fixed length needs 230,000\n") != std::string::npos);
    verdict.verdict = Verdict::undecided;
    verdict.evidence->fixed_length_samples = 3e20;
    CHECK(rule_block(verdict, signal_at_1200_hz(), {})
              .find("    undecided after 65,536 of 1,000,000 samples; for a gain on its "
                    "limit a test\n    of fixed length needs 3e+20\n") != std::string::npos);
}

TEST_CASE("rule: how sure a figure is stands behind its number", "[report]") {
    RuleVerdict verdict = sample::error_passed(3);
    verdict.verdict = Verdict::undecided;
    verdict.figures = {sample::figure("sinad", 61.5, 60.0, "dB", true), sample::figure("thd", -70.0, -72.0, "dB")};
    verdict.figures[0].uncertainty = 0.1234;
    verdict.figures[1].uncertainty = 2.0;
    verdict.figures[1].verdict = Verdict::undecided;
    CHECK(rule_brief(verdict) == "thd -70 dB of -72");
    CHECK(rule_block(verdict, signal_at_1200_hz(), {}) ==
          "  error: undecided\n"
          "    against the declared reference, asked at cw7.toml:3:3\n"
          "    figure        measured     limit  margin\n"
          "    sinad   61.5 ± 0.12 dB   ≥ 60 dB  1.5 dB\n"
          "    thd         -70 ± 2 dB  ≤ -72 dB   -2 dB  undecided\n");
    CHECK(rule_block(verdict, signal_at_1200_hz(), {false, 80, false}).find("61.5 +- 0.12 dB") != std::string::npos);
}

TEST_CASE("rule: a latency that is off shows both numbers", "[report]") {
    RuleVerdict verdict = sample::latency_passed(9);
    verdict.verdict = Verdict::fail;
    verdict.figures = {sample::figure("latency", 1, 0, "samples")};
    CHECK(rule_brief(verdict) == "latency 1 sample of 0");
    CHECK(rule_block(verdict, signal_at_1200_hz(), {}) ==
          "  latency: fail\n"
          "    against the declared reference, asked of every case\n"
          "    figure   measured        limit     margin\n"
          "    latency  1 sample  = 0 samples  -1 sample  fail\n");
}

TEST_CASE("rule: a short note stands in the row, a long one below the table", "[report]") {
    RuleVerdict verdict = response_verdict(2);
    verdict.figures[0].note = "at 50 Hz";
    verdict.figures[1].value.reset();
    verdict.figures[1].margin.reset();
    verdict.figures[1].note = "the stimulus has no power in this band at all";
    CHECK(rule_block(verdict, signal_at_1200_hz(), {}) ==
          "  response: pass\n"
          "    against the design reference, asked at cw7.toml:40:1\n"
          "    figure   measured     limit  margin\n"
          "    gain 0       0 dB  ≤ 0.5 dB  0.5 dB  at 50 Hz\n"
          "    gain 1  see below  ≤ 0.5 dB    none\n"
          "    gain 1: the stimulus has no power in this band at all\n");
}

TEST_CASE("rule: of many figures the worst are shown and the rest counted", "[report]") {
    RuleVerdict verdict = response_verdict(40);
    verdict.figures[39].verdict = Verdict::fail;
    const std::string block = rule_block(verdict, signal_at_1200_hz(), {});
    INFO(block);
    CHECK(block.find("    gain 39    -39 dB  ≤ 0.5 dB  39.5 dB  fail\n") != std::string::npos);
    CHECK(block.find("gain 10") != std::string::npos);
    CHECK(block.find("gain 11") == std::string::npos);
    CHECK(block.find("    and 28 figures with more room, in run.json\n") != std::string::npos);
}

TEST_CASE("rule: times of neighbours differ at any rate", "[report]") {
    Neighbourhood around;
    around.index = 1;
    around.first_index = 0;
    around.stimulus = around.response = {0, 0};
    around.reference = {0.0, -0.5};
    Signal signal = signal_at_1200_hz();
    signal.rate_hz = 192000.0;
    CHECK(neighbour_table(around, signal, {}, 0) ==
          "index  time ms  stimulus  response  reference  error\n"
          "    0   0.0000         0         0      0.000  0.000\n"
          "  > 1   0.0052         0         0     -0.500  0.500\n");
    signal.rate_hz = 0.5;
    CHECK(neighbour_table(around, signal, {}, 0).find("  > 1   2000.0 ") != std::string::npos);
}
