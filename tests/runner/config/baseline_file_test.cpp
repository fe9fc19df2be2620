// The rule `unchanged` finds its baseline, and is told what is wrong with it.
#include "runner/world/sha256.hpp"
#include "stimuli/npy.hpp"
#include "tests/support/config_texts.hpp"

using namespace halflsb;

namespace {

/// good_plan with a case of 6 samples that is held to its baseline; the rule stands in line 37.
std::string plan_text(const std::string& rule = "") {
    return good_plan + "\n[[case]]\nname = \"short\"\nstimulus = { shape = \"step\", length_samples = 6 }\n" +
           "[[case.rule]]\nkind = \"unchanged\"\n" + rule;
}

const std::vector<Code> response = {0, 4096, 12288, 16384, 16384, 16384};

std::string hash_of(const std::vector<Code>& codes) {
    const auto digest = make_code_digest();
    digest->add(*sample_format("q15"), codes);
    return digest->value();
}

/// A step of half of full scale from the first sample on.
std::string stimulus_hash() { return hash_of(std::vector<Code>(6, 16384)); }

std::string npy_of(const std::vector<Code>& codes, NpyType type = NpyType::int16) {
    const auto header = npy_header(type, static_cast<std::int64_t>(codes.size()));
    std::vector<std::byte> data(codes.size() * bytes_of(type));
    to_npy_bytes(*sample_format(type == NpyType::int16 ? "q15" : "q31"), codes, data);
    return std::string(reinterpret_cast<const char*>(header.data()), header.size()) +
           std::string(reinterpret_cast<const char*>(data.data()), data.size());
}

std::string baseline_text() {
    return "title = \"CW-7\"\naccepted_utc = \"2026-12-01T09:30:00Z\"\ntool_version = \"0.1.0\"\nboard_serial = \"\"\n"
           "build_id = \"\"\nplan_sha256 = \"\"\noutput = \"q15\"\nchannels = 1\n\n[[case]]\nname = \"short\"\n"
           "samples = 6\nstimulus_sha256 = \"" +
           stimulus_hash() + "\"\nresponse_sha256 = \"" + hash_of(response) +
           "\"\nkept = \"001-short.npy\"\nkept_samples = 6\nblock_samples = 0\nblock_sha256 = []\n";
}

/// Only the first 4 samples are kept, stretches of 4 are hashed.
std::string long_baseline_text() {
    std::string text = with(baseline_text(), "kept_samples = 6", "kept_samples = 4");
    text = with(text, "block_samples = 0", "block_samples = 4");
    return with(text, "block_sha256 = []",
                "block_sha256 = [\"" + hash_of({response.begin(), response.begin() + 4}) + "\", \"" +
                    hash_of({response.begin() + 4, response.end()}) + "\"]");
}

FakeFiles files_with(const std::string& toml, const std::string& npy, const std::string& folder = "baseline") {
    FakeFiles files;
    files.contents["./" + folder + "/baseline.toml"] = toml;
    files.contents["./" + folder + "/001-short.npy"] = npy;
    return files;
}

const UnchangedRule& unchanged_of(const Plan& plan) {
    return std::get<UnchangedRule>(plan.cases.back().rules.front().kind);
}

std::string at_rule(const std::string& problem, const std::string& remedy) {
    return "plan.toml:37:1: " + problem + "\n    [[case.rule]]\n    ^\n  " + remedy + "\n";
}

constexpr const char* damaged =
    "take the baseline as it was committed, or remove its folder and accept a good run anew";
constexpr const char* take_back =
    "take the change back, or remove this case from baseline/baseline.toml, check again and accept that run";
constexpr const char* take_all_back = "take the change back, or remove baseline/, check again and accept that run";

}  // namespace

TEST_CASE("baseline: what was accepted of the case is found", "[config]") {
    const Plan plan = plan_of(plan_text(), files_with(baseline_text(), npy_of(response)));
    const UnchangedRule& rule = unchanged_of(plan);
    REQUIRE(rule.accepted != nullptr);
    CHECK(rule.missing.empty());
    CHECK(rule.accepted->origin == "baseline, accepted 2026-12-01T09:30:00Z");
    CHECK(rule.accepted->stimulus_sha256 == stimulus_hash());
    CHECK(rule.accepted->response_sha256 == hash_of(response));
    CHECK(rule.accepted->samples == 6);
    CHECK(rule.accepted->kept == response);
    CHECK(rule.accepted->block_samples == 0);
    const auto digest = rule.accepted->make_digest();
    digest->add(plan.signal.output, response);
    CHECK(digest->value() == rule.accepted->response_sha256);
}

TEST_CASE("baseline: a long case keeps its first samples, and a hash of each stretch", "[config]") {
    const std::vector<Code> kept(response.begin(), response.begin() + 4);
    const Plan plan =
        plan_of(plan_text("baseline = \"kept/cw7\"\n"), files_with(long_baseline_text(), npy_of(kept), "kept/cw7"));
    REQUIRE(unchanged_of(plan).accepted != nullptr);
    CHECK(unchanged_of(plan).accepted->kept == kept);
    CHECK(unchanged_of(plan).accepted->block_samples == 4);
    CHECK(unchanged_of(plan).accepted->block_sha256.size() == 2);
    CHECK(unchanged_of(plan).accepted->origin == "kept/cw7, accepted 2026-12-01T09:30:00Z");
}

TEST_CASE("baseline: none yet, or none of this case, leaves the rule undecided with the reason", "[config]") {
    const Plan none = plan_of(plan_text());
    CHECK(unchanged_of(none).accepted == nullptr);
    CHECK(unchanged_of(none).missing == "no baseline yet at baseline/: accept a good run with halflsb accept RUN");
    const Plan other = plan_of(
        plan_text(), files_with(with(baseline_text(), "name = \"short\"", "name = \"shirt\""), npy_of(response)));
    CHECK(unchanged_of(other).accepted == nullptr);
    CHECK(unchanged_of(other).missing ==
          "the baseline at baseline/ has no case \"short\": accept a good run with halflsb accept RUN");
}

TEST_CASE("baseline: one of another stimulus, length, format or count of channels is refused", "[config]") {
    const auto refusal = [](const std::string& from, const std::string& to) {
        return plan_problems(plan_text(), files_with(with(baseline_text(), from, to), npy_of(response)));
    };
    const std::string otherwise = "the baseline at baseline/ accepted case \"short\" otherwise: ";
    CHECK(refusal(stimulus_hash(), std::string(64, 'a')) ==
          at_rule(otherwise + "its stimulus was another one", take_back));
    CHECK(refusal("output = \"q15\"", "output = \"q31\"") ==
          at_rule(otherwise + "its output was q31, now q15", take_all_back));
    CHECK(refusal("channels = 1", "channels = 2") == at_rule(otherwise + "its channels were 2, now 1", take_all_back));
    const std::vector<Code> kept(response.begin(), response.begin() + 4);
    CHECK(plan_problems(plan_text(),
                        files_with(with(long_baseline_text(), "samples = 6", "samples = 7"), npy_of(kept))) ==
          at_rule(otherwise + "its samples were 7, now 6", take_back));
    // A later step is another stimulus.
    CHECK(plan_problems(with(plan_text(), "stimulus = { shape = \"step\", length_samples = 6 }",
                             "stimulus = { shape = \"step\", length_samples = 6, at_samples = 1 }"),
                        files_with(baseline_text(), npy_of(response))) ==
          at_rule(otherwise + "its stimulus was another one", take_back));
}

TEST_CASE("baseline: kept samples that are missing, cut, of another type or changed are refused", "[config]") {
    const std::string kept = "\"baseline/001-short.npy\" of case \"short\": ";
    FakeFiles files = files_with(baseline_text(), "");
    files.contents.erase("./baseline/001-short.npy");
    CHECK(plan_problems(plan_text(), files) == at_rule(kept + "there is no such file", damaged));
    const auto refusal = [](const std::string& npy) {
        return plan_problems(plan_text(), files_with(baseline_text(), npy));
    };
    CHECK(refusal(npy_of(response).substr(0, 139)) ==
          at_rule(kept + "it holds 11 bytes of samples, not what its header says", damaged));
    CHECK(refusal(npy_of(response) + "xx") ==
          at_rule(kept + "it holds 14 bytes of samples, not what its header says", damaged));
    CHECK(refusal(npy_of({response.begin(), response.begin() + 5})) ==
          at_rule(kept + "it holds 5 x 1 of <i2, wanted 6 x 1 of <i2", damaged));
    CHECK(refusal(npy_of(response, NpyType::int32)) ==
          at_rule(kept + "it holds 6 x 1 of <i4, wanted 6 x 1 of <i2", damaged));
    std::vector<Code> edited = response;
    edited[3] += 1;
    CHECK(refusal(npy_of(edited)) ==
          at_rule(kept + "its samples are not those whose SHA-256 baseline.toml states", damaged));
    // The same within a hashed stretch of a long case.
    const std::vector<Code> edited_start(edited.begin(), edited.begin() + 4);
    CHECK(plan_problems(plan_text(), files_with(long_baseline_text(), npy_of(edited_start))) ==
          at_rule(kept + "its samples are not those whose SHA-256 baseline.toml states", damaged));
}

TEST_CASE("baseline: max_lsb needs every sample", "[config]") {
    const std::vector<Code> kept(response.begin(), response.begin() + 4);
    CHECK(plan_problems(plan_text("max_lsb = 1\n"), files_with(long_baseline_text(), npy_of(kept))) ==
          at_rule("max_lsb needs every sample of case \"short\", the baseline at baseline/ kept 4 of 6",
                  "leave max_lsb out: the whole response is then compared bit for bit; or accept the run again with "
                  "--samples 6"));
    CHECK(plan_problems(plan_text("max_lsb = 0\n"), files_with(long_baseline_text(), npy_of(kept))).empty());
    CHECK(plan_problems(plan_text("max_lsb = 1\n"), files_with(baseline_text(), npy_of(response))).empty());
}

TEST_CASE("baseline: a path out of the root is refused, whether there is something or not", "[config]") {
    CHECK(plan_problems(plan_text("baseline = \"../other\"\n")) ==
          at_rule("baseline = \"../other\": it lies outside the root .",
                  "move the file under the root, or give another --root"));
    CHECK(plan_problems(plan_text("baseline = \"/etc\"\n")) ==
          at_rule("baseline = \"/etc\": it lies outside the root .",
                  "move the file under the root, or give another --root"));
}

TEST_CASE("baseline: baseline.toml is read as strictly as a plan", "[config]") {
    const auto refusal = [](const std::string& from, const std::string& to) {
        return plan_problems(plan_text(), files_with(with(baseline_text(), from, to), npy_of(response)));
    };
    const auto told = [](int line, const std::string& shown, int column, const std::string& problem,
                         const std::string& remedy) {
        return "./baseline/baseline.toml:" + std::to_string(line) + ":" + std::to_string(column) + ": " + problem +
               "\n    " + shown + "\n    " + std::string(static_cast<std::size_t>(column) - 1, ' ') + "^\n  " + remedy +
               "\n";
    };
    CHECK(refusal("channels = 1", "chanels = 1") ==
          told(1, "title = \"CW-7\"", 1, "the file has no channels", "add channels: channels of the signal") +
              told(8, "chanels = 1", 1, "unknown key \"chanels\" in the file", "did you mean channels?"));
    CHECK(refusal("tool_version = \"0.1.0\"\n", "") ==
          told(1, "title = \"CW-7\"", 1, "the file has no tool_version", damaged));
    CHECK(refusal("build_id = \"\"", "build_id = 7") ==
          told(5, "build_id = 7", 12, "build_id is a whole number, wanted a string", damaged));
    CHECK(refusal("output = \"q15\"", "output = \"q99\"").find("output = \"q99\" is not known") != std::string::npos);
    CHECK(refusal(stimulus_hash(), "ABC") ==
          told(13, "stimulus_sha256 = \"ABC\"", 19, "stimulus_sha256 = \"ABC\" is no SHA-256", damaged));
    CHECK(refusal("kept = \"001-short.npy\"", "kept = \"../001-short.npy\"") ==
          told(15, "kept = \"../001-short.npy\"", 8, "kept = \"../001-short.npy\" is not in the baseline's folder",
               damaged));
    CHECK(refusal("kept_samples = 6", "kept_samples = 7") ==
          told(16, "kept_samples = 7", 16, "kept_samples = 7 is more than samples = 6", damaged));
    CHECK(refusal("kept_samples = 6", "kept_samples = 5") ==
          told(17, "block_samples = 0", 17, "block_samples is 0, but only 5 of 6 samples are kept", damaged));
    CHECK(refusal("block_samples = 0", "block_samples = 4") ==
          told(18, "block_sha256 = []", 16, "block_sha256 has 0 hashes, 6 samples in stretches of 4 make 2", damaged));
    CHECK(refusal("block_sha256 = []", "block_sha256 = [\"x\"]") ==
          told(18, "block_sha256 = [\"x\"]", 17, "in block_sha256 stands something that is no SHA-256", damaged));
    CHECK(refusal("block_sha256 = []\n", "") == told(10, "[[case]]", 1, "[[case]] has no list block_sha256", damaged));
    CHECK(plan_problems(plan_text(), files_with("title = ", "")).find("./baseline/baseline.toml:1:") == 0);
    CHECK(plan_problems(plan_text(),
                        files_with(baseline_text() + baseline_text().substr(baseline_text().find("[[case]]")),
                                   npy_of(response))) ==
          told(19, "[[case]]", 1, "two cases are called \"short\"", damaged));
}
