#include "rigs/virtual-board/fault_catalogue.hpp"

#include <algorithm>
#include <cctype>
#include <charconv>
#include <numeric>
#include <utility>

namespace halflsb::board {

namespace {

using F = Faults&;
using N = std::uint64_t;
using Ms = std::uint32_t;

template <DroppedBits rounding>
void round_by(F faults, N, Ms) {
    faults.deviation.rounding = rounding;
}

template <PassageFault fault>
void pass_by(F faults, N, Ms) {
    faults.passage.push_back(fault);
}

const std::vector<FaultEntry> entries = {
    {"A01", "truncation", "", "dropped bits are floored, not rounded", Shows::sum_or_product,
     round_by<DroppedBits::floor>},
    {"A02", "toward-zero", "", "dropped bits are cut toward zero, as C's division does", Shows::sum_or_product,
     round_by<DroppedBits::toward_zero>},
    {"A03", "half-away", "", "ties round away from zero, not upward", Shows::tie, round_by<DroppedBits::half_away>},
    {"A04", "products-truncated", "", "each product loses its low bits before the sum", Shows::product,
     [](F faults, N, Ms) { faults.deviation.products_truncated = true; }},
    {"A05", "rounding-twice", "", "the rounding constant is added twice", Shows::sum_or_product,
     round_by<DroppedBits::constant_twice>},
    {"A07", "wrap", "", "the output wraps instead of saturating", Shows::product,
     [](F faults, N, Ms) { faults.deviation.output_wraps = true; }},
    {"A08", "feedback-before-saturation", "", "the feedback takes the output before saturation", Shows::biquad,
     [](F faults, N, Ms) { faults.deviation.feedback_unsaturated = true; }},
    {"A10", "narrow-accumulator", "", "the running sum is as wide as a sample, and wraps", Shows::fixed_average,
     [](F faults, N, Ms) { faults.deviation.narrow_sum = true; }},
    {"C03", "coefficients-truncated", "", "coefficients are cast to integers, not rounded", Shows::quantised_table,
     [](F faults, N, Ms) { faults.tables.truncated = true; }},
    {"C05", "shift-off-by-one", "", "one bit too many is dropped", Shows::sum_or_product,
     [](F faults, N, Ms) { faults.deviation.shift_more = 1; }},
    {"C07", "a1-sign", "", "a1 has the sign of the design program", Shows::feedback,
     [](F faults, N, Ms) { faults.tables.a1_flipped = true; }},
    {"C10", "reversed-taps", "", "taps stand in the wrong order of time", Shows::asymmetric_fir,
     [](F faults, N, Ms) { faults.tables.reversed = true; }},
    {"S01", "one-sample-late", "", "the output of the previous call", Shows::any_filter,
     pass_by<PassageFault::one_sample_late>},
    {"S02", "window-15", "", "the window is one sample short, the divisor is not", Shows::fixed_average,
     [](F faults, N, Ms) { faults.deviation.points_less = 1; }},
    {"S06", "half-reset", "", "a reset clears the first half of the state", Shows::steady_rate,
     pass_by<PassageFault::reset_clears_half>},
    {"S07", "no-reset", "", "a reset does nothing", Shows::steady_rate, pass_by<PassageFault::never_reset>},
    {"S11", "state-lost", "", "the state is lost at each block boundary", Shows::steady_rate,
     pass_by<PassageFault::lost_at_block_boundary>},
    {"S15", "shared-state", "", "both channels pass one filter and share its state", Shows::two_like_channels,
     [](F faults, N, Ms) { faults.channels.shared_state = true; }},
    {"S16", "crosstalk", "", "a 128th of channel 1's input (-42 dB) is added to channel 2's output",
     Shows::two_channels, [](F faults, N, Ms) { faults.channels.crosstalk = true; }},
    {"channels-swapped", "", "", "each channel's filter gets the other channel's samples", Shows::two_channels,
     [](F faults, N, Ms) { faults.channels.swapped = true; }},
    {"S20", "bypass", "", "the output is the input", Shows::steady_rate, pass_by<PassageFault::bypass>},
    {"N01", "offset-kept", "", "the mid-code is not subtracted from the input", Shows::offset_binary,
     [](F faults, N, Ms) { faults.deviation.offset_kept = true; }},
    {"N02", "offset-missing", "", "the mid-code is not added to the output, which stays signed", Shows::offset_binary,
     [](F faults, N, Ms) { faults.deviation.offset_missing = true; }},
    {"N04", "byte-swap", "", "the bytes of each input sample are swapped", Shows::several_bytes,
     pass_by<PassageFault::bytes_swapped>},
    {"N06", "polarity", "", "the input is inverted", Shows::any_filter, pass_by<PassageFault::polarity_inverted>},
    {"wrong-justification", "", "", "output words are left-justified instead of right, or the other way",
     Shows::spare_bits, [](F faults, N, Ms) { faults.wrong_justification = true; }},
    {"settings-ignored", "", "", "a setting is taken and has no effect", Shows::setting,
     [](F faults, N, Ms) { faults.settings_ignored = true; }},
    {"D01", "half-buffer-repeated", "", "each 10th half-buffer of 32 input samples is its predecessor",
     Shows::any_filter, pass_by<PassageFault::half_buffer_repeated>},
    {"D03", "sample-dropped", "", "each 1000th input sample is lost, the output held", Shows::any_filter,
     pass_by<PassageFault::sample_dropped>},
    {"D04", "sample-duplicated", "", "each 1000th input sample is filtered twice", Shows::any_filter,
     pass_by<PassageFault::sample_duplicated>},
    {"held-output", "", "", "the output is held while it moves by less than 4 codes a sample", Shows::whole_numbers,
     pass_by<PassageFault::output_held>},
    {"added-noise", "", "", "noise of -8 to 8 codes is added to the output", Shows::whole_numbers,
     pass_by<PassageFault::noise_added>},
    {"drift", "", "", "the output rises by a code each 1000 samples", Shows::whole_numbers,
     pass_by<PassageFault::output_drifts>},
    {"slow-sample", "", "", "each 1000th sample takes 2 ms longer; the codes are right", Shows::steady_rate,
     pass_by<PassageFault::slow_sample>},
    {"flip-byte", "", "N", "each Nth byte toward the host has a bit flipped", Shows::line,
     [](F faults, N n, Ms) { faults.line.flip_every = n; }},
    {"drop-byte", "", "N", "each Nth byte toward the host is lost", Shows::line,
     [](F faults, N n, Ms) { faults.line.drop_every = n; }},
    {"repeat-byte", "", "N", "each Nth byte toward the host comes twice", Shows::line,
     [](F faults, N n, Ms) { faults.line.repeat_every = n; }},
    {"flip-in", "", "N", "each Nth byte toward the board has a bit flipped", Shows::line,
     [](F faults, N n, Ms) { faults.line.flip_in_every = n; }},
    {"drop-in", "", "N", "each Nth byte toward the board is lost", Shows::line,
     [](F faults, N n, Ms) { faults.line.drop_in_every = n; }},
    {"stall", "", "N:MS", "after each N bytes toward the host the line stands still for MS milliseconds", Shows::line,
     [](F faults, N n, Ms ms) {
         faults.line.stall_every = n;
         faults.line.stall_ms = ms;
     }},
    {"garbage", "", "", "a boot message at power-up and before the first answer", Shows::line,
     [](F faults, N, Ms) { faults.line.garbage = true; }},
    {"silent", "", "", "never answers", Shows::line, [](F faults, N, Ms) { faults.line.silent = true; }},
    {"first-stream-silent", "", "", "greets and starts, but never answers the first stream", Shows::line,
     [](F faults, N, Ms) { faults.line.first_stream_silent = true; }},
    {"echo-only", "", "", "returns each byte as it came", Shows::line,
     [](F faults, N, Ms) { faults.line.echo_only = true; }},
    {"wrong-build-id", "", "", "greets with the build-id of another image", Shows::line,
     [](F faults, N, Ms) { faults.line.wrong_build_id = true; }},
    {"unplug", "", "N", "the device is gone after N blocks", Shows::line,
     [](F faults, N n, Ms) { faults.line.unplug_after = n; }},
    {"restart", "", "N", "starts anew after N blocks, once: the stream is forgotten", Shows::line,
     [](F faults, N n, Ms) { faults.line.restart_after = n; }},
};

std::size_t edits_between(std::string_view a, std::string_view b) {
    std::vector<std::size_t> row(b.size() + 1);
    std::iota(row.begin(), row.end(), std::size_t{0});
    for (std::size_t i = 1; i <= a.size(); ++i) {
        std::size_t diagonal = std::exchange(row[0], i);
        for (std::size_t j = 1; j <= b.size(); ++j) {
            const std::size_t changed = diagonal + (std::tolower(a[i - 1]) != std::tolower(b[j - 1]) ? 1 : 0);
            diagonal = row[j];
            row[j] = std::min({changed, row[j] + 1, row[j - 1] + 1});
        }
    }
    return row.back();
}

const FaultEntry* find_entry(std::string_view name) {
    for (const FaultEntry& entry : entries) {
        if (edits_between(name, entry.id) == 0) return &entry;
        if (!entry.alias.empty() && edits_between(name, entry.alias) == 0) return &entry;
    }
    return nullptr;
}

template <typename Number>
bool read_number(std::string_view text, Number& number) {
    const auto [end, error] = std::from_chars(text.data(), text.data() + text.size(), number);
    return error == std::errc{} && end == text.data() + text.size() && number > 0;
}

std::string filters_showing(const FaultEntry& entry, const std::vector<FilterParts>& filters) {
    std::string names;
    for (const FilterParts& filter : filters) {
        if (!shows_in(entry.shows, filter)) continue;
        if (!names.empty()) names += ", ";
        names += filter.name;
    }
    return names;
}

}  // namespace

bool shows_in(Shows shows, const FilterParts& filter) {
    const FilterKind kind = filter.kind;
    const bool biquad = kind == FilterKind::biquad_q15 || kind == FilterKind::biquad_q31;
    const bool fir = kind == FilterKind::symmetric_fir || kind == FilterKind::asymmetric_fir;
    switch (shows) {
        case Shows::two_channels:
            return filter.channels.size() == 2;
        case Shows::two_like_channels:
            return filter.channels.size() == 2 && filter.channels_alike;
        default:
            break;
    }
    if (!filter.channels.empty()) {
        return std::any_of(filter.channels.begin(), filter.channels.end(),
                           [shows](const FilterParts& channel) { return shows_in(shows, channel); });
    }
    switch (shows) {
        case Shows::steady_rate:
            return kind != FilterKind::rate;
        case Shows::whole_numbers:
            return kind != FilterKind::rate && !is_float(filter.format);
        case Shows::fixed_average:
            return kind == FilterKind::average;
        // 30 bits are dropped from a q31 section: no stimulus of ours meets a tie there.
        case Shows::tie:
            return kind == FilterKind::average || fir || kind == FilterKind::biquad_q15;
        case Shows::sum_or_product:
            return kind == FilterKind::average || fir || biquad;
        case Shows::product:
            return fir || biquad;
        case Shows::quantised_table:
            return fir || biquad;
        case Shows::biquad:
            return biquad;
        case Shows::feedback:
            return biquad || kind == FilterKind::biquad_f32;
        case Shows::asymmetric_fir:
            return kind == FilterKind::asymmetric_fir;
        case Shows::offset_binary:
            return zero_code(filter.format) != 0;
        case Shows::spare_bits:
            return has_spare_bits(filter.format);
        case Shows::several_bytes:
            return word_bytes(filter.format) > 1;
        case Shows::setting:
            return kind == FilterKind::adjustable_average;
        default:
            return true;  // any filter, and the line
    }
}

const std::vector<FaultEntry>& fault_catalogue() { return entries; }

std::string_view nearest(std::string_view word, const std::vector<std::string_view>& words) {
    return *std::min_element(words.begin(), words.end(), [word](std::string_view a, std::string_view b) {
        return edits_between(word, a) < edits_between(word, b);
    });
}

std::string add_fault(std::string_view text, const std::vector<FilterParts>& chosen, Faults& faults) {
    const std::size_t equals = text.find('=');
    const std::string name(text.substr(0, equals));
    const std::string_view argument = equals == std::string_view::npos ? std::string_view{} : text.substr(equals + 1);
    const FaultEntry* entry = find_entry(name);
    if (entry == nullptr) {
        std::vector<std::string_view> known;
        for (const FaultEntry& other : entries) {
            known.push_back(other.id);
            if (!other.alias.empty()) known.push_back(other.alias);
        }
        return "no fault is called \"" + name + "\"; the nearest is \"" + std::string(nearest(name, known)) + "\"";
    }
    const std::string as_needed = "\"" + std::string(entry->id) + "\" is written " + std::string(entry->id) +
                                  (entry->argument.empty() ? "" : "=" + std::string(entry->argument));
    if (entry->argument.empty() != argument.empty()) return as_needed;
    std::uint64_t n = 0;
    std::uint32_t ms = 0;
    if (entry->argument == "N" && !read_number(argument, n)) return as_needed + ", N a whole number above 0";
    if (entry->argument == "N:MS") {
        const std::size_t colon = argument.find(':');
        if (colon == std::string_view::npos || !read_number(argument.substr(0, colon), n) ||
            !read_number(argument.substr(colon + 1), ms)) {
            return as_needed + ", both whole numbers above 0";
        }
    }
    if (std::none_of(chosen.begin(), chosen.end(),
                     [&](const FilterParts& filter) { return shows_in(entry->shows, filter); })) {
        return "none of the chosen filters can show \"" + name + "\": " + std::string(entry->what);
    }
    entry->put(faults, n, ms);
    faults.names.emplace_back(text);
    return "";
}

std::string filter_list(const std::vector<FilterParts>& filters) {
    std::string list;
    std::size_t width = 0;
    for (const FilterParts& filter : filters) width = std::max(width, filter.name.size() + 2);
    for (const FilterParts& filter : filters) {
        std::string name = filter.name, format = text_of(filter.format);
        if (filter.channels.size() > 1) format += ", " + std::to_string(filter.channels.size()) + " channels";
        name.resize(width, ' ');
        format.resize(std::max<std::size_t>(format.size() + 2, 22), ' ');
        list += name + format + filter.what + "\n";
    }
    return list;
}

std::string fault_list(const std::vector<FilterParts>& filters) {
    std::string list;
    for (const FaultEntry& entry : entries) {
        std::string name(entry.id);
        if (!entry.argument.empty()) name += "=" + std::string(entry.argument);
        if (!entry.alias.empty()) name += ", " + std::string(entry.alias);
        name.resize(std::max<std::size_t>(name.size() + 2, 34), ' ');
        list += name + std::string(entry.what);
        if (entry.shows == Shows::any_filter) list += " [any filter]";
        if (entry.shows != Shows::any_filter && entry.shows != Shows::line) {
            list += " [" + filters_showing(entry, filters) + "]";
        }
        list += "\n";
    }
    return list;
}

}  // namespace halflsb::board
