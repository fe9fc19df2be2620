#include "oracle/explain/reset.hpp"

#include <algorithm>

namespace halflsb {
namespace {

/// How many past samples the ring of the only stage has; 0: it has none.
std::size_t ring_length(const FilterChain& chain) {
    if (chain.size() != 1) return 0;
    const FilterDesign& design = chain.front().design;
    if (const auto* average = std::get_if<MovingAverage>(&design)) return static_cast<std::size_t>(average->points);
    if (const auto* fir = std::get_if<Fir>(&design)) return fir->taps.size();
    if (const auto* median = std::get_if<Median>(&design)) return static_cast<std::size_t>(median->points);
    return 0;
}

bool has_sections(const FilterChain& chain) {
    return std::all_of(chain.begin(), chain.end(),
                       [](const FilterStage& stage) { return std::holds_alternative<BiquadCascade>(stage.design); });
}

/// Two inputs and two results of each section.
constexpr std::size_t section_words = 4;

void clear_of_sections(std::vector<std::int64_t>& words, std::size_t from) {
    for (std::size_t first = 0; first + section_words <= words.size(); first += section_words) {
        words[first + from] = 0;
        words[first + from + 1] = 0;
    }
}

/// Age 0 is the newest; the place behind it is the next to be written.
std::vector<std::int64_t> in_places(const std::vector<std::int64_t>& words, std::size_t ring, std::size_t next) {
    std::vector<std::int64_t> places(ring, 0);
    for (std::size_t age = 0; age < std::min(ring, words.size()); ++age)
        places[(next + 2 * ring - 1 - age) % ring] = words[age];
    return places;
}

void from_places(const std::vector<std::int64_t>& places, std::size_t next, std::vector<std::int64_t>& words) {
    const std::size_t ring = places.size();
    for (std::size_t age = 0; age < std::min(ring, words.size()); ++age)
        words[age] = places[(next + 2 * ring - 1 - age) % ring];
}

void clear_ring_start(const FilterChain& chain, ResetKind kind, std::vector<std::int64_t>& words,
                      std::int64_t samples) {
    const std::size_t ring = ring_length(chain);
    if (ring == 0) return;
    const auto next = static_cast<std::size_t>(samples % static_cast<std::int64_t>(ring));
    std::vector<std::int64_t> places = in_places(words, ring, next);
    std::fill_n(places.begin(), ring / 2, 0);
    const bool is_anew = kind == ResetKind::ring_begun_anew;
    from_places(places, is_anew ? 0 : next, words);
    if (is_anew && words.size() > ring) std::fill(words.begin() + static_cast<std::ptrdiff_t>(ring), words.end(), 0);
}

}  // namespace

std::vector<NamedReset> resets_of(const FilterChain& chain) {
    std::vector<NamedReset> resets{
        {ResetKind::none, "a reset leaves the state as it was", 5.0},
        {ResetKind::first_half, "a reset clears only the first half of the state", 6.0},
        {ResetKind::second_half, "a reset clears only the second half of the state", 6.5},
        {ResetKind::all_but_sum, "a reset clears all but the last word of the state, such as a running sum", 6.5}};
    if (ring_length(chain) > 1) {
        resets.push_back({ResetKind::newer_half, "a reset clears only the newer half of the past inputs", 7.0});
        resets.push_back({ResetKind::older_half, "a reset clears only the older half of the past inputs", 7.0});
        resets.push_back(
            {ResetKind::ring_begun_anew, "a reset clears only the first half of the ring and begins it anew", 7.0});
        resets.push_back(
            {ResetKind::ring_start, "a reset clears only the first half of the ring and keeps the place in it", 7.0});
    }
    if (has_sections(chain)) {
        resets.push_back({ResetKind::section_inputs, "a reset clears only the past inputs of each section", 6.5});
        resets.push_back({ResetKind::section_results, "a reset clears only the past results of each section", 6.5});
    }
    return resets;
}

std::vector<std::int64_t> left_by(ResetKind kind, const FilterChain& chain, std::vector<std::int64_t> words,
                                  std::int64_t samples) {
    const auto half = words.begin() + static_cast<std::ptrdiff_t>(words.size() / 2);
    // A ring holds the newest sample and those before it; the state has one less where the oldest is spent.
    const std::size_t past = std::min(ring_length(chain), words.size());
    const auto newer = words.begin() + static_cast<std::ptrdiff_t>(std::min(past, (ring_length(chain) + 1) / 2));
    switch (kind) {
        case ResetKind::first_half:
            std::fill(words.begin(), half, 0);
            break;
        case ResetKind::second_half:
            std::fill(half, words.end(), 0);
            break;
        case ResetKind::all_but_sum:
            if (!words.empty()) std::fill(words.begin(), words.end() - 1, 0);
            break;
        case ResetKind::newer_half:
            std::fill(words.begin(), newer, 0);
            break;
        case ResetKind::older_half:
            std::fill(newer, words.begin() + static_cast<std::ptrdiff_t>(past), 0);
            break;
        case ResetKind::section_inputs:
            clear_of_sections(words, 0);
            break;
        case ResetKind::section_results:
            clear_of_sections(words, 2);
            break;
        case ResetKind::ring_begun_anew:
        case ResetKind::ring_start:
            clear_ring_start(chain, kind, words, samples);
            break;
        case ResetKind::whole:
        case ResetKind::none:
            break;
    }
    return words;
}

}  // namespace halflsb
