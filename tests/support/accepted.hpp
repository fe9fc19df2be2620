// Baselines for tests, made in memory: what `halflsb accept` would keep of a response, with a hash of its own.
#pragma once

#include <algorithm>
#include <cstdint>
#include <memory>
#include <span>
#include <string>
#include <vector>

#include "oracle/rules/accepted_response.hpp"
#include "oracle/judge/plan.hpp"

namespace halflsb::test {

/// FNV-1a of 64 bits over the bytes of the codes (Fowler, Noll, Vo; constants as published).
class FnvDigest final : public CodeDigest {
public:
    void add(const SampleFormat&, std::span<const Code> codes) override {
        for (const Code code : codes) {
            for (unsigned shift = 0; shift < 32; shift += 8) {
                hash_ ^= static_cast<std::uint32_t>(code) >> shift & 0xffU;
                hash_ *= 0x100000001b3U;
            }
        }
    }
    std::string value() override { return std::to_string(hash_); }

private:
    std::uint64_t hash_ = 0xcbf29ce484222325U;
};

inline std::string fnv_of(const SampleFormat& format, std::span<const Code> codes) {
    FnvDigest digest;
    digest.add(format, codes);
    return digest.value();
}

/// `kept` instants, and hashes of stretches of `block` instants (0: none).
inline AcceptedResponse accepted(const Plan& plan, const Case& the_case, const std::vector<Code>& response,
                                 std::size_t kept, std::size_t block = 0) {
    const auto channels = static_cast<std::size_t>(plan.signal.channels);
    AcceptedResponse made;
    made.origin = "baseline/cw7, accepted 2026-12-01T09:30:00Z";
    std::vector<Code> sent(static_cast<std::size_t>(the_case.stimulus->length_samples()) * channels);
    fill_case_codes(plan, the_case, 0, sent);
    made.stimulus_sha256 = fnv_of(plan.signal.input, sent);
    made.response_sha256 = fnv_of(plan.signal.output, response);
    made.samples = static_cast<std::int64_t>(response.size() / channels);
    made.kept.assign(response.begin(), response.begin() + static_cast<std::ptrdiff_t>(kept * channels));
    made.block_samples = static_cast<std::int64_t>(block);
    for (std::size_t at = 0; block > 0 && at < response.size(); at += block * channels) {
        made.block_sha256.push_back(fnv_of(
            plan.signal.output, std::span(response).subspan(at, std::min(block * channels, response.size() - at))));
    }
    made.make_digest = [] { return std::make_unique<FnvDigest>(); };
    return made;
}

inline Rule unchanged_rule(AcceptedResponse kept, std::optional<double> max_lsb = std::nullopt) {
    UnchangedRule rule;
    rule.baseline = "baseline/cw7";
    if (max_lsb) rule.largest = Limit{*max_lsb, Limit::In::lsb};
    rule.accepted = std::make_shared<const AcceptedResponse>(std::move(kept));
    return {rule, {"plan.toml", 30, 1}};
}

}  // namespace halflsb::test
