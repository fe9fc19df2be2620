#include "runner/baseline_samples.hpp"

#include <algorithm>
#include <span>

#include "runner/report/people.hpp"
#include "runner/world/interrupt.hpp"
#include "runner/world/sha256.hpp"
#include "stimuli/npy.hpp"

namespace halflsb {
namespace {

constexpr std::int64_t read_samples = 4096;

/// Calls `take` with the codes of instants `from` .. `to` - 1, in blocks.
template <class Take>
Outcome<void> read_through(CaptureFile& capture, int channels, std::int64_t from, std::int64_t to, Take take) {
    std::vector<Code> codes;
    for (std::int64_t first = from; first < to; first += read_samples) {
        if (interrupted()) return interrupted_error("accept");
        codes.resize(static_cast<std::size_t>(std::min(read_samples, to - first) * channels));
        if (auto read = capture.read(first, codes); !read) return read;
        if (auto taken = take(first, codes); !taken) return taken;
    }
    return {};
}

Outcome<std::string> digest_of(CaptureFile& capture, const Signal& signal, std::int64_t from, std::int64_t to) {
    const auto digest = make_code_digest();
    auto read = read_through(capture, signal.channels, from, to,
                             [&](std::int64_t, std::span<const Code> codes) -> Outcome<void> {
                                 digest->add(signal.output, codes);
                                 return {};
                             });
    if (!read) return read.error();
    return digest->value();
}

Outcome<std::vector<std::string>> block_digests(CaptureFile& capture, const Signal& signal, std::int64_t block) {
    std::vector<std::string> digests;
    for (std::int64_t from = 0; from < capture.samples(); from += block) {
        auto digest = digest_of(capture, signal, from, std::min(from + block, capture.samples()));
        if (!digest) return digest.error();
        digests.push_back(std::move(*digest));
    }
    return digests;
}

}  // namespace

Outcome<BaselineCase> describe_case(CaptureFile& capture, const Plan& plan, const CaseResult& recorded,
                                    std::int64_t kept_samples) {
    BaselineCase made;
    made.name = recorded.name;
    made.samples = capture.samples();
    made.stimulus_sha256 = recorded.stimulus.sha256;
    made.kept_samples = std::min(made.samples, kept_samples);
    auto whole = digest_of(capture, plan.signal, 0, made.samples);
    if (!whole) return whole.error();
    made.response_sha256 = std::move(*whole);
    if (made.kept_samples < made.samples) {
        made.block_samples = (made.samples - 1) / most_baseline_blocks + 1;
        auto blocks = block_digests(capture, plan.signal, made.block_samples);
        if (!blocks) return blocks.error();
        made.block_sha256 = std::move(*blocks);
    }
    return made;
}

Outcome<AcceptedCase> compare_with_before(CaptureFile& capture, const Plan& plan, const BaselineCase& before,
                                          const BaselineCase& now, const std::string& folder, const Files& files) {
    AcceptedCase accepted{AcceptedCase::State::changed, now.name, std::nullopt, {}};
    if (before.stimulus_sha256 != now.stimulus_sha256 || before.samples != now.samples) {
        accepted.difference = "it has another stimulus than before";
        return accepted;
    }
    if (before.response_sha256 == now.response_sha256) {
        accepted.state = AcceptedCase::State::same;
        return accepted;
    }
    const int channels = plan.signal.channels;
    auto kept =
        CaptureFile::open(files, folder + "/" + before.kept, folder + "/" + before.kept, plan.signal.output, channels);
    if (!kept) {
        accepted.difference = "the samples that were kept before cannot be read";
        return accepted;
    }
    std::vector<Code> old;
    auto read = read_through(
        capture, channels, 0, std::min(kept->samples(), now.samples),
        [&](std::int64_t first, std::span<const Code> codes) -> Outcome<void> {
            if (accepted.first_different_samples) return {};
            old.resize(codes.size());
            if (auto got = kept->read(first, old); !got) return got;
            const auto at =
                static_cast<std::size_t>(std::mismatch(codes.begin(), codes.end(), old.begin()).first - codes.begin());
            if (at == codes.size()) return {};
            const auto width = static_cast<std::size_t>(channels);
            accepted.first_different_samples = first + static_cast<std::int64_t>(at / width);
            accepted.difference = "first different sample " + count_text(*accepted.first_different_samples);
            if (channels > 1) accepted.difference += " on channel " + std::to_string(at % width + 1);
            const auto shown = [&](Code code) {
                return plan.signal.output.has_lsb() ? std::to_string(code)
                                                    : rounded_text(value_of(plan.signal.output, code), 9);
            };
            accepted.difference += ", was " + shown(old[at]) + ", is " + shown(codes[at]);
            return {};
        });
    if (!read) return read.error();
    if (accepted.first_different_samples) return accepted;
    accepted.difference = "it differs beyond the " + count_text(kept->samples()) + " samples that were kept";
    if (before.block_samples > 0) {
        auto blocks = block_digests(capture, plan.signal, before.block_samples);
        if (!blocks) return blocks.error();
        const auto common = std::min(blocks->size(), before.block_sha256.size());
        for (std::size_t i = 0; i < common; ++i) {
            if ((*blocks)[i] == before.block_sha256[i]) continue;
            const std::int64_t from = static_cast<std::int64_t>(i) * before.block_samples;
            const std::int64_t last = std::min(from + before.block_samples, now.samples) - 1;
            accepted.difference =
                from == last ? "first different sample " + count_text(from)
                             : "first different sample between " + count_text(from) + " and " + count_text(last);
            break;
        }
    }
    return accepted;
}

bool kept_samples_stand_there(CaptureFile& capture, const Signal& signal, std::int64_t samples, const std::string& path,
                              const Files& files) {
    auto there = CaptureFile::open(files, path, path, signal.output, signal.channels);
    if (!there || there->samples() != samples) return false;
    std::vector<Code> old;
    bool same = true;
    const auto read = read_through(capture, signal.channels, 0, samples,
                                   [&](std::int64_t first, std::span<const Code> codes) -> Outcome<void> {
                                       old.resize(codes.size());
                                       if (auto got = there->read(first, old); !got) return got;
                                       same = same && std::equal(codes.begin(), codes.end(), old.begin());
                                       return {};
                                   });
    return read && same;
}

std::int64_t kept_bytes(const Signal& signal, std::int64_t samples) {
    return static_cast<std::int64_t>(npy_header_bytes) +
           samples * signal.channels * static_cast<std::int64_t>(bytes_of(npy_type_of(signal.output)));
}

Outcome<std::unique_ptr<OutputFile>> write_kept_samples(CaptureFile& capture, const Signal& signal,
                                                        std::int64_t samples, const std::string& path, Files& files) {
    auto file = files.open_output(path);
    if (!file) return file.error();
    const NpyType type = npy_type_of(signal.output);
    if (auto put = (*file)->write(npy_header(type, samples, signal.channels)); !put) return put.error();
    std::vector<std::byte> bytes;
    auto read = read_through(capture, signal.channels, 0, samples,
                             [&](std::int64_t, std::span<const Code> codes) -> Outcome<void> {
                                 bytes.resize(codes.size() * bytes_of(type));
                                 to_npy_bytes(signal.output, codes, bytes);
                                 return (*file)->write(bytes);
                             });
    if (!read) return read.error();
    return file;
}

}  // namespace halflsb
