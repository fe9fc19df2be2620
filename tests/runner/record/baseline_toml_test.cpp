#include "runner/record/baseline_toml.hpp"

#include <catch2/catch.hpp>

using namespace halflsb;

TEST_CASE("baseline: the text of its file", "[record]") {
    const std::string a(64, 'a'), b(64, 'b');
    const BaselineContent content{"CW-7",
                                  "2026-12-01T09:30:00Z",
                                  "0.1.0",
                                  "CW7-0003",
                                  "",
                                  a,
                                  "q15",
                                  2,
                                  {{"tare step", 2048, a, b, "001-tare-step.npy", 2048, 0, {}},
                                   {"soak", 100, a, b, "002-soak.npy", 60, 50, {a, b}}}};
    CHECK(baseline_toml(content) ==
          "# Written by halflsb accept; the rule `unchanged` compares with it. docs/release.md tells how it is kept.\n"
          "title = \"CW-7\"\n"
          "accepted_utc = \"2026-12-01T09:30:00Z\"\n"
          "tool_version = \"0.1.0\"\n"
          "board_serial = \"CW7-0003\"\n"
          "build_id = \"\"\n"
          "plan_sha256 = \"" +
              a +
              "\"\n"
              "output = \"q15\"\n"
              "channels = 2\n"
              "\n[[case]]\n"
              "name = \"tare step\"\n"
              "samples = 2048\n"
              "stimulus_sha256 = \"" +
              a +
              "\"\n"
              "response_sha256 = \"" +
              b +
              "\"\n"
              "kept = \"001-tare-step.npy\"\n"
              "kept_samples = 2048\n"
              "block_samples = 0\n"
              "block_sha256 = []\n"
              "\n[[case]]\n"
              "name = \"soak\"\n"
              "samples = 100\n"
              "stimulus_sha256 = \"" +
              a +
              "\"\n"
              "response_sha256 = \"" +
              b +
              "\"\n"
              "kept = \"002-soak.npy\"\n"
              "kept_samples = 60\n"
              "block_samples = 50\n"
              "block_sha256 = [\n    \"" +
              a + "\",\n    \"" + b + "\",\n]\n");
}
