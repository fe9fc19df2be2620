// What the baseline of a rule `unchanged` can be refused for.
#include <string>
#include <vector>

#include "runner/world/sha256.hpp"
#include "stimuli/npy.hpp"
#include "tests/diagnostics/plan_page.hpp"

namespace halflsb::diagnostics {

namespace {

const std::vector<Code> response = {0, 4096, 12288, 16384, 16384, 16384};

std::string hash_of(const std::vector<Code>& codes) {
    const auto digest = make_code_digest();
    digest->add(*sample_format("q15"), codes);
    return digest->value();
}

std::string npy_of(const std::vector<Code>& codes) {
    const auto header = npy_header(NpyType::int16, static_cast<std::int64_t>(codes.size()));
    std::vector<std::byte> data(2 * codes.size());
    to_npy_bytes(*sample_format("q15"), codes, data);
    return std::string(reinterpret_cast<const char*>(header.data()), header.size()) +
           std::string(reinterpret_cast<const char*>(data.data()), data.size());
}

std::string baseline_text() {
    return "title = \"CW-7\"\naccepted_utc = \"2026-12-01T09:30:00Z\"\ntool_version = \"0.1.0\"\nboard_serial = \"\"\n"
           "build_id = \"\"\nplan_sha256 = \"\"\noutput = \"q15\"\nchannels = 1\n\n[[case]]\nname = \"belt noise\"\n"
           "samples = 6\nstimulus_sha256 = \"" +
           hash_of(std::vector<Code>(6, 16384)) + "\"\nresponse_sha256 = \"" + hash_of(response) +
           "\"\nkept = \"001-belt-noise.npy\"\nkept_samples = 6\nblock_samples = 0\nblock_sha256 = []\n";
}

Parts held() {
    Parts parts;
    parts.stimulus = "shape = \"step\"\nlength_samples = 6\n";
    parts.after = "[[case.rule]]\nkind = \"unchanged\"\n";
    return parts;
}

FakeFiles files_with(const std::string& toml, const std::string& npy = npy_of(response)) {
    FakeFiles files;
    files.contents["./baseline/baseline.toml"] = toml;
    files.contents["./baseline/001-belt-noise.npy"] = npy;
    return files;
}

}  // namespace

void baseline_chapter(Page& page) {
    page.chapter("Baselines");
    const std::string good = baseline_text();
    const std::vector<Change> changes = {
        {"a key that is none", "title =", "titel ="},
        {"no build-id", "build_id = \"\"\n", ""},
        {"a version that is a number", "tool_version = \"0.1.0\"", "tool_version = 1"},
        {"a hash that is none", "response_sha256 = \"", "response_sha256 = \"x"},
        {"a file in another folder", "kept = \"", "kept = \"../"},
        {"no hashes of stretches", "block_sha256 = []\n", ""},
        {"a hash of a stretch that is none", "block_sha256 = []", "block_sha256 = [\"x\"]"},
        {"more samples kept than there are", "kept_samples = 6", "kept_samples = 7"},
        {"samples that are neither kept nor hashed", "kept_samples = 6", "kept_samples = 5"},
        {"too few hashes", "block_samples = 0", "block_samples = 4"},
        {"another format", "output = \"q15\"", "output = \"i16\""},
        {"another count of channels", "channels = 1", "channels = 2"},
        {"another length", "samples = 6\nstimulus", "samples = 7\nstimulus"},
    };
    for (const Change& change : changes) {
        std::string text = spoilt(good, change.from, change.to);
        // A length that the kept samples do not reach needs hashes of the rest.
        if (change.done == "another length") {
            text = spoilt(text, "block_samples = 0", "block_samples = 7");
            text = spoilt(text, "block_sha256 = []", "block_sha256 = [\"" + hash_of(response) + "\"]");
        }
        show_plan(page, change.done, held().text(), files_with(text));
    }
    Parts other = held();
    other.stimulus += "level_ratio = 0.25\n";
    show_plan(page, "another stimulus", other.text(), files_with(good));
    show_plan(page, "a case twice", held().text(), files_with(good + good.substr(good.find("[[case]]"))));
    show_plan(page, "not TOML", held().text(), files_with("[[case]\n"));
    FakeFiles files = files_with(good);
    files.contents.erase("./baseline/001-belt-noise.npy");
    show_plan(page, "no kept samples", held().text(), files);
    show_plan(page, "kept samples that are no NPY", held().text(), files_with(good, "1\n2\n"));
    show_plan(page, "kept samples of another count", held().text(), files_with(good, npy_of({0, 4096})));
    show_plan(page, "kept samples that are cut", held().text(),
              files_with(good, npy_of(response).substr(0, npy_of(response).size() - 1)));
    show_plan(page, "kept samples that were edited", held().text(),
              files_with(good, npy_of({0, 4096, 12288, 16384, 16384, 16385})));
    Parts outside = held();
    outside.after += "baseline = \"../baseline\"\n";
    show_plan(page, "a baseline outside the root", outside.text());
    std::string partly = spoilt(good, "kept_samples = 6", "kept_samples = 4");
    partly = spoilt(partly, "block_samples = 0", "block_samples = 4");
    partly = spoilt(partly, "block_sha256 = []",
                    "block_sha256 = [\"" + hash_of({response.begin(), response.begin() + 4}) + "\", \"" +
                        hash_of({response.begin() + 4, response.end()}) + "\"]");
    Parts within = held();
    within.after += "max_lsb = 1\n";
    show_plan(page, "a largest difference where only some samples are kept", within.text(),
              files_with(partly, npy_of({0, 4096, 12288, 16384})));
}

}  // namespace halflsb::diagnostics
