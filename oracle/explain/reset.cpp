#include "oracle/explain/reset.hpp"

#include <algorithm>
#include <cmath>

namespace halflsb {

std::size_t ring_length(const FilterChain& chain) {
    if (chain.size() != 1) return 0;
    const FilterDesign& design = chain.front().design;
    if (const auto* average = std::get_if<MovingAverage>(&design)) return static_cast<std::size_t>(average->points);
    if (const auto* fir = std::get_if<Fir>(&design)) return fir->taps.size();
    if (const auto* median = std::get_if<Median>(&design)) return static_cast<std::size_t>(median->points);
    return 0;
}

namespace {

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

void clear_ring_start(const FilterChain& chain, ResetKind kind, std::size_t cleared, StateBefore& before) {
    const std::size_t ring = ring_length(chain);
    if (ring == 0) return;
    std::vector<std::int64_t>& words = before.words;
    const auto next = static_cast<std::size_t>(before.samples % static_cast<std::int64_t>(ring));
    std::vector<std::int64_t> places = in_places(words, ring, next);
    // The next place to be written holds the oldest sample, which not every state has.
    if (words.size() < ring) places[next] = before.oldest;
    // A second change may have made the ring shorter.
    std::fill_n(places.begin(), std::min(cleared, ring), 0);
    const bool is_anew = kind != ResetKind::ring_start;
    from_places(places, is_anew ? 0 : next, words);
    if (kind == ResetKind::ring_begun_anew && words.size() > ring)
        std::fill(words.begin() + static_cast<std::ptrdiff_t>(ring), words.end(), 0);
}

}  // namespace

std::vector<NamedReset> resets_of(const FilterChain& chain) {
    // A one-pole that is no section keeps one word: it is cleared or it is not.
    const bool is_one_word = chain.size() == 1 && chain.front().kind == "one-pole" &&
                             chain.front().arithmetic.structure != Structure::direct_1;
    if (is_one_word) return {{ResetKind::none, 0, "a reset leaves the state as it was", 5.0}};
    std::vector<NamedReset> resets{
        {ResetKind::none, 0, "a reset leaves the state as it was", 5.0},
        {ResetKind::first_half, 0, "a reset clears only the first half of the state", 6.0},
        {ResetKind::second_half, 0, "a reset clears only the second half of the state", 6.5},
        {ResetKind::all_but_sum, 0, "a reset clears all but the last word of the state, such as a running sum", 6.5}};
    if (ring_length(chain) > 1) {
        resets.push_back({ResetKind::newer_half, 0, "a reset clears only the newer half of the past inputs", 7.0});
        resets.push_back({ResetKind::older_half, 0, "a reset clears only the older half of the past inputs", 7.0});
        resets.push_back(
            {ResetKind::ring_begun_anew, 0, "a reset clears only the first half of the ring and begins it anew", 7.0});
        resets.push_back({ResetKind::ring_start, 0,
                          "a reset clears only the first half of the ring and keeps the place in it", 7.0});
    }
    const std::size_t ring = ring_length(chain);
    constexpr std::size_t longest_ring = 256;
    for (std::size_t places = 1; places < std::min(ring, longest_ring); ++places) {
        const std::string what = "a reset clears only the first " + std::to_string(places) +
                                 (places == 1 ? " place" : " places") +
                                 " of the ring and begins it anew, the rest stays";
        resets.push_back(
            {ResetKind::ring_places, static_cast<int>(places), what, 7.0 + std::log2(static_cast<double>(ring))});
    }
    if (chain.size() == 1 && std::holds_alternative<CicDecimator>(chain.front().design)) {
        resets.push_back({ResetKind::all_but_combs, 0, "a reset clears the integrators, the combs stay", 6.5});
        resets.push_back({ResetKind::all_but_integrators, 0, "a reset clears the combs, the integrators stay", 6.5});
    }
    if (has_sections(chain)) {
        resets.push_back({ResetKind::first_sample, 0,
                          "a start as if the first sample had always been there, in inputs and results alike", 6.0});
        resets.push_back({ResetKind::section_inputs, 0, "a reset clears only the past inputs of each section", 6.5});
        resets.push_back({ResetKind::section_results, 0, "a reset clears only the past results of each section", 6.5});
    }
    return resets;
}

std::vector<std::int64_t> left_by(ResetKind kind, int places, const FilterChain& chain, StateBefore before,
                                  const std::vector<std::int64_t>& cleared) {
    std::vector<std::int64_t>& words = before.words;
    const auto half = words.begin() + static_cast<std::ptrdiff_t>(words.size() / 2);
    // A ring holds the newest sample and those before it; the state has one less where the oldest is spent.
    const std::size_t past = std::min(ring_length(chain), words.size());
    const auto newer = words.begin() + static_cast<std::ptrdiff_t>(std::min(past, (ring_length(chain) + 1) / 2));
    const auto* cic = chain.empty() ? nullptr : std::get_if<CicDecimator>(&chain.back().design);
    const auto integrators = static_cast<std::ptrdiff_t>(cic != nullptr ? cic->order : 0);
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
            clear_ring_start(chain, kind, ring_length(chain) / 2, before);
            break;
        case ResetKind::ring_places:
            clear_ring_start(chain, kind, static_cast<std::size_t>(places), before);
            break;
        case ResetKind::all_but_combs:
        case ResetKind::all_but_integrators: {
            // Integrators, combs, the count to the next output.
            if (cleared.size() != words.size() || std::ssize(words) <= integrators) break;
            const auto end = words.end() - 1;
            *end = cleared.back();
            const auto combs = words.begin() + integrators;
            if (kind == ResetKind::all_but_combs)
                std::fill(words.begin(), combs, 0);
            else
                std::fill(combs, end, 0);
            break;
        }
        case ResetKind::first_sample:
            return cleared;
        case ResetKind::whole:
        case ResetKind::none:
            break;
    }
    return words;
}

}  // namespace halflsb
