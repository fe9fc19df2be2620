// What is sent once more, so that a case can be held against its companion: two captures of one run, and no oracle.
#pragma once

#include <cstdint>
#include <string>
#include <vector>

namespace halflsb {

/// Codes counted from that of silence, times a gain, later by a delay.
struct CompanionTerm {
    std::int64_t gain = 1;
    std::int64_t delay_samples = 0;  ///< of what is sent
    bool operator==(const CompanionTerm&) const = default;
};

/// A companion sends  sum_i gain_i x[n - delay_i]  of the codes x that its base sends, and is to return
/// sum_i gain_i r[n - delay_i]  of what came back for the base, r.
struct Companion {
    std::string base;  ///< name of that case
    std::vector<CompanionTerm> terms;
    std::int64_t block_samples = 0;  ///< most samples sent together; 0: as many as the wire takes
    std::string name;                ///< behind the base's: "shift 5"
    std::string text;                ///< for people: "5 samples later"
    bool operator==(const Companion&) const = default;

    /// What is known of the answer ends as early as the base's would: the shortest delay.
    std::int64_t shortest_delay_samples() const {
        std::int64_t shortest = terms.empty() ? 0 : terms.front().delay_samples;
        for (const CompanionTerm& term : terms) shortest = term.delay_samples < shortest ? term.delay_samples : shortest;
        return shortest;
    }
    std::int64_t longest_delay_samples() const {
        std::int64_t longest = 0;
        for (const CompanionTerm& term : terms) longest = term.delay_samples > longest ? term.delay_samples : longest;
        return longest;
    }
    std::int64_t sum_of_gains() const {
        std::int64_t sum = 0;
        for (const CompanionTerm& term : terms) sum += term.gain < 0 ? -term.gain : term.gain;
        return sum;
    }
};

}  // namespace halflsb
